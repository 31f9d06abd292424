// The in-sample side of a theory: coefficients, explained variance and information criteria from its fit to all rows.
#pragma once

#include "rivalfold/verdict/verdict.hpp"

namespace rivalfold {

/// Fills fitted, equations, weights and criteria (bic_weight apart) of a theory that could be fitted to all rows.
void report_in_sample(const Survey& survey, const Trial& trial, std::size_t theory, TheoryReport& out);

/// BIC weights = exp(-d/2) / sum, d = BIC - smallest BIC, over the theories that have a BIC.
void weigh_by_bic(std::vector<TheoryReport>& theories);

}  // namespace rivalfold
