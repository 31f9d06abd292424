#include "trial/simplex_weights.hpp"

#include <Eigen/Cholesky>

#include <algorithm>
#include <limits>
#include <vector>

namespace rivalfold {
namespace {

/// The unconstrained minimiser over the coordinates in `free`, zero elsewhere.
Eigen::VectorXd solve_free(const Eigen::MatrixXd& g, const Eigen::VectorXd& b, const std::vector<Eigen::Index>& free) {
    Eigen::VectorXd x = Eigen::VectorXd::Zero(b.size());
    if (free.empty()) return x;
    const Eigen::MatrixXd part = g(free, free);
    const Eigen::VectorXd solution = part.ldlt().solve(b(free));
    for (std::size_t k = 0; k < free.size(); ++k) x(free[k]) = solution(static_cast<Eigen::Index>(k));
    return x;
}

}  // namespace

Eigen::VectorXd nonnegative_least_squares(const Eigen::MatrixXd& g, const Eigen::VectorXd& b) {
    const Eigen::Index m = b.size();
    Eigen::VectorXd x = Eigen::VectorXd::Zero(m);
    std::vector<Eigen::Index> free;
    const double tolerance = 1e-11 * std::max(1e-300, b.cwiseAbs().maxCoeff());
    for (Eigen::Index round = 0; round < 10 * m + 10; ++round) {
        const Eigen::VectorXd gradient = b - g * x;
        Eigen::Index enter = -1;
        for (Eigen::Index k = 0; k < m; ++k)
            if (std::find(free.begin(), free.end(), k) == free.end() && gradient(k) > tolerance &&
                (enter < 0 || gradient(k) > gradient(enter)))
                enter = k;
        if (enter < 0) break;
        free.push_back(enter);
        std::sort(free.begin(), free.end());
        for (;;) {
            const Eigen::VectorXd trial = solve_free(g, b, free);
            double step = 1;
            for (const Eigen::Index k : free)
                if (trial(k) <= 0) step = std::min(step, x(k) / (x(k) - trial(k)));
            if (!trial.allFinite()) return x;
            if (step >= 1) {
                x = trial;
                break;
            }
            x += step * (trial - x);
            std::vector<Eigen::Index> kept;
            for (const Eigen::Index k : free) {
                if (x(k) > 1e-15)
                    kept.push_back(k);
                else
                    x(k) = 0;
            }
            if (kept.size() == free.size()) return x;
            free = std::move(kept);
        }
    }
    return x;
}

Eigen::VectorXd stacking_weights(const Eigen::MatrixXd& error_products) {
    const Eigen::Index m = error_products.rows();
    const double scale = error_products.trace() / static_cast<double>(m);
    if (!(scale > 0)) return Eigen::VectorXd::Constant(m, 1.0 / static_cast<double>(m));
    // Of identical theories the first takes the weight: the second's gradient is then zero and it never enters.
    const Eigen::VectorXd x = nonnegative_least_squares(error_products / scale, Eigen::VectorXd::Ones(m));
    const double sum = x.sum();
    return sum > 0 ? Eigen::VectorXd(x / sum) : Eigen::VectorXd::Constant(m, 1.0 / static_cast<double>(m));
}

}  // namespace rivalfold
