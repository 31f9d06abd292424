// Which columns of the file the study's names mean: globs, reversals and categories resolved against one header.
// Knows constructs by their names; sees no cell.
#pragma once

#include "rivalfold/study/study.hpp"

#include <cstddef>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace rivalfold {

struct FoundIndicator {
    std::size_t column = 0;  ///< header position
    bool reversed = false;
    Place place;  ///< of the name or glob that brought it in
};

struct FoundConstruct {
    const Construct* construct = nullptr;
    std::size_t theory = 0;  ///< Measurement::kEveryTheory, or the theory that declares it
    bool used = false;
    bool is_target = false;
    std::vector<FoundIndicator> indicators;
    std::optional<std::size_t> category;  ///< header position
};

struct FoundColumns {
    std::vector<FoundConstruct> constructs;  ///< the study's in file order, then each theory's own
    std::vector<std::size_t> where;          ///< header position of each condition
    std::optional<std::size_t> cluster;
    std::optional<std::size_t> segment;
};

/// Throws FaultError with everything that is wrong with the names: no such column (with the nearest), a glob without a
/// match, a column twice in one construct (by whatever names: a slip, since it would count double), a reversal of a
/// column that is no indicator of its construct, a column of the target that also measures another used construct or
/// makes the segments.
FoundColumns find_columns(const Study& study, const std::vector<std::string>& header);

/// Whether `*` in the pattern, standing for any characters or none, can make it the name.
bool glob_matches(std::string_view pattern, std::string_view name);

/// The data file as messages name it.
const std::string& data_name(const Study& study);

}  // namespace rivalfold
