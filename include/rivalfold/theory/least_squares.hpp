// Ordinary least squares with an intercept from means and centred cross-products alone; knows no rows and no names.
#pragma once

#include <Eigen/Core>

#include <vector>

namespace rivalfold {

/// Sums over n rows of c predictor columns and q outcome columns.
struct CrossProducts {
    double n = 0;
    Eigen::VectorXd mean_x;  ///< c
    Eigen::VectorXd mean_y;  ///< q
    Eigen::MatrixXd xx;      ///< c x c, about the means
    Eigen::MatrixXd xy;      ///< c x q, about the means
    Eigen::VectorXd yy;      ///< q, about the means
    /// c: each column's sum of squares about some nearby origin; it varies if xx(j, j) > 1e-14 scale(j)
    Eigen::VectorXd scale;

    /// Room for c columns and q outcomes; allocates only when the sizes change.
    void make_room(Eigen::Index c, Eigen::Index q);
};

/// Solves min |y - a - X b| for each outcome. Columns scaled to unit length, Cholesky with diagonal pivoting; a pivot
/// below 1e-11 ends the rank (Higham 2002, Accuracy and Stability of Numerical Algorithms, 2nd ed., ch. 10). A
/// rank-deficient design gets the solution of smallest norm of [1, X] (Moore-Penrose), found by removing the null-space
/// part from a basic one. Accuracy: about 1e-16 / smallest pivot, relative. No allocation after the first call with the
/// same sizes, full rank.
class LeastSquares {
public:
    void solve(const CrossProducts& sums);

    const Eigen::VectorXd& intercept() const { return intercept_; }  ///< q
    const Eigen::MatrixXd& slopes() const { return slopes_; }        ///< c x q
    int rank() const { return rank_ + 1; }                           ///< with the intercept
    bool full_rank() const { return rank_ == slopes_.rows(); }
    /// Columns that the others determine: those left over when the pivots gave out; empty at full rank.
    std::vector<Eigen::Index> dependent() const { return {order_.begin() + rank_, order_.end()}; }
    /// Residual sum of squares of outcome y, never below 0.
    double sse(const CrossProducts& sums, int outcome = 0) const;
    /// Inverse of xx (c x c). Precondition: full_rank().
    Eigen::MatrixXd inverse() const;

private:
    void factorise(const CrossProducts& sums);
    void remove_null_space(const CrossProducts& sums);
    void solve_factored(double* scaled) const;

    Eigen::MatrixXd factor_;           // lower triangle in pivot order
    Eigen::VectorXd unit_;             // 1 / length of each column, 0 if it does not vary
    std::vector<Eigen::Index> order_;  // pivot order
    Eigen::VectorXd work_;
    Eigen::VectorXd intercept_;
    Eigen::MatrixXd slopes_;
    int rank_ = 0;
};

}  // namespace rivalfold
