#include "rivalfold/theory/least_squares.hpp"

#include <Eigen/Cholesky>

#include <algorithm>
#include <cmath>
#include <numeric>

namespace rivalfold {
namespace {
constexpr double kSmallestPivot = 1e-11;
constexpr double kVaries = 1e-14;
}  // namespace

void CrossProducts::make_room(Eigen::Index c, Eigen::Index q) {
    mean_x.resize(c);
    mean_y.resize(q);
    xx.resize(c, c);
    xy.resize(c, q);
    yy.resize(q);
    scale.resize(c);
}

void LeastSquares::factorise(const CrossProducts& sums) {
    const Eigen::Index c = sums.xx.rows();
    unit_.resize(c);
    factor_.resize(c, c);
    order_.resize(static_cast<std::size_t>(c));
    std::iota(order_.begin(), order_.end(), Eigen::Index{0});
    for (Eigen::Index j = 0; j < c; ++j)
        unit_(j) = sums.xx(j, j) > kVaries * sums.scale(j) ? 1 / std::sqrt(sums.xx(j, j)) : 0;
    for (Eigen::Index j = 0; j < c; ++j)
        for (Eigen::Index i = j; i < c; ++i) {
            factor_(i, j) = sums.xx(i, j) * unit_(i) * unit_(j);
            factor_(j, i) = factor_(i, j);
        }
    rank_ = 0;
    for (Eigen::Index k = 0; k < c; ++k) {
        Eigen::Index best = k;
        for (Eigen::Index j = k + 1; j < c; ++j)
            if (factor_(j, j) > factor_(best, best)) best = j;
        if (!(factor_(best, best) > kSmallestPivot)) break;
        if (best != k) {
            factor_.row(k).swap(factor_.row(best));
            factor_.col(k).swap(factor_.col(best));
            std::swap(order_[static_cast<std::size_t>(k)], order_[static_cast<std::size_t>(best)]);
        }
        const double root = std::sqrt(factor_(k, k));
        factor_(k, k) = root;
        for (Eigen::Index i = k + 1; i < c; ++i) factor_(i, k) /= root;
        for (Eigen::Index j = k + 1; j < c; ++j) {
            const double left = factor_(j, k);
            for (Eigen::Index i = j; i < c; ++i) factor_(i, j) -= factor_(i, k) * left;
        }
        // The swaps above move whole rows and columns, so the upper triangle is kept equal to the lower one.
        for (Eigen::Index j = k + 1; j < c; ++j)
            for (Eigen::Index i = j; i < c; ++i) factor_(j, i) = factor_(i, j);
        ++rank_;
    }
}

// Solves L L' z = scaled in place, over the first rank_ pivots.
void LeastSquares::solve_factored(double* scaled) const {
    for (Eigen::Index k = 0; k < rank_; ++k) {
        double value = scaled[k];
        for (Eigen::Index i = 0; i < k; ++i) value -= factor_(k, i) * scaled[i];
        scaled[k] = value / factor_(k, k);
    }
    for (Eigen::Index k = rank_; k-- > 0;) {
        double value = scaled[k];
        for (Eigen::Index i = k + 1; i < rank_; ++i) value -= factor_(i, k) * scaled[i];
        scaled[k] = value / factor_(k, k);
    }
}

void LeastSquares::solve(const CrossProducts& sums) {
    const Eigen::Index c = sums.xx.rows();
    const Eigen::Index q = sums.xy.cols();
    factorise(sums);
    slopes_.resize(c, q);
    intercept_.resize(q);
    work_.resize(c);
    for (Eigen::Index y = 0; y < q; ++y) {
        for (Eigen::Index k = 0; k < rank_; ++k) {
            const Eigen::Index j = order_[static_cast<std::size_t>(k)];
            work_(k) = sums.xy(j, y) * unit_(j);
        }
        solve_factored(work_.data());
        slopes_.col(y).setZero();
        for (Eigen::Index k = 0; k < rank_; ++k) {
            const Eigen::Index j = order_[static_cast<std::size_t>(k)];
            slopes_(j, y) = work_(k) * unit_(j);
        }
        intercept_(y) = sums.mean_y(y);
        for (Eigen::Index j = 0; j < c; ++j) intercept_(y) -= slopes_(j, y) * sums.mean_x(j);
    }
    if (!full_rank()) remove_null_space(sums);
}

void LeastSquares::remove_null_space(const CrossProducts& sums) {
    const Eigen::Index c = sums.xx.rows();
    const Eigen::Index deficiency = c - rank_;
    // Each column of `null` combines [1, X] to zero: a dependent column minus its regression on the pivots.
    Eigen::MatrixXd null = Eigen::MatrixXd::Zero(c + 1, deficiency);
    for (Eigen::Index d = 0; d < deficiency; ++d) {
        const Eigen::Index j = order_[static_cast<std::size_t>(rank_ + d)];
        null(1 + j, d) = -1;
        null(0, d) = sums.mean_x(j);
        if (unit_(j) == 0) continue;
        for (Eigen::Index k = 0; k < rank_; ++k) {
            const Eigen::Index p = order_[static_cast<std::size_t>(k)];
            work_(k) = sums.xx(p, j) * unit_(p) * unit_(j);
        }
        solve_factored(work_.data());
        for (Eigen::Index k = 0; k < rank_; ++k) {
            const Eigen::Index p = order_[static_cast<std::size_t>(k)];
            const double slope = work_(k) * unit_(p) / unit_(j);
            null(1 + p, d) = slope;
            null(0, d) -= slope * sums.mean_x(p);
        }
    }
    Eigen::MatrixXd solution(c + 1, slopes_.cols());
    solution.row(0) = intercept_.transpose();
    solution.bottomRows(c) = slopes_;
    const Eigen::MatrixXd coordinates = (null.transpose() * null).ldlt().solve(null.transpose() * solution);
    solution.noalias() -= null * coordinates;
    intercept_ = solution.row(0).transpose();
    slopes_ = solution.bottomRows(c);
}

double LeastSquares::sse(const CrossProducts& sums, int outcome) const {
    const Eigen::VectorXd b = slopes_.col(outcome);
    // The full quadratic form: its error is second order in the error of b.
    const double value = sums.yy(outcome) - 2 * b.dot(sums.xy.col(outcome)) + b.dot(sums.xx * b);
    return std::max(value, 0.0);
}

Eigen::MatrixXd LeastSquares::inverse() const {
    const Eigen::Index c = slopes_.rows();
    Eigen::MatrixXd result(c, c);
    Eigen::VectorXd column(c);
    for (Eigen::Index k = 0; k < c; ++k) {
        column.setZero();
        column(k) = 1;
        solve_factored(column.data());
        const Eigen::Index to = order_[static_cast<std::size_t>(k)];
        for (Eigen::Index i = 0; i < c; ++i) {
            const Eigen::Index from = order_[static_cast<std::size_t>(i)];
            result(from, to) = column(i) * unit_(from) * unit_(to);
        }
    }
    return result;
}

}  // namespace rivalfold
