#include "rivalfold/trial/standard_error.hpp"

#include <cmath>

namespace rivalfold {

double standard_error(const Eigen::VectorXd& d, const std::vector<int>& clusters, std::size_t n_clusters) {
    if (!(d.maxCoeff() > d.minCoeff())) return 0;
    const auto n = static_cast<double>(d.size());
    const double mean = d.mean();
    if (clusters.empty()) return std::sqrt((d.array() - mean).square().sum() / (n - 1) / n);
    const auto g = static_cast<double>(n_clusters);
    Eigen::VectorXd sums = Eigen::VectorXd::Zero(static_cast<Eigen::Index>(n_clusters));
    for (Eigen::Index i = 0; i < d.size(); ++i) sums(clusters[static_cast<std::size_t>(i)]) += d(i) - mean;
    return std::sqrt(g / (g - 1) * sums.squaredNorm()) / n;
}

Eigen::VectorXd without_rounding(Eigen::VectorXd d, double scale) {
    if (d.cwiseAbs().maxCoeff() <= 1e-12 * scale) d.setZero();
    return d;
}

}  // namespace rivalfold
