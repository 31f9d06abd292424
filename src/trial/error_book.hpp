// What the theories' held-out errors have in common, row by row: products of errors, mean errors, and the stacked
// combination of theories. Fed one whole repeat after the other; knows nothing of tests.
#pragma once

#include "rivalfold/trial/losses.hpp"
#include "trial/worker_pool.hpp"

#include <Eigen/Core>

#include <cstdint>
#include <span>
#include <vector>

namespace rivalfold {

class ErrorBook {
public:
    /// members: contestant numbers of the theories; q target indicators with units u_j; n rows.
    ErrorBook(std::vector<std::size_t> members, Eigen::Index n, Eigen::VectorXd unit, bool absolute, WorkerPool& pool);

    std::size_t cells() const {
        return static_cast<std::size_t>(n_) * members_.size() * static_cast<std::size_t>(unit_.size());
    }
    const std::vector<std::size_t>& members() const { return members_; }
    /// One repeat's errors in units u_j: errors[((member * q) + j) * n + row], every row held out once; its folds 0 ..
    /// folds - 1.
    void add_repeat(std::span<const std::uint32_t> fold_of, int folds, const double* errors);
    /// Means over the repeats added; the book is empty after.
    ErrorProducts take();

private:
    std::vector<Eigen::MatrixXd> fold_products(std::span<const std::uint32_t> fold_of, int folds, const double* errors);

    std::vector<std::size_t> members_;
    Eigen::Index n_;
    Eigen::VectorXd unit_;
    bool absolute_;
    WorkerPool& pool_;
    Eigen::Index rows_per_task_;
    int repeats_ = 0;
    Eigen::MatrixXd products_;    // n x m(m-1)/2, sums over repeats
    Eigen::MatrixXd squares_;     // n x m, for absolute loss only
    Eigen::MatrixXd mean_error_;  // n x m
    Eigen::VectorXd stack_loss_;  // n
    std::vector<double> stack_split_loss_;
    Eigen::VectorXd stack_weights_;  // m, sum over splits
};

}  // namespace rivalfold
