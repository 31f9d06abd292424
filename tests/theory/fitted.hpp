// One theory fitted to all rows from their moments: weights, loadings and scores; bent equations apart.
#pragma once

#include "support/small_contest.hpp"

#include "rivalfold/theory/contestant.hpp"

#include <numeric>

namespace rivalfold {

struct Fitted {
    Blueprint plan;
    Fit fit;

    int block(const std::string& construct) const {
        for (std::size_t b = 0; b < plan.blocks.size(); ++b)
            if (plan.blocks[b].construct == construct) return static_cast<int>(b);
        throw std::logic_error("no block " + construct);
    }
    const Eigen::VectorXd& weights(const std::string& construct) const {
        return fit.weights[static_cast<std::size_t>(block(construct))];
    }
    const Eigen::VectorXd& loadings(const std::string& construct) const {
        return fit.loadings[static_cast<std::size_t>(block(construct))];
    }
};

inline Fitted fit_all(const SmallContest& contest, std::size_t theory) {
    const TheoryContestant contestant(*contest.sample,
                                      build_blueprints(contest.study, contest.survey, *contest.sample)[theory], true);
    std::vector<Eigen::Index> all(static_cast<std::size_t>(contest.sample->n));
    std::iota(all.begin(), all.end(), Eigen::Index{0});
    Moments moments;
    moments_of_rows(*contest.sample, all, moments);
    Fitted fitted{contestant.blueprint(), {}};
    const auto scratch = contestant.make_scratch();
    contestant.fit_moments(moments, *scratch, fitted.fit);
    return fitted;
}

/// Columns with mean 0 and standard deviation 1 (divisor n - 1).
inline Eigen::MatrixXd standardised(const Eigen::MatrixXd& x) {
    Eigen::MatrixXd z = x.rowwise() - x.colwise().mean();
    for (Eigen::Index j = 0; j < z.cols(); ++j)
        z.col(j) /= std::sqrt(z.col(j).squaredNorm() / static_cast<double>(z.rows() - 1));
    return z;
}

}  // namespace rivalfold
