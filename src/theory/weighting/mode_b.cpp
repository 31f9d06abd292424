#include "theory/weighting/weighting.hpp"

namespace rivalfold {

bool update_mode_b(const Eigen::LLT<Eigen::MatrixXd>& correlations,
                   const Eigen::Ref<const Eigen::VectorXd>& covariances, Eigen::Ref<Eigen::VectorXd> out) {
    out = covariances;
    correlations.matrixL().solveInPlace(out);
    correlations.matrixU().solveInPlace(out);
    return out.allFinite();
}

}  // namespace rivalfold
