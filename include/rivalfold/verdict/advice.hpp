// What a reviewer of methods would say about this study: each sentence names the theory, construct or column and what
// to do. Advice is printed, never blocks.
#pragma once

#include "rivalfold/verdict/verdict.hpp"

#include <string>
#include <vector>

namespace rivalfold {

/// Advice that needs no held-out row: terms, weights, indicators, sample size. `trial` holds at least the fits to all
/// rows.
std::vector<std::string> advise_on_study(const Study& study, const Survey& survey, const Sample& sample,
                                         const FoldPlan& plan, const Trial& trial);

/// Advice that the contest's outcome gives: theories that lose to a benchmark, unstable designs, levels not seen in
/// training.
std::vector<std::string> advise_on_outcome(const Study& study, const Survey& survey, const FoldPlan& plan,
                                           const Trial& trial, const Verdict& verdict);

/// Cronbach's alpha (Cronbach 1951, Psychometrika 16, 297-334) of a construct's indicators over the rows complete on
/// them; NaN for fewer than two indicators.
double cronbach_alpha(const Sample& sample, const std::vector<int>& variables);

}  // namespace rivalfold
