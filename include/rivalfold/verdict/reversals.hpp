// Does a pair of theories change places between segments? Difference of differences.
#pragma once

#include "rivalfold/verdict/outcome.hpp"

#include <vector>

namespace rivalfold {

/// For every pair of theories and of segments s, s': D_s - D_s' over sqrt(se_s^2 + se_s'^2), each se the larger of the
/// two tests' standard errors (by cluster where set), Welch's degrees of freedom (Welch 1947, Biometrika 34, 28-35),
/// Holm over all of them. Segments share no row, so their differences are taken as independent.
std::vector<Reversal> find_reversals(const Outcome& whole);

}  // namespace rivalfold
