#include "verdict/flexible_benchmark.hpp"

#include "rivalfold/folds/random.hpp"
#include "verdict/kernel_ridge.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

namespace rivalfold {
namespace {

constexpr std::size_t kLengths = std::size(kLengthMultiples);
constexpr std::uint32_t kChoiceStream = 0x43000000U;  // + fold
constexpr double kRoomAtOnce = 6e8;                   // bytes of kernel matrices held at a time

/// One fold's training and held-out rows as the kernel sees them.
struct Split {
    std::vector<std::size_t> held_out;  // positions in FlexibleTask::rows
    Eigen::MatrixXd train, test;        // rows x predictors
    Eigen::MatrixXd y;                  // training rows x targets, in own units
    Eigen::VectorXd target_sd;          // of the training rows
    Eigen::MatrixXd choice_train, choice_y;
    double distance = 1;  // median, of the rows for the choice
};

Eigen::MatrixXd predictors_of(const Sample& sample, const std::vector<int>& columns, const Moments& moments,
                              const std::vector<Eigen::Index>& rows) {
    Eigen::MatrixXd out(static_cast<Eigen::Index>(rows.size()), static_cast<Eigen::Index>(columns.size()));
    for (Eigen::Index c = 0; c < out.cols(); ++c) {
        const int column = columns[static_cast<std::size_t>(c)];
        const int gap = sample.gap_of[static_cast<std::size_t>(column)];
        const bool level = column >= sample.n_variables;
        const double centre = level ? 0 : moments.mean(column), unit = level ? 1 : moments.sd(column);
        for (Eigen::Index r = 0; r < out.rows(); ++r) {
            const Eigen::Index i = rows[static_cast<std::size_t>(r)];
            out(r, c) = gap >= 0 && sample.gaps(i, gap) > 0 ? 0 : (sample.values(i, column) - centre) / unit;
        }
    }
    return out;
}

Split make_split(const Sample& sample, const FlexibleTask& task, std::uint32_t fold) {
    Split split;
    std::vector<Eigen::Index> training, held_out;
    for (std::size_t r = 0; r < task.rows.size(); ++r) {
        if (task.fold_of[r] != fold) {
            training.push_back(task.rows[r]);
            continue;
        }
        held_out.push_back(task.rows[r]);
        split.held_out.push_back(r);
    }
    if (held_out.empty()) return split;
    Moments moments;
    moments_of_rows(sample, training, moments);
    std::vector<int> columns;
    for (const int column : task.predictors)
        if (moments.sd(column) > 0) columns.push_back(column);
    split.train = predictors_of(sample, columns, moments, training);
    split.test = predictors_of(sample, columns, moments, held_out);
    split.y = sample.values(training, task.targets);
    split.target_sd = moments.sd(task.targets);
    split.choice_train = split.train;
    split.choice_y = split.y;
    if (training.size() > task.most_choice_rows) {
        RandomStream stream(task.seed, Purpose::simulation, kChoiceStream + fold);
        std::vector<std::uint32_t> chosen = shuffled(training.size(), stream);
        chosen.resize(task.most_choice_rows);
        std::sort(chosen.begin(), chosen.end());
        split.choice_train = split.train(chosen, Eigen::indexing::all);
        split.choice_y = split.y(chosen, Eigen::indexing::all);
    }
    split.distance = median_distance(split.choice_train);
    return split;
}

/// Leave-one-out errors of one length-scale: one number per penalty.
Eigen::VectorXd choice_errors(const Split& split, double multiple) {
    const double length = multiple * split.distance;
    const LeaveOneOut left_out(gaussian_kernel(split.choice_train, split.choice_train, length), split.choice_y);
    Eigen::VectorXd out = Eigen::VectorXd::Zero(kPenalties);
    for (int p = 0; p < kPenalties; ++p) {
        const Eigen::MatrixXd residuals = left_out.residuals(penalty_at(p));
        for (Eigen::Index j = 0; j < residuals.cols(); ++j)
            if (split.target_sd(j) > 0) out(p) += (residuals.col(j) / split.target_sd(j)).squaredNorm();
    }
    return out;
}

void predict_fold(const Sample& sample, const FlexibleTask& task, const Split& split, double length, double penalty,
                  FlexibleErrors& out) {
    const KernelRidge fit = fit_kernel_ridge(gaussian_kernel(split.train, split.train, length), split.y, penalty);
    const Eigen::MatrixXd predicted = fit.predict(gaussian_kernel(split.test, split.train, length));
    const Eigen::RowVectorXd mean = split.y.colwise().mean();
    for (std::size_t h = 0; h < split.held_out.size(); ++h) {
        const auto to = static_cast<Eigen::Index>(split.held_out[h]);
        const Eigen::RowVectorXd actual = sample.values(task.rows[split.held_out[h]], task.targets);
        out.errors.row(to) = actual - predicted.row(static_cast<Eigen::Index>(h));
        out.mean_errors.row(to) = actual - mean;
    }
}

}  // namespace

double penalty_at(int step) { return std::pow(10.0, 4 - step / 2.0); }

FlexibleErrors predict_flexibly(const Sample& sample, const FlexibleTask& task, WorkerPool& pool) {
    std::vector<Split> splits(task.folds);
    pool.run(splits.size(), [&](std::size_t fold, unsigned) {
        splits[fold] = make_split(sample, task, static_cast<std::uint32_t>(fold));
    });
    std::vector<Eigen::VectorXd> left_out(splits.size() * kLengths);
    pool.run(left_out.size(), [&](std::size_t number, unsigned) {
        const Split& split = splits[number / kLengths];
        if (!split.held_out.empty()) left_out[number] = choice_errors(split, kLengthMultiples[number % kLengths]);
    });
    FlexibleErrors out;
    out.errors.resize(static_cast<Eigen::Index>(task.rows.size()), static_cast<Eigen::Index>(task.targets.size()));
    out.mean_errors.resizeLike(out.errors);
    out.multiple.assign(splits.size(), 0);
    out.penalty.assign(splits.size(), 0);
    for (std::size_t fold = 0; fold < splits.size(); ++fold) {
        if (splits[fold].held_out.empty()) continue;
        double least = std::numeric_limits<double>::infinity();
        for (std::size_t l = 0; l < kLengths; ++l)
            for (int p = 0; p < kPenalties; ++p) {
                const double error = left_out[fold * kLengths + l](p);
                if (!(error < least)) continue;
                least = error;
                out.multiple[fold] = kLengthMultiples[l];
                out.penalty[fold] = penalty_at(p);
            }
        out.chosen_on_fewer = out.chosen_on_fewer || splits[fold].train.rows() > splits[fold].choice_train.rows();
    }
    // The kernel of a whole training set may be large: no more of them at a time than fit.
    const double bytes = 8 * std::pow(static_cast<double>(task.rows.size()), 2);
    WorkerPool few(std::min(pool.size(), std::max(1U, static_cast<unsigned>(std::min(1024.0, kRoomAtOnce / bytes)))));
    few.run(splits.size(), [&](std::size_t fold, unsigned) {
        if (!splits[fold].held_out.empty())
            predict_fold(sample, task, splits[fold], out.multiple[fold] * splits[fold].distance, out.penalty[fold],
                         out);
    });
    return out;
}

}  // namespace rivalfold
