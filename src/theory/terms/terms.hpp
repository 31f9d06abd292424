// The kinds of term that an equation may hold, one file each: the members' scores of some rows in, the term's values
// out.
#pragma once

#include "rivalfold/study/study.hpp"

#include <cstddef>
#include <span>

namespace rivalfold {

/// The members' scores, each a column of n values.
using Members = std::span<const double* const>;

void form_score(Members members, std::ptrdiff_t n, double* out);
void form_product(Members members, std::ptrdiff_t n, double* out);
void form_minimum(Members members, std::ptrdiff_t n, double* out);
void form_maximum(Members members, std::ptrdiff_t n, double* out);
void form_square(Members members, std::ptrdiff_t n, double* out);
/// NaN where a member is zero or negative.
void form_geometric_mean(Members members, std::ptrdiff_t n, double* out);

/// The complete list of kinds: dispatches to the functions above.
void form_term(TermKind kind, Members members, std::ptrdiff_t n, double* out);

}  // namespace rivalfold
