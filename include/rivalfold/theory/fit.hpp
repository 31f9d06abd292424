// What one contestant learned from one set of training rows: plain numbers, reused from fold to fold.
// Knows neither where the rows came from nor what will be predicted.
#pragma once

#include "rivalfold/theory/least_squares.hpp"

#include <Eigen/Core>

#include <string>
#include <vector>

namespace rivalfold {

enum class FitStatus { not_run, fitted, failed };

/// A score as a linear function of sample columns: constant + sum of coefficients(h) x column h of the block.
struct ScoreMap {
    double constant = 0;
    Eigen::VectorXd coefficients;
    double mean = 0;     ///< training mean of the score in the study's metric
    double sd = 1;       ///< its training standard deviation
    bool active = true;  ///< false for the first present level of a category and for levels without training rows
};

/// One equation on its training rows, in the study's metric.
struct EquationFit {
    std::vector<int> active;  ///< design columns in force, by position in EquationPlan::columns
    CrossProducts sums;       ///< over the active columns
    LeastSquares solution;
    Eigen::VectorXd slopes;  ///< per design column of the plan, 0 for inactive ones
    double intercept = 0;
};

struct Fit {
    FitStatus status = FitStatus::not_run;
    std::string reason;                     ///< why it failed, in words, without the fold
    int rounds = 0;                         ///< of the weighting iteration; 0 if none was needed
    bool rank_deficient = false;            ///< some needed equation was solved by the minimum-norm solution
    bool unseen_level = false;              ///< some level of a used category had no training row
    std::vector<Eigen::VectorXd> weights;   ///< per block, on standardised indicators, score standard deviation 1
    std::vector<Eigen::VectorXd> loadings;  ///< per block, training correlation of indicator and own score
    std::vector<ScoreMap> scores;           ///< per block
    Eigen::MatrixXd score_correlations;     ///< blocks x blocks
    std::vector<EquationFit> equations;     ///< per equation of the plan

    Eigen::VectorXd gap_means;  ///< per sample column, what fills a gap: the training mean in centred units
    // Predicted indicator j = offset_j + factor_j x predicted target score in standard units.
    Eigen::VectorXd offset;
    Eigen::VectorXd factor;
    // Where every needed equation is linear: that predicted score = direct_constant + direct' (sample columns).
    Eigen::VectorXd direct;
    double direct_constant = 0;
    // The linear benchmark: one column of coefficients per target indicator.
    Eigen::MatrixXd per_indicator;

    void fail(std::string why) {
        status = FitStatus::failed;
        reason = std::move(why);
    }
};

}  // namespace rivalfold
