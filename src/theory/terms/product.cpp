#include "rivalfold/theory/kernels.hpp"
#include "theory/terms/terms.hpp"

namespace rivalfold {

void form_product(Members members, std::ptrdiff_t n, double* out) {
    form_score(members, n, out);
    for (const double* member : members.subspan(1)) multiply(out, member, n);
}

void form_square(Members members, std::ptrdiff_t n, double* out) {
    form_score(members, n, out);
    multiply(out, members[0], n);
}

}  // namespace rivalfold
