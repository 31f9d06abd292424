// Composite path weighting of one theory from the training correlations alone (Wold 1982; Lohmöller 1989, ch. 2).
// Sees a blueprint and moments; no rows.
#pragma once

#include "rivalfold/theory/blueprint.hpp"
#include "rivalfold/theory/fit.hpp"

#include <Eigen/Cholesky>
#include <Eigen/Core>

#include <vector>

namespace rivalfold {

/// Weights of all blocks of a theory. Path scheme: the proxy of a construct is the sum over its predecessors of
/// (multiple-regression coefficient x score) plus the sum over its successors of (correlation x score). All weights are
/// renewed from the previous round's scores; stops when no weight (on score standard deviation 1) moves by 1e-10, at
/// most 3000 rounds, then fails with a reason. One object per thread: holds the work space.
class PathStage {
public:
    explicit PathStage(const Blueprint& blueprint);
    /// Fills weights, loadings, scores[].active, score_correlations and rounds of `fit`. Precondition: no constant
    /// variable.
    void run(const Moments& moments, Fit& fit);

private:
    struct Span {
        Eigen::Index first = 0;
        Eigen::Index size = 0;
    };
    void gather(const Moments& moments, Fit& fit);
    bool start(Fit& fit);
    void correlate(const Fit& fit);
    void find_proxies(const Fit& fit);
    double renew(Fit& fit);
    void settle_signs(Fit& fit);

    const Blueprint& plan_;
    std::vector<Span> span_;    // place of each block in the stacked indicators
    std::vector<int> stacked_;  // sample column of each stacked indicator
    std::vector<std::vector<int>> successors_;
    Eigen::MatrixXd correlations_;  // stacked x stacked
    Eigen::MatrixXd with_scores_;   // stacked x blocks: correlation of indicator and score
    Eigen::MatrixXd among_scores_;  // blocks x blocks
    Eigen::MatrixXd proxies_;       // blocks x blocks: column j holds the inner weights of block j's proxy
    std::vector<Eigen::LLT<Eigen::MatrixXd>> factors_;  // mode B blocks
    CrossProducts sums_;
    LeastSquares regression_;
    Eigen::VectorXd renewed_;
    Eigen::VectorXd covariances_;
};

}  // namespace rivalfold
