// How much is there to predict at all, and how much of it does each theory predict? A flexible benchmark that assumes
// no form says what these predictors can do with this many rows; random outcomes say what a theory could have fitted
// whatever the truth. Knows losses and fits; says nothing about which theory is better.
#pragma once

#include "rivalfold/folds/fold_plan.hpp"
#include "rivalfold/trial/losses.hpp"

#include <Eigen/Core>

#include <cstddef>
#include <string>
#include <vector>

namespace rivalfold {

struct TheoryCompleteness {
    std::size_t contestant = 0;  ///< index into Trial::contestants
    /// (loss(mean) - loss(theory)) / (loss(mean) - loss(flexible)); NaN where that says nothing. 1: as well as the
    /// flexible benchmark.
    double completeness = 0;
    double low = 0, high = 0;  ///< its bootstrap interval at 1 - level
    double restrictiveness =
        0;  ///< 0: could fit anything; 1: could fit nothing of it. NaN for a theory without a fit to all rows
    double restrictiveness_se = 0;  ///< Monte Carlo standard error
    std::string reason;             ///< why numbers are NaN, or how to read one below 0 or above 1; else empty
};

struct CompletenessReport {
    bool computed = false;                    ///< false: `note` says why
    std::size_t rows = 0;                     ///< rows of the comparison
    bool subsample = false;                   ///< fewer than all rows used
    double loss_mean = 0, loss_flexible = 0;  ///< over these rows
    double q2_flexible = 0;              ///< 1 - SSE / SSE of the training mean of the same splits, pooled in units u_j
    Eigen::VectorXd flexible_row_loss;   ///< per entry of row_index: mean over indicators of (e/u)^2, or of |e/u|
    std::vector<std::size_t> row_index;  ///< rows of the sample, ascending
    std::vector<TheoryCompleteness> theories;  ///< in file order
    std::vector<std::string> antecedents;      ///< the scores of which the random outcomes are functions
    double seconds = 0;
    std::string note;  ///< what was done on fewer rows or folds, in sentences; empty if nothing was
};

/// Where exact work would take too long. The defaults keep 5,000 rows in 10 folds under a minute on two cores.
struct CompletenessLimits {
    std::size_t rows = 5000;         ///< a seeded subsample above this (whole clusters, if clusters are small)
    std::size_t choice_rows = 1000;  ///< of a fold's training rows, for the choice of length-scale and penalty
    std::size_t draw_rows = 1500;    ///< for the random outcomes
    int folds = 20;                  ///< more folds (of more than folds_rows rows) are joined to so many
    std::size_t folds_rows = 100;
};

/// Completeness (Fudenberg, Kleinberg, Liang & Mullainathan 2022, Journal of Political Economy 130(4), 956-990) and
/// restrictiveness (Fudenberg, Gao & Liang 2023, How flexible is that functional form? Quantifying the restrictiveness
/// of theories, Review of Economics and Statistics) of every theory of a finished contest. Flexible benchmark: kernel
/// ridge regression (Gaussian kernel) on the linear benchmark's predictors, over the first repeat's folds. Losses of
/// theories and mean are those of the contest (all repeats), over the same rows. The interval: percentiles (Efron &
/// Tibshirani 1993, An Introduction to the Bootstrap, ch. 13) of the ratio over 2000 resamples of rows, or of clusters.
/// It holds the fits as they are. Completeness is NaN, with the reason, where the interval of loss(mean) -
/// loss(flexible) reaches 0. `threads` changes nothing but the time. Draws come from the study's seed.
CompletenessReport measure_completeness(const Study& study, const Survey& survey, const Sample& sample,
                                        const FoldPlan& plan, const Trial& trial, unsigned threads,
                                        const CompletenessLimits& limits = {});

}  // namespace rivalfold
