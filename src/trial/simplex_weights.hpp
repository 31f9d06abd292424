// Weights of a stacked combination: the convex combination of theories with the smallest squared error. Sees error
// products only.
#pragma once

#include <Eigen/Core>

namespace rivalfold {

/// Minimises x'Gx/2 - b'x over x >= 0 by the active-set method of Lawson & Hanson (1974, Solving Least Squares
/// Problems, ch. 23), from normal equations. G: m x m, symmetric, positive semidefinite; b: m. Returns m values.
Eigen::VectorXd nonnegative_least_squares(const Eigen::MatrixXd& g, const Eigen::VectorXd& b);

/// Non-negative weights summing to 1 that minimise w'Gw, G = sums of products of the theories' held-out errors (Breiman
/// 1996, Stacked regressions, Machine Learning 24, 49-64). The minimiser of x'Gx/2 - 1'x over x >= 0, scaled to sum 1,
/// solves it.
Eigen::VectorXd stacking_weights(const Eigen::MatrixXd& error_products);

}  // namespace rivalfold
