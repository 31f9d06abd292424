// The ways of weighting a construct's indicators, one file each. Each sees the correlations inside the block (and, on
// the path scheme, the covariances with the block's proxy) and nothing else.
#pragma once

#include "rivalfold/study/study.hpp"

#include <Eigen/Cholesky>
#include <Eigen/Core>

namespace rivalfold {

/// Weights before any iteration: equal for equal, mode_a and mode_b; the first eigenvector of R for principal
/// (Hotelling 1933). R: correlations of the block's indicators (k x k). Writes k weights, not yet rescaled.
void first_weights(Weights weights, const Eigen::Ref<const Eigen::MatrixXd>& correlations,
                   Eigen::Ref<Eigen::VectorXd> out);

/// Mode A: weights proportional to the covariance of indicator and proxy (Wold 1982; Lohmöller 1989, ch. 2).
void update_mode_a(const Eigen::Ref<const Eigen::VectorXd>& covariances, Eigen::Ref<Eigen::VectorXd> out);

/// Mode B: regression of the proxy on the indicators, R^-1 x covariances, from the Cholesky factor of R. False on
/// overflow.
bool update_mode_b(const Eigen::LLT<Eigen::MatrixXd>& correlations,
                   const Eigen::Ref<const Eigen::VectorXd>& covariances, Eigen::Ref<Eigen::VectorXd> out);

/// Scales weights so that the score w'z of standardised indicators has standard deviation 1. False if that is
/// impossible.
bool rescale_to_unit_score(const Eigen::Ref<const Eigen::MatrixXd>& correlations, Eigen::Ref<Eigen::VectorXd> weights);

}  // namespace rivalfold
