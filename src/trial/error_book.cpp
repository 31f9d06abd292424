#include "trial/error_book.hpp"

#include "trial/simplex_weights.hpp"

#include <algorithm>
#include <cmath>

namespace rivalfold {

ErrorBook::ErrorBook(std::vector<std::size_t> members, Eigen::Index n, Eigen::VectorXd unit, bool absolute,
                     WorkerPool& pool)
    : members_(std::move(members)),
      n_(n),
      unit_(std::move(unit)),
      absolute_(absolute),
      pool_(pool),
      rows_per_task_(std::max<Eigen::Index>(8192, (n + 31) / 32)) {
    const auto m = static_cast<Eigen::Index>(members_.size());
    products_ = Eigen::MatrixXd::Zero(n, m * (m - 1) / 2);
    if (absolute_) squares_ = Eigen::MatrixXd::Zero(n, m);
    mean_error_ = Eigen::MatrixXd::Zero(n, m);
    stack_loss_ = Eigen::VectorXd::Zero(n);
    stack_weights_ = Eigen::VectorXd::Zero(m);
}

std::vector<Eigen::MatrixXd> ErrorBook::fold_products(std::span<const std::uint32_t> fold_of, int folds,
                                                      const double* errors) {
    const auto m = static_cast<Eigen::Index>(members_.size());
    const Eigen::Index q = unit_.size();
    const auto tasks = static_cast<std::size_t>((n_ + rows_per_task_ - 1) / rows_per_task_);
    const Eigen::Index pairs = m * (m + 1) / 2;
    std::vector<Eigen::MatrixXd> partial(tasks);  // folds x pairs
    pool_.run(tasks, [&](std::size_t task, unsigned) {
        const Eigen::Index first = static_cast<Eigen::Index>(task) * rows_per_task_,
                           last = std::min(n_, first + rows_per_task_);
        partial[task] = Eigen::MatrixXd::Zero(pairs, folds);
        Eigen::VectorXd product(last - first);
        Eigen::Index pair = 0;
        for (Eigen::Index a = 0; a < m; ++a)
            for (Eigen::Index b = 0; b <= a; ++b, ++pair) {
                product.setZero();
                for (Eigen::Index j = 0; j < q; ++j) {
                    const double* x = errors + (a * q + j) * n_ + first;
                    const double* y = errors + (b * q + j) * n_ + first;
                    for (Eigen::Index i = 0; i < last - first; ++i) product(i) += x[i] * y[i];
                }
                product /= static_cast<double>(q);
                if (a != b)
                    products_.col(a * (a - 1) / 2 + b).segment(first, last - first) += product;
                else if (absolute_)
                    squares_.col(a).segment(first, last - first) += product;
                for (Eigen::Index i = 0; i < last - first; ++i)
                    partial[task](pair, fold_of[static_cast<std::size_t>(first + i)]) += product(i);
            }
        for (Eigen::Index a = 0; a < m; ++a)
            for (Eigen::Index j = 0; j < q; ++j) {
                const double* x = errors + (a * q + j) * n_ + first;
                const double raw = unit_(j) / static_cast<double>(q);
                for (Eigen::Index i = 0; i < last - first; ++i) mean_error_(first + i, a) += raw * x[i];
            }
    });
    for (std::size_t task = 1; task < tasks; ++task) partial.front() += partial[task];
    std::vector<Eigen::MatrixXd> grams(static_cast<std::size_t>(folds), Eigen::MatrixXd(m, m));
    for (int k = 0; k < folds; ++k) {
        Eigen::Index pair = 0;
        for (Eigen::Index a = 0; a < m; ++a)
            for (Eigen::Index b = 0; b <= a; ++b, ++pair)
                grams[static_cast<std::size_t>(k)](a, b) = grams[static_cast<std::size_t>(k)](b, a) =
                    partial.front()(pair, k);
    }
    return grams;
}

// The weights used on a fold come from the held-out errors of the other folds, so that the stack's loss is held out
// too.
void ErrorBook::add_repeat(std::span<const std::uint32_t> fold_of, int folds, const double* errors) {
    const auto m = static_cast<Eigen::Index>(members_.size());
    const Eigen::Index q = unit_.size();
    const std::vector<Eigen::MatrixXd> grams = fold_products(fold_of, folds, errors);
    Eigen::MatrixXd all = Eigen::MatrixXd::Zero(m, m);
    for (const Eigen::MatrixXd& gram : grams) all += gram;
    Eigen::MatrixXd weights(m, folds);
    for (int k = 0; k < folds; ++k) {
        weights.col(k) = stacking_weights(all - grams[static_cast<std::size_t>(k)]);
        stack_weights_ += weights.col(k);
    }
    const auto tasks = static_cast<std::size_t>((n_ + rows_per_task_ - 1) / rows_per_task_);
    std::vector<Eigen::MatrixXd> partial(tasks);  // 2 x folds: loss, rows
    pool_.run(tasks, [&](std::size_t task, unsigned) {
        const Eigen::Index first = static_cast<Eigen::Index>(task) * rows_per_task_,
                           last = std::min(n_, first + rows_per_task_);
        partial[task] = Eigen::MatrixXd::Zero(2, folds);
        for (Eigen::Index i = first; i < last; ++i) {
            const std::uint32_t fold = fold_of[static_cast<std::size_t>(i)];
            double loss = 0;
            for (Eigen::Index j = 0; j < q; ++j) {
                double error = 0;
                for (Eigen::Index a = 0; a < m; ++a) error += weights(a, fold) * errors[(a * q + j) * n_ + i];
                loss += absolute_ ? std::fabs(error) : error * error;
            }
            loss /= static_cast<double>(q);
            stack_loss_(i) += loss;
            partial[task](0, fold) += loss;
            partial[task](1, fold) += 1;
        }
    });
    for (std::size_t task = 1; task < tasks; ++task) partial.front() += partial[task];
    for (int k = 0; k < folds; ++k) stack_split_loss_.push_back(partial.front()(0, k) / partial.front()(1, k));
    ++repeats_;
}

ErrorProducts ErrorBook::take() {
    ErrorProducts out;
    out.members = members_;
    const double repeats = repeats_;
    products_ /= repeats;
    squares_ /= repeats;
    mean_error_ /= repeats;
    out.products = std::move(products_);
    out.squares = std::move(squares_);
    out.mean_error = std::move(mean_error_);
    out.stack.row_loss = stack_loss_ / repeats;
    out.stack.split_loss = Eigen::Map<const Eigen::VectorXd>(stack_split_loss_.data(),
                                                             static_cast<Eigen::Index>(stack_split_loss_.size()));
    out.stack.loss = out.stack.row_loss.mean();
    out.stack.weights = stack_weights_ / static_cast<double>(stack_split_loss_.size());
    return out;
}

}  // namespace rivalfold
