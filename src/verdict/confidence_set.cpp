#include "rivalfold/verdict/confidence_set.hpp"

#include "rivalfold/folds/random.hpp"

#include <algorithm>
#include <cmath>
#include <numeric>

namespace rivalfold {
namespace {

constexpr Eigen::Index kMostUnits = 20000;
constexpr Eigen::Index kGroups = 5000;

/// What is resampled: rows, clusters or groups of rows, each with its sums and its number of rows.
struct Units {
    Eigen::MatrixXd sums;  ///< m x units
    Eigen::VectorXd size;  ///< units
};

Units sum_units(const Eigen::MatrixXd& columns, const std::vector<int>& unit_of, Eigen::Index n_units) {
    Units units{Eigen::MatrixXd::Zero(columns.cols(), n_units), Eigen::VectorXd::Zero(n_units)};
    for (Eigen::Index i = 0; i < columns.rows(); ++i) {
        const int unit = unit_of[static_cast<std::size_t>(i)];
        units.sums.col(unit) += columns.row(i).transpose();
        units.size(unit) += 1;
    }
    return units;
}

Units make_units(const Eigen::MatrixXd& columns, const std::vector<int>& clusters, std::size_t n_clusters,
                 std::uint64_t seed, bool& grouped) {
    grouped = false;
    if (!clusters.empty()) return sum_units(columns, clusters, static_cast<Eigen::Index>(n_clusters));
    if (columns.rows() <= kMostUnits) return {columns.transpose(), Eigen::VectorXd::Ones(columns.rows())};
    grouped = true;
    RandomStream stream(seed, Purpose::confidence_set, 0xffffffffU);
    const std::vector<std::uint32_t> order = shuffled(static_cast<std::size_t>(columns.rows()), stream);
    std::vector<int> group(order.size());
    for (std::size_t position = 0; position < order.size(); ++position)
        group[order[position]] = static_cast<int>(position % kGroups);
    return sum_units(columns, group, kGroups);
}

/// Walks down the set with one statistic: `worst` gives the statistic, the theory to drop and the statistic of every
/// resample.
template <class Worst>
SetPath walk(std::size_t m, std::size_t resamples, Worst worst) {
    SetPath path;
    path.p.assign(m, 1);
    std::vector<Eigen::Index> left(m);
    std::iota(left.begin(), left.end(), Eigen::Index{0});
    double running = 0;
    while (left.size() > 1) {
        std::vector<double> null(resamples, 0);
        std::size_t drop = 0;
        const double statistic = worst(left, null, drop);
        const auto at_least = static_cast<double>(
            std::count_if(null.begin(), null.end(), [&](double value) { return value >= statistic; }));
        running = std::max(running, at_least / static_cast<double>(resamples));
        path.p[static_cast<std::size_t>(left[drop])] = running;
        path.eliminated.push_back(static_cast<std::size_t>(left[drop]));
        left.erase(left.begin() + static_cast<std::ptrdiff_t>(drop));
    }
    path.eliminated.push_back(static_cast<std::size_t>(left.front()));
    return path;
}

}  // namespace

Eigen::MatrixXd bootstrap_means(const Eigen::MatrixXd& columns, const std::vector<int>& clusters,
                                std::size_t n_clusters, std::uint64_t seed, std::size_t resamples, bool& grouped) {
    const Units units = make_units(columns, clusters, n_clusters, seed, grouped);
    const auto n_units = static_cast<std::uint32_t>(units.size.size());
    Eigen::MatrixXd means(static_cast<Eigen::Index>(resamples), columns.cols());
    Eigen::VectorXd counts(units.size.size());
    for (std::size_t b = 0; b < resamples; ++b) {
        RandomStream stream(seed, Purpose::confidence_set, static_cast<std::uint32_t>(b));
        counts.setZero();
        for (std::uint32_t draw = 0; draw < n_units; ++draw) counts(stream.below_small(n_units)) += 1;
        means.row(static_cast<Eigen::Index>(b)) = (units.sums * counts).transpose() / units.size.dot(counts);
    }
    return means;
}

ConfidenceSet confidence_set(const Eigen::MatrixXd& losses, const std::vector<int>& clusters, std::size_t n_clusters,
                             std::uint64_t seed, std::size_t resamples) {
    ConfidenceSet set;
    set.resamples = resamples;
    const Eigen::RowVectorXd mean = losses.colwise().mean();
    // Deviations of each resample's means from the sample's: all that both statistics need.
    const Eigen::MatrixXd moved =
        bootstrap_means(losses, clusters, n_clusters, seed, resamples, set.grouped).rowwise() - mean;
    const auto m = static_cast<std::size_t>(losses.cols());
    const auto b = static_cast<double>(resamples);
    const double nothing = 1e-12 * mean.cwiseAbs().maxCoeff();  // deviations that are rounding alone
    set.range =
        walk(m, resamples, [&](const std::vector<Eigen::Index>& left, std::vector<double>& null, std::size_t& drop) {
            double statistic = 0, worst = -1;
            for (std::size_t i = 0; i < left.size(); ++i)
                for (std::size_t k = 0; k < left.size(); ++k) {
                    if (i == k) continue;
                    const Eigen::VectorXd d = moved.col(left[i]) - moved.col(left[k]);
                    const double deviation = std::sqrt(d.squaredNorm() / b);
                    if (!(deviation > nothing)) continue;
                    const double t = (mean(left[i]) - mean(left[k])) / deviation;
                    if (t > worst) {
                        worst = t;
                        drop = i;
                    }
                    if (i > k) continue;
                    statistic = std::max(statistic, std::fabs(t));
                    for (std::size_t r = 0; r < resamples; ++r)
                        null[r] = std::max(null[r], std::fabs(d(static_cast<Eigen::Index>(r))) / deviation);
                }
            return statistic;
        });
    set.maximum =
        walk(m, resamples, [&](const std::vector<Eigen::Index>& left, std::vector<double>& null, std::size_t& drop) {
            Eigen::VectorXd centre = Eigen::VectorXd::Zero(moved.rows());
            double mean_of_set = 0;
            for (const Eigen::Index a : left) {
                centre += moved.col(a) / static_cast<double>(left.size());
                mean_of_set += mean(a) / static_cast<double>(left.size());
            }
            double statistic = 0;
            bool first = true;
            for (std::size_t i = 0; i < left.size(); ++i) {
                const Eigen::VectorXd d = moved.col(left[i]) - centre;
                const double deviation = std::sqrt(d.squaredNorm() / b);
                if (!(deviation > nothing)) continue;
                const double t = (mean(left[i]) - mean_of_set) / deviation;
                for (std::size_t r = 0; r < resamples; ++r) {
                    const double value = d(static_cast<Eigen::Index>(r)) / deviation;
                    null[r] = first ? value : std::max(null[r], value);
                }
                if (first || t > statistic) {
                    statistic = t;
                    drop = i;
                }
                first = false;
            }
            return statistic;
        });
    return set;
}

}  // namespace rivalfold
