// How well do the predictor indicators predict when no theory says how? Kernel ridge regression on the contest's own
// folds. Knows columns and folds; knows no theories and no losses.
#pragma once

#include "rivalfold/theory/sample.hpp"
#include "trial/worker_pool.hpp"

#include <Eigen/Core>

#include <cstdint>
#include <vector>

namespace rivalfold {

/// Length-scales tried, as multiples of the training rows' median distance; and penalties. Smoothest first: it is kept
/// where errors tie.
inline constexpr double kLengthMultiples[] = {8, 4, 2, 1, 0.5};
inline constexpr int kPenalties = 17;
double penalty_at(int step);  ///< 10^4, 10^3.5, ... 10^-4

struct FlexibleTask {
    std::vector<int> predictors;         ///< sample columns
    std::vector<int> targets;            ///< sample columns
    std::vector<Eigen::Index> rows;      ///< of the sample
    std::vector<std::uint32_t> fold_of;  ///< per entry of rows, 0 .. folds - 1; a fold may be empty
    std::uint32_t folds = 0;
    std::size_t most_choice_rows =
        0;  ///< length-scale and penalty are chosen on so many training rows, drawn from the seed, at most
    std::uint64_t seed = 0;
};

struct FlexibleErrors {
    Eigen::MatrixXd errors;                 ///< rows x targets: actual - predicted, in the indicators' own units
    Eigen::MatrixXd mean_errors;            ///< the same for the training mean
    std::vector<double> multiple, penalty;  ///< per fold, as chosen; 0 for an empty fold
    bool chosen_on_fewer = false;           ///< some fold had more than most_choice_rows training rows
};

/// Predicts every row from the rows outside its fold. Predictors: variables standardised by the training rows, gaps
/// filled with the training mean; levels of categories 0 or 1, all levels that the training rows have; columns that do
/// not vary there are left out. Length-scale and penalty have the smallest leave-one-out error among the training rows,
/// summed over the targets in units of their training standard deviation. The result is the same for any number of
/// threads. Precondition: every non-empty fold has at least 2 rows outside it.
FlexibleErrors predict_flexibly(const Sample& sample, const FlexibleTask& task, WorkerPool& pool);

}  // namespace rivalfold
