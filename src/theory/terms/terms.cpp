#include "theory/terms/terms.hpp"

#include <cstring>

namespace rivalfold {

void form_score(Members members, std::ptrdiff_t n, double* out) {
    std::memcpy(out, members[0], static_cast<std::size_t>(n) * sizeof(double));
}

void form_term(TermKind kind, Members members, std::ptrdiff_t n, double* out) {
    switch (kind) {
        case TermKind::score:
            return form_score(members, n, out);
        case TermKind::product:
            return form_product(members, n, out);
        case TermKind::minimum:
            return form_minimum(members, n, out);
        case TermKind::maximum:
            return form_maximum(members, n, out);
        case TermKind::square:
            return form_square(members, n, out);
        case TermKind::geometric_mean:
            return form_geometric_mean(members, n, out);
    }
}

}  // namespace rivalfold
