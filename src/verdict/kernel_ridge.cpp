#include "verdict/kernel_ridge.hpp"

#include <Eigen/Cholesky>
#include <Eigen/Eigenvalues>

#include <algorithm>
#include <cmath>
#include <vector>

namespace rivalfold {
namespace {

/// Squared distances between the rows of x and y.
Eigen::MatrixXd squared_distances(const Eigen::MatrixXd& x, const Eigen::MatrixXd& y) {
    const Eigen::VectorXd long_x = x.rowwise().squaredNorm(), long_y = y.rowwise().squaredNorm();
    Eigen::MatrixXd out(x.rows(), y.rows());
    out.noalias() = -2 * x * y.transpose();
    out.colwise() += long_x;
    out.rowwise() += long_y.transpose();
    return out.cwiseMax(0);  // equal rows may come out a rounding error below 0
}

}  // namespace

Eigen::MatrixXd gaussian_kernel(const Eigen::MatrixXd& x, const Eigen::MatrixXd& y, double length_scale) {
    Eigen::MatrixXd out = squared_distances(x, y);
    out.array() = (out.array() * (-0.5 / (length_scale * length_scale))).exp();
    return out;
}

double median_distance(const Eigen::MatrixXd& x) {
    const Eigen::MatrixXd squared = squared_distances(x, x);
    std::vector<double> pairs;
    pairs.reserve(static_cast<std::size_t>(x.rows() * (x.rows() - 1) / 2));
    double sum = 0;
    for (Eigen::Index k = 0; k < x.rows(); ++k)
        for (Eigen::Index i = k + 1; i < x.rows(); ++i) {
            // A distance that is nothing but rounding is none.
            const double value =
                squared(i, k) > 1e-14 * (x.row(i).squaredNorm() + x.row(k).squaredNorm()) ? squared(i, k) : 0;
            pairs.push_back(value);
            sum += value;
        }
    const auto middle = pairs.begin() + static_cast<std::ptrdiff_t>(pairs.size() / 2);
    std::nth_element(pairs.begin(), middle, pairs.end());
    double median = std::sqrt(*middle);
    if (pairs.size() % 2 == 0) median = (median + std::sqrt(*std::max_element(pairs.begin(), middle))) / 2;
    if (median > 0) return median;
    return sum > 0 ? std::sqrt(sum / static_cast<double>(pairs.size())) : 1;
}

Eigen::MatrixXd KernelRidge::predict(const Eigen::MatrixXd& cross) const {
    Eigen::MatrixXd out = cross * dual;
    out.rowwise() += intercept.transpose();
    return out;
}

// With A = K + penalty: a = A^-1 (y - b) and 1'a = 0, hence b = 1'A^-1 y / 1'A^-1 1.
KernelRidge fit_kernel_ridge(Eigen::MatrixXd kernel, const Eigen::MatrixXd& y, double penalty) {
    kernel.diagonal().array() += penalty;
    const Eigen::LLT<Eigen::Ref<Eigen::MatrixXd>> factor(kernel);
    const Eigen::RowVectorXd mean = y.colwise().mean();
    const Eigen::VectorXd ones = factor.solve(Eigen::VectorXd::Ones(y.rows()));
    KernelRidge out;
    out.dual = factor.solve(y.rowwise() - mean);
    const Eigen::RowVectorXd shift = out.dual.colwise().sum() / ones.sum();
    out.dual -= ones * shift;
    out.intercept = (mean + shift).transpose();
    return out;
}

// Within the complement of the ones, spanned by all but the first column of the reflection H = I - b vv' that turns 1 /
// sqrt n into -e_1: there the ones, an eigenvector of CKC with value 0, cost no digits.
LeaveOneOut::LeaveOneOut(const Eigen::MatrixXd& kernel, const Eigen::MatrixXd& y) {
    const Eigen::Index n = kernel.rows();
    Eigen::VectorXd v = Eigen::VectorXd::Constant(n, 1 / std::sqrt(static_cast<double>(n)));
    v(0) += 1;
    const double b = 2 / v.squaredNorm();
    const Eigen::VectorXd w = kernel * v;
    const Eigen::VectorXd u = b * w - (b * b / 2 * v.dot(w)) * v;  // HKH = K - uv' - vu'
    Eigen::MatrixXd inside = kernel.bottomRightCorner(n - 1, n - 1);
    inside.noalias() -= u.tail(n - 1) * v.tail(n - 1).transpose();
    inside.noalias() -= v.tail(n - 1) * u.tail(n - 1).transpose();
    const Eigen::Tridiagonalization<Eigen::MatrixXd> reduced(inside);
    basis_.resize(n, n - 1);
    basis_.row(0).setZero();
    basis_.bottomRows(n - 1) = reduced.matrixQ();
    const Eigen::RowVectorXd along = v.transpose() * basis_;
    basis_.noalias() -= b * v * along;
    diagonal_ = reduced.diagonal();
    beside_ = reduced.subDiagonal();
    rotated_.noalias() = basis_.transpose() * (y.rowwise() - y.colwise().mean());
}

// T + penalty = L D L' with a unit bidiagonal L. The rows of P L^-T, column after column, give the diagonal of P (T +
// penalty)^-1 P'.
Eigen::MatrixXd LeaveOneOut::residuals(double penalty) const {
    const Eigen::Index n = diagonal_.size();                     // one less than rows
    Eigen::VectorXd pivot(n), below = Eigen::VectorXd::Zero(n);  // D, and L(k + 1, k)
    pivot(0) = diagonal_(0) + penalty;
    for (Eigen::Index k = 1; k < n; ++k) {
        below(k - 1) = beside_(k - 1) / pivot(k - 1);
        pivot(k) = diagonal_(k) + penalty - below(k - 1) * beside_(k - 1);
    }
    Eigen::VectorXd column = basis_.col(0);
    Eigen::VectorXd inverse_diagonal = column.array().square() / pivot(0);
    Eigen::MatrixXd dual = rotated_;
    for (Eigen::Index k = 1; k < n; ++k) {
        column = basis_.col(k) - below(k - 1) * column;
        inverse_diagonal.array() += column.array().square() / pivot(k);
        dual.row(k) -= below(k - 1) * dual.row(k - 1);
    }
    dual.array().colwise() /= pivot.array();
    for (Eigen::Index k = n - 1; k-- > 0;) dual.row(k) -= below(k) * dual.row(k + 1);
    Eigen::MatrixXd out(basis_.rows(), rotated_.cols());
    out.noalias() = basis_ * dual;
    out.array().colwise() /= inverse_diagonal.array();  // residual and 1 - S_ii, both without their factor, the penalty
    return out;
}

}  // namespace rivalfold
