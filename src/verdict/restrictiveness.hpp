// What could a theory have fitted, whatever the truth? Its target equation against random smooth outcomes, in the
// manner of Fudenberg, Gao & Liang (2023). Looks at scores and terms only: the real outcome plays no part.
#pragma once

#include "rivalfold/trial/losses.hpp"

#include <cstdint>
#include <string>
#include <vector>

namespace rivalfold {

struct Restrictiveness {
    double value = 0;           ///< mean over draws; NaN without a fit
    double standard_error = 0;  ///< Monte Carlo: standard deviation over draws / sqrt draws
};

struct RestrictivenessReport {
    std::vector<Restrictiveness> theories;  ///< in file order
    std::vector<std::string> antecedents;   ///< block names
    std::size_t rows = 0;
};

inline constexpr int kOutcomeDraws = 200;

/// Random outcomes: 200 draws of a Gaussian process with kernel exp(-|x - y|^2 / (2 l^2)), l the median distance
/// between rows, each draw standardised to mean 0 and variance 1 over the rows. x: every distinct score (kind of
/// measurement, not weights, tells scores apart; the first theory in file order gives the values) that some theory's
/// target equation uses, from the fits to all rows, standardised. Controls are left out: no theory claims a form for
/// them, and they stand in every theory's equation alike. A theory's number per draw: sum of squares that its target
/// equation's columns (controls included, with intercept) leave by least squares, over the draw's sum of squares. With
/// more than most_rows rows, so many of them drawn from the seed. Small samples lower it: p columns fit a share of
/// about p / n of anything.
RestrictivenessReport measure_restrictiveness(const Study& study, const Sample& sample, const Trial& trial,
                                              std::size_t most_rows);

}  // namespace rivalfold
