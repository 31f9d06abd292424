#include "theory/terms/terms.hpp"

#include <cmath>
#include <limits>

namespace rivalfold {

void form_geometric_mean(Members members, std::ptrdiff_t n, double* out) {
    const double share = 1.0 / static_cast<double>(members.size());
    for (std::ptrdiff_t i = 0; i < n; ++i) {
        double logs = 0;
        for (const double* member : members)
            logs += member[i] > 0 ? std::log(member[i]) : std::numeric_limits<double>::quiet_NaN();
        out[i] = std::exp(logs * share);
    }
}

}  // namespace rivalfold
