// Beside the verdict of a pair: does a rival know something that the other does not, are extra terms real, and would a
// mixture of theories do better? From products of held-out errors.
#pragma once

#include "rivalfold/verdict/verdict.hpp"

namespace rivalfold {

/// Fills the companion tests of a pair of theories.
/// Encompassing, does 1 encompass 2 (Harvey, Leybourne & Newbold 1998, Journal of Business & Economic Statistics 16(2),
/// 254-259): d_i = e1_i (e1_i - e2_i), t = mean d / se, n - 1 (or clusters - 1) degrees of freedom, one-sided; a small
/// p: 2 knows something more. Clark & West (2007, Journal of Econometrics 138, 291-311), 1 nested in 2: f_i = e1^2 -
/// e2^2 + (p1 - p2)^2, normal, one-sided.
void add_companions(const Study& study, const Survey& survey, const Trial& trial, PairReport& pair);

/// Is the target equation of theory `inner` nested in that of theory `outer`? Every term of the first is a term of the
/// second, measured alike, and the second has more. Where mediators are predicted, only if neither target equation has
/// a mediator.
bool nested(const Blueprint& inner, const Blueprint& outer);

/// The stack against the best-ranked theory `best`.
StackReport judge_stack(const Study& study, const Survey& survey, const Trial& trial, std::size_t best);

}  // namespace rivalfold
