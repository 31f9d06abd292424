#include "theory/weighting/weighting.hpp"

#include <Eigen/Eigenvalues>

#include <cmath>

namespace rivalfold {

void first_weights(Weights weights, const Eigen::Ref<const Eigen::MatrixXd>& correlations,
                   Eigen::Ref<Eigen::VectorXd> out) {
    if (weights != Weights::principal || correlations.rows() == 1) {
        out.setOnes();
        return;
    }
    const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> solver(correlations);
    out = solver.eigenvectors().rightCols<1>();
}

bool rescale_to_unit_score(const Eigen::Ref<const Eigen::MatrixXd>& correlations, Eigen::Ref<Eigen::VectorXd> weights) {
    double variance = 0;
    for (Eigen::Index j = 0; j < weights.size(); ++j)
        for (Eigen::Index i = 0; i < weights.size(); ++i) variance += weights(i) * correlations(i, j) * weights(j);
    if (!(variance > 0) || !std::isfinite(variance)) return false;
    weights *= 1 / std::sqrt(variance);
    return weights.allFinite();
}

}  // namespace rivalfold
