#include "rivalfold/verdict/paired_tests.hpp"

#include "rivalfold/trial/standard_error.hpp"
#include "rivalfold/verdict/distributions.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>

namespace rivalfold {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

PairedTest finish(double mean, double centre, double se, double df, double level) {
    PairedTest test;
    test.se = se;
    test.df = df;
    test.p_holm = kNaN;
    if (!(se > 0)) {
        test.t = test.p = kNaN;
        test.low = test.high = centre;
        test.reason = "the differences are all equal, so nothing varies that could be tested";
        return test;
    }
    test.t = mean / se;
    test.p = student_two_sided(test.t, df);
    const double reach = student_quantile(level / 2, df) * se;
    test.low = centre - reach;
    test.high = centre + reach;
    return test;
}

}  // namespace

PairedTest row_test(const Eigen::VectorXd& d, double level) {
    return finish(d.mean(), d.mean(), standard_error(d, {}, 0), static_cast<double>(d.size()) - 1, level);
}

PairedTest cluster_test(const Eigen::VectorXd& d, const std::vector<int>& cluster, std::size_t n_clusters,
                        double level) {
    return finish(d.mean(), d.mean(), standard_error(d, cluster, n_clusters), static_cast<double>(n_clusters) - 1,
                  level);
}

PairedTest corrected_test(const Eigen::VectorXd& s, int folds, double difference, double level) {
    const auto splits = static_cast<double>(s.size());
    const double mean = s.mean();
    const bool varies = s.maxCoeff() > s.minCoeff();
    const double variance = varies ? (s.array() - mean).square().sum() / (splits - 1) : 0;
    return finish(mean, difference, std::sqrt(variance * (1 / splits + 1 / static_cast<double>(folds - 1))), splits - 1,
                  level);
}

std::vector<double> holm(const std::vector<double>& p) {
    std::vector<std::size_t> order;
    for (std::size_t i = 0; i < p.size(); ++i)
        if (!std::isnan(p[i])) order.push_back(i);
    std::sort(order.begin(), order.end(), [&](std::size_t a, std::size_t b) { return p[a] < p[b]; });
    std::vector<double> adjusted(p.size(), kNaN);
    double running = 0;
    for (std::size_t k = 0; k < order.size(); ++k) {
        running = std::max(running, std::min(1.0, static_cast<double>(order.size() - k) * p[order[k]]));
        adjusted[order[k]] = running;
    }
    return adjusted;
}

}  // namespace rivalfold
