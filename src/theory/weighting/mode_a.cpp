#include "theory/weighting/weighting.hpp"

namespace rivalfold {

void update_mode_a(const Eigen::Ref<const Eigen::VectorXd>& covariances, Eigen::Ref<Eigen::VectorXd> out) {
    out = covariances;
}

}  // namespace rivalfold
