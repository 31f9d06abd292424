// Is the difference between two contestants' losses more than chance? The two paired tests and what adjusts them.
// Sees losses only; knows neither theories nor files.
#pragma once

#include <Eigen/Core>

#include <string>
#include <vector>

namespace rivalfold {

/// A test of mean difference D = 0 with its interval. Numbers that do not exist are NaN, and `reason` says why.
struct PairedTest {
    double se = 0, t = 0, df = 0, p = 0;
    double p_holm = 0;         ///< NaN where no adjustment applies
    double low = 0, high = 0;  ///< D -+ t-quantile(1 - level / 2) x se, in units of loss
    std::string reason;
};

/// Row test: t = D / (sd(d) / sqrt n), n - 1 degrees of freedom. `d`: loss differences of n >= 2 rows.
PairedTest row_test(const Eigen::VectorXd& d, double level);

/// Row test by cluster: se = sqrt(G/(G-1) sum over clusters of (sum over its rows of (d_i - D))^2) / n, G - 1 degrees
/// of freedom (Liang & Zeger 1986, Biometrika 73(1), 13-22). `cluster`: 0 .. n_clusters - 1 per row.
PairedTest cluster_test(const Eigen::VectorXd& d, const std::vector<int>& cluster, std::size_t n_clusters,
                        double level);

/// Corrected repeated k-fold test: s = differences of the mean losses of R x K splits; t = mean(s) / (sd(s) sqrt(1/(RK)
/// + 1/(K-1))), RK - 1 degrees of freedom (Nadeau & Bengio 2003, Machine Learning 52, 239-281; Bouckaert & Frank 2004,
/// PAKDD). The interval is centred on `difference`, the mean over rows.
PairedTest corrected_test(const Eigen::VectorXd& s, int folds, double difference, double level);

/// Holm's step-down adjustment (Holm 1979, Scandinavian Journal of Statistics 6, 65-70). NaN entries are left out and
/// stay NaN.
std::vector<double> holm(const std::vector<double>& p);

}  // namespace rivalfold
