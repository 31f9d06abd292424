// How far chance alone may move a mean of row differences.
#pragma once

#include <Eigen/Core>

#include <vector>

namespace rivalfold {

/// Standard error of the mean of d (n >= 2 rows): sd(d) / sqrt n (divisor n - 1). With clusters 0 .. n_clusters - 1
/// (one per row): sqrt(G/(G-1) sum over clusters of (sum over its rows of (d_i - D))^2) / n (Liang & Zeger 1986,
/// Biometrika 73(1), 13-22). Exactly 0 where all differences are equal.
double standard_error(const Eigen::VectorXd& d, const std::vector<int>& clusters, std::size_t n_clusters);

/// Differences of losses of size `scale` that are rounding alone (all within 1e-12 of it) as exact zeros: two theories
/// that make the same predictions by different routes must not be told apart by their last digits.
Eigen::VectorXd without_rounding(Eigen::VectorXd d, double scale);

}  // namespace rivalfold
