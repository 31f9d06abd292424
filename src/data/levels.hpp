// The different values of a text column, in an order that does not depend on the order of the rows.
// Knows nothing of what they stand for.
#pragma once

#include <cstddef>
#include <span>
#include <string>
#include <vector>

namespace rivalfold {

struct Levels {
    std::vector<std::string> names;  ///< sorted: by value if every one is a number, else by bytes
    std::vector<int> codes;          ///< per row, an index into names
};

/// Levels of the cells in the given rows (from 0). Where all are numbers, equal numbers are one level ("1" and "1.0"),
/// named by the first of the texts in byte order.
Levels code_levels(const std::vector<std::string>& cells, std::span<const std::size_t> rows);

}  // namespace rivalfold
