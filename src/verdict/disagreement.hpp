// Where the two best-ranked theories part: rows, and regions of the antecedents. Descriptive; tests nothing.
#pragma once

#include "rivalfold/verdict/verdict.hpp"

namespace rivalfold {

/// `first`, `second`: contestants, both finished theories. Scores are those of the first theory's fit to all rows (the
/// second's for constructs that only it uses), in standard units; thirds are by rank, ties kept in row order.
Disagreement find_disagreement(const Study& study, const Survey& survey, const Sample& sample, const Trial& trial,
                               std::size_t first, std::size_t second);

}  // namespace rivalfold
