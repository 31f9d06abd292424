// Which segment of the survey a row lies in: one for each value of a column, or those between the cuts of a numeric
// one. Knows nothing of the contests that are held within them.
#pragma once

#include "rivalfold/study/study.hpp"

#include <cstddef>
#include <span>
#include <string>
#include <vector>

namespace rivalfold {

constexpr std::size_t kMostSegments = 10;
constexpr std::size_t kFewRows = 20;  ///< a segment with fewer is advised on; common practice, no source

struct Segments {
    std::vector<std::string> names;  ///< `kind: simple`; `complexity <= 4`, `4 < complexity <= 6`, `complexity > 6`
    std::vector<int> codes;          ///< per row, an index into names
};

/// One segment for each value in the given rows (from 0), numbers by value, else by bytes. Adds a fault for fewer than
/// two segments and for more than kMostSegments, with a cut near the median where the values are numbers.
Segments segments_by_value(const Study& study, const std::vector<std::string>& cells, std::span<const std::size_t> rows,
                           std::vector<Fault>& faults);

/// The segments between the study's cuts, a value equal to a cut lying below it; no value of the rows may be NaN.
/// Adds a fault that names the segments without rows.
Segments segments_by_cuts(const Study& study, const double* values, std::span<const std::size_t> rows,
                          std::vector<Fault>& faults);

}  // namespace rivalfold
