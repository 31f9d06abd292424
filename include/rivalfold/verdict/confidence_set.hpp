// Which of several theories may still be the best? The model confidence set from row losses. Knows losses and clusters
// only.
#pragma once

#include <Eigen/Core>

#include <cstdint>
#include <vector>

namespace rivalfold {

/// One statistic's way through the set.
struct SetPath {
    std::vector<double> p;                ///< per theory, running maximum; the last one left has 1
    std::vector<std::size_t> eliminated;  ///< first to last, the survivor at the end
};

struct ConfidenceSet {
    SetPath range;    ///< T_R = max |D_ab| / sqrt(v_ab)
    SetPath maximum;  ///< T_max = max D_a. / sqrt(v_a.)
    std::size_t resamples = 0;
    bool grouped = false;  ///< above 20,000 rows: rows were first summed in 5,000 groups dealt at random
};

/// Model confidence set (Hansen, Lunde & Nason 2011, Econometrica 79(2), 453-497) for columns of `losses` (n rows x m
/// theories), by a bootstrap of rows, or of whole clusters with the mean as a ratio of sums. Resample b uses the stream
/// (seed, confidence_set, b), so the numbers depend on nothing else. A pair (a theory) whose bootstrap variance is 0 is
/// left out of the maximum; equal losses give p = 1.
ConfidenceSet confidence_set(const Eigen::MatrixXd& losses, const std::vector<int>& clusters, std::size_t n_clusters,
                             std::uint64_t seed, std::size_t resamples = 2000);

/// Means of `columns` (n x m) in each resample: resamples x m. The same streams for every caller with the same seed and
/// purpose.
Eigen::MatrixXd bootstrap_means(const Eigen::MatrixXd& columns, const std::vector<int>& clusters,
                                std::size_t n_clusters, std::uint64_t seed, std::size_t resamples, bool& grouped);

}  // namespace rivalfold
