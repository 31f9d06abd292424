// Kernel ridge regression with a Gaussian kernel and an unpenalised intercept: fit, prediction, and leave-one-out
// residuals in closed form. Pure functions on matrices; knows no folds, no theories, no units.
#pragma once

#include <Eigen/Core>

namespace rivalfold {

/// exp(-|x_i - y_k|^2 / (2 l^2)) for rows of x (n x p) and y (m x p): n x m. l > 0.
Eigen::MatrixXd gaussian_kernel(const Eigen::MatrixXd& x, const Eigen::MatrixXd& y, double length_scale);

/// Median Euclidean distance over the pairs of rows of x (n x p, n >= 2); the mean of the two middle ones of an even
/// count. Where it is 0 (most rows alike) the root mean square distance instead; 1 where all rows are equal.
double median_distance(const Eigen::MatrixXd& x);

/// Minimises |y - b - K a|^2 + penalty a'Ka over the intercept b and the dual coefficients a, for each of q outcomes at
/// once. Because b is free, this is ridge regression on the kernel centred on both sides, CKC with C = I - 11'/n, of
/// the centred outcomes (Saunders, Gammerman & Vovk 1998, Ridge regression learning algorithm in dual variables, ICML;
/// Schoelkopf, Smola & Mueller 1998, Neural Computation 10, 1299-1319, for the centring). The prediction is b + k(x)'a;
/// the a of each outcome sum to 0.
struct KernelRidge {
    Eigen::VectorXd intercept;  ///< q
    Eigen::MatrixXd dual;       ///< n x q

    /// cross: kernel of m rows with the n training rows (m x n). Returns m x q.
    Eigen::MatrixXd predict(const Eigen::MatrixXd& cross) const;
};

/// kernel: n x n, positive semidefinite (lower triangle is read; taken by value because it is factorised in place); y:
/// n x q; penalty > 0. One Cholesky factorisation, n^3 / 3 operations; relative accuracy about 1e-16 x n / penalty.
KernelRidge fit_kernel_ridge(Eigen::MatrixXd kernel, const Eigen::MatrixXd& y, double penalty);

/// Leave-one-out residuals for any number of penalties from one reduction of the centred kernel, CKC = P T P' with T
/// tridiagonal and the columns of P orthogonal to the ones (as Elden 1977, BIT 17, 134-145, does for ridge regression).
/// It serves every penalty as the eigendecomposition of Rifkin & Lippert (2007, Notes on regularized least squares,
/// MIT-CSAIL-TR-2007-025) does, in O(n^2) each, at a third of the time: T stays undiagonalised.
class LeaveOneOut {
public:
    /// kernel: n x n symmetric; y: n x q; n >= 2.
    LeaveOneOut(const Eigen::MatrixXd& kernel, const Eigen::MatrixXd& y);

    /// Row i: y_i minus the prediction of the fit to the other rows = residual_i / (1 - S_ii), S = 11'/n + CKC (CKC +
    /// penalty)^-1 (Allen 1974, Technometrics 16(1), 125-127). Exact, since the intercept is part of what is minimised.
    /// n x q; penalty > 0.
    Eigen::MatrixXd residuals(double penalty) const;

private:
    Eigen::MatrixXd basis_;     // P, n x (n - 1)
    Eigen::VectorXd diagonal_;  // of T
    Eigen::VectorXd beside_;    // subdiagonal of T
    Eigen::MatrixXd rotated_;   // P'C y
};

}  // namespace rivalfold
