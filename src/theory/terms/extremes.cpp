#include "rivalfold/theory/kernels.hpp"
#include "theory/terms/terms.hpp"

namespace rivalfold {

void form_minimum(Members members, std::ptrdiff_t n, double* out) {
    form_score(members, n, out);
    for (const double* member : members.subspan(1)) keep_smaller(out, member, n);
}

void form_maximum(Members members, std::ptrdiff_t n, double* out) {
    form_score(members, n, out);
    for (const double* member : members.subspan(1)) keep_larger(out, member, n);
}

}  // namespace rivalfold
