// What each contestant lost on each held-out row, and the sums that the tables need. Says nothing about which is
// better.
#pragma once

#include "rivalfold/folds/fold_plan.hpp"
#include "rivalfold/theory/contestant.hpp"
#include "rivalfold/theory/sample.hpp"

#include <Eigen/Core>

#include <functional>
#include <memory>
#include <string>
#include <vector>

namespace rivalfold {

/// Held-out errors of one target indicator in its own units, over all rows and repeats.
struct IndicatorErrors {
    std::string name;
    double rmse = 0;
    double mae = 0;
    double mape = 0;  ///< percent; NaN where an actual value is 0
    double q2 = 0;    ///< 1 - SSE / SSE of the training mean
};

struct ContestantLosses {
    std::string name;
    bool is_theory = false;
    bool failed = false;
    std::string reason;                ///< why it failed and in which split
    Eigen::VectorXd row_loss;          ///< n: L(t, i), mean over repeats
    Eigen::VectorXd split_loss;        ///< R x K, repeat by repeat: mean loss of the split's held-out rows
    Eigen::VectorXd repeat_loss;       ///< R: mean loss of the rows in each repeat
    double loss = 0;                   ///< mean of row_loss
    double rmse = 0, mae = 0, q2 = 0;  ///< pooled over indicators in units u_j
    std::vector<IndicatorErrors> indicators;
    int rank_deficient_splits = 0;
    int unseen_level_splits = 0;
    int most_rounds = 0;  ///< of the weighting iteration, over all splits
};

/// The stacked combination of theories: each fold's weights come from the held-out errors of the repeat's other folds.
struct StackLosses {
    Eigen::VectorXd row_loss;    ///< n, mean over repeats
    Eigen::VectorXd split_loss;  ///< R x K
    double loss = 0;
    Eigen::VectorXd weights;  ///< per member, mean over splits; non-negative, sum 1
};

/// What the held-out errors of the theories that finished have in common. Errors in units u_j, means over indicators
/// and repeats.
struct ErrorProducts {
    std::vector<std::size_t> members;  ///< contestant numbers, in file order
    Eigen::MatrixXd products;          ///< n x m(m-1)/2: mean of e_a e_b, columns (1,0) (2,0) (2,1) (3,0) ...
    Eigen::MatrixXd squares;           ///< n x m: mean of e_a^2; empty where it is the row loss itself (loss: squared)
    Eigen::MatrixXd mean_error;  ///< n x m: actual - predicted mean of the target's indicators, in their own units
    StackLosses stack;

    /// The column of `products` of two different members.
    static Eigen::Index column(std::size_t a, std::size_t b) {
        const auto high = static_cast<Eigen::Index>(a > b ? a : b), low = static_cast<Eigen::Index>(a > b ? b : a);
        return high * (high - 1) / 2 + low;
    }
};

/// A theory fitted to all rows used: the in-sample side of the run.
struct WholeFit {
    Fit fit;
    double explained =
        0;  ///< 1 - SSE / SST of the target's indicators, pooled in units u_j, for the rows that were fitted
    bool failed = false;
    std::string reason;
};

struct Trial {
    int repeats = 0, folds = 0;
    Eigen::VectorXd unit;                       ///< u_j: standard deviation of each target indicator over all rows used
    std::vector<ContestantLosses> contestants;  ///< theories in file order, then training mean, then linear benchmark
    std::vector<WholeFit> whole;                ///< per theory
    std::vector<std::shared_ptr<const TheoryContestant>> theories;  ///< as fitted to all rows
    ErrorProducts errors;                                           ///< empty with fewer than two finished theories
    std::vector<int> benchmark_predictors;                          ///< sample columns of the linear benchmark
    // Target scores and every distinct term of the theories' target equations, fitted to all rows (for the criteria).
    struct FullModel {
        std::vector<std::string> terms;  ///< labels
        Eigen::VectorXd sse;  ///< per theory: its own target score (standard units) on all terms; NaN if it failed
        int rank = 0;         ///< with the intercept
    } full_model;

    /// What a loss is large or small against: the training mean's loss. Differences below 1e-12 of it are rounding.
    double loss_scale() const { return contestants[theories.size()].loss; }
};

/// The contest: every contestant on every split. `threads` changes nothing but the time. Throws FaultError when an
/// indicator does not vary among the training rows of a split. A theory that cannot be fitted is kept, marked as
/// failed, with the reason. Under repeats: auto the plan grows: at least the planned repeats, then ten more at a time
/// until for every pair of theories the splits' Monte Carlo error of the loss difference is at most a tenth of its
/// standard error over rows (or clusters), at most 200 in all. `progress`, if given, is told now and then which share
/// (0 .. 1) of the splits is done.
Trial run_trial(const Study& study, const Survey& survey, const Sample& sample, FoldPlan& plan, unsigned threads,
                const std::function<void(double)>& progress = {});

/// Only the fits to all rows: what `check` needs for its advice.
Trial fit_all_rows(const Study& study, const Survey& survey, const Sample& sample, unsigned threads);

}  // namespace rivalfold
