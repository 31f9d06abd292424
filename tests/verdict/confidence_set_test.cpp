#include "judged.hpp"

#include "rivalfold/verdict/confidence_set.hpp"
#include "rivalfold/verdict/distributions.hpp"

#include <numeric>

using namespace rivalfold;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

constexpr std::size_t kResamples = 2000;

/// Losses of m theories on n rows with a common part; theory j is worse by worse[j] on average.
MatrixXd invented_losses(Index n, const std::vector<double>& worse, std::uint32_t draw = 1) {
    RandomStream stream(91, Purpose::simulation, draw);
    MatrixXd losses(n, static_cast<Index>(worse.size()));
    for (Index i = 0; i < n; ++i) {
        const double common = 2 + std::fabs(bell(stream));
        for (Index j = 0; j < losses.cols(); ++j)
            losses(i, j) = common + worse[static_cast<std::size_t>(j)] + 0.5 * bell(stream);
    }
    return losses;
}

MatrixXd resampled(const MatrixXd& losses, std::uint64_t seed, const std::vector<int>& clusters = {},
                   std::size_t n_clusters = 0) {
    bool grouped = true;
    const MatrixXd means = bootstrap_means(losses, clusters, n_clusters, seed, kResamples, grouped);
    CHECK_FALSE(grouped);
    return means;
}

/// The paper's algorithm once more, by loops, on given bootstrap means. Statistic: T_R or T_max.
SetPath walk(const VectorXd& mean, const MatrixXd& boot, bool range) {
    std::vector<Index> left(static_cast<std::size_t>(mean.size()));
    std::iota(left.begin(), left.end(), Index{0});
    SetPath path;
    path.p.assign(left.size(), 1);
    double running = 0;
    while (left.size() > 1) {
        const auto m = static_cast<double>(left.size());
        // Per theory (or per ordered pair) its mean difference and its difference in each resample.
        std::vector<VectorXd> shifts;
        std::vector<double> d;
        std::vector<std::size_t> whose;
        for (std::size_t a = 0; a < left.size(); ++a) {
            if (range)
                for (std::size_t b = 0; b < left.size(); ++b) {
                    if (a == b) continue;
                    d.push_back(mean(left[a]) - mean(left[b]));
                    shifts.emplace_back((boot.col(left[a]) - boot.col(left[b])).array() - d.back());
                    whose.push_back(a);
                }
            else {
                VectorXd all = VectorXd::Zero(boot.rows());
                double of_set = 0;
                for (const Index b : left) all += boot.col(b) / m, of_set += mean(b) / m;
                d.push_back(mean(left[a]) - of_set);
                shifts.emplace_back((boot.col(left[a]) - all).array() - d.back());
                whose.push_back(a);
            }
        }
        double statistic = -1e300;
        std::size_t worst = 0;
        VectorXd null = VectorXd::Constant(boot.rows(), -1e300);
        for (std::size_t k = 0; k < d.size(); ++k) {
            const double root = std::sqrt(shifts[k].squaredNorm() / static_cast<double>(boot.rows()));
            if (d[k] / root > statistic) statistic = d[k] / root, worst = whose[k];
            null = null.cwiseMax(shifts[k] / root);
        }
        running = std::max(running,
                           static_cast<double>((null.array() >= statistic).count()) / static_cast<double>(boot.rows()));
        path.p[static_cast<std::size_t>(left[worst])] = running;
        path.eliminated.push_back(static_cast<std::size_t>(left[worst]));
        left.erase(left.begin() + static_cast<std::ptrdiff_t>(worst));
    }
    path.eliminated.push_back(static_cast<std::size_t>(left[0]));
    return path;
}

void check_same(const SetPath& a, const SetPath& b) {
    CHECK(a.eliminated == b.eliminated);
    REQUIRE(a.p.size() == b.p.size());
    for (std::size_t t = 0; t < a.p.size(); ++t) CHECK(a.p[t] == Approx(b.p[t]).margin(1e-12));
}

}  // namespace

// Hansen, Lunde & Nason 2011: T_R is symmetric in a and b, so the largest |D_ab| is the largest D_ab over ordered
// pairs.
TEST_CASE("both statistics walk through the set as a second reading of the paper does", "[set]") {
    for (std::uint32_t draw = 1; draw <= 6; ++draw) {
        const MatrixXd losses = invented_losses(60, {0, 0.03, 0.1, 0.12, 0.3}, draw);
        const ConfidenceSet set = confidence_set(losses, {}, 0, draw, kResamples);
        const MatrixXd boot = resampled(losses, draw);
        const VectorXd mean = losses.colwise().mean().transpose();
        CHECK(set.resamples == kResamples);
        check_same(set.range, walk(mean, boot, true));
        check_same(set.maximum, walk(mean, boot, false));
    }
}

TEST_CASE("of two theories, the worse has the two-sided p of the bootstrap", "[set]") {
    const MatrixXd losses = invented_losses(80, {0, 0.1});
    const ConfidenceSet set = confidence_set(losses, {}, 0, 5, kResamples);
    const MatrixXd boot = resampled(losses, 5);
    const VectorXd d = losses.col(0) - losses.col(1);
    const double mean = d.mean();
    const double beyond =
        static_cast<double>((((boot.col(0) - boot.col(1)).array() - mean).abs() >= std::fabs(mean)).count());
    const std::size_t worse = mean > 0 ? 0 : 1;
    CHECK(set.range.p[worse] == beyond / kResamples);
    CHECK(set.range.p[1 - worse] == 1);
    CHECK(set.range.eliminated == std::vector<std::size_t>{worse, 1 - worse});
    // Near the paired t test, and for T_max one side of it doubles (D_a. = -D_b.).
    const PairedTest t = row_test(d, 0.05);
    CHECK(set.range.p[worse] == Approx(t.p).margin(0.03));
    CHECK(set.maximum.p[worse] == Approx(set.range.p[worse]).margin(1e-12));
}

TEST_CASE("theories that lose the same everywhere all have p 1", "[set]") {
    const MatrixXd one = invented_losses(50, {0});
    const MatrixXd losses = one.replicate(1, 3);
    const ConfidenceSet set = confidence_set(losses, {}, 0, 1, kResamples);
    CHECK(set.range.p == std::vector<double>{1, 1, 1});
    CHECK(set.maximum.p == std::vector<double>{1, 1, 1});
}

TEST_CASE("two equal theories stand or fall together against a third", "[set]") {
    const MatrixXd two = invented_losses(100, {0.25, 0}, 3);
    MatrixXd losses(100, 3);
    losses << two.col(0), two.col(1), two.col(0);
    for (const double rounding : {0.0, 1e-16}) {
        losses.col(2) = two.col(0) * (1 + rounding);
        const ConfidenceSet set = confidence_set(losses, {}, 0, 2, kResamples),
                            alone = confidence_set(two, {}, 0, 2, kResamples);
        CHECK(set.range.p[0] == Approx(set.range.p[2]).margin(1e-12));
        CHECK(set.range.p[0] == Approx(alone.range.p[0]).margin(1e-12));  // the pair without variance is left out
        CHECK(set.range.p[1] == 1);
    }
}

TEST_CASE("a clearly worse theory leaves first, with p 0, and the best stays with p 1", "[set]") {
    const ConfidenceSet set = confidence_set(invented_losses(200, {0.02, 2, 0, 0.01}), {}, 0, 1, kResamples);
    for (const SetPath* path : {&set.range, &set.maximum}) {
        REQUIRE(path->eliminated.size() == 4);
        CHECK(path->eliminated.front() == 1);
        CHECK(path->p[1] == 0);
        CHECK(path->p[path->eliminated.back()] == 1);
        for (std::size_t k = 1; k < 4; ++k) CHECK(path->p[path->eliminated[k]] >= path->p[path->eliminated[k - 1]]);
    }
}

TEST_CASE("clusters of one row are rows", "[set]") {
    const MatrixXd losses = invented_losses(70, {0, 0.1, 0.2});
    std::vector<int> clusters(70);
    std::iota(clusters.begin(), clusters.end(), 0);
    const ConfidenceSet rows = confidence_set(losses, {}, 0, 4, kResamples),
                        by_cluster = confidence_set(losses, clusters, 70, 4, kResamples);
    check_same(rows.range, by_cluster.range);
    check_same(rows.maximum, by_cluster.maximum);
}

TEST_CASE("whole clusters are drawn, and their mean is a ratio of sums", "[set]") {
    MatrixXd losses(4, 1);
    losses << 10, 1, 2, 3;  // clusters of one row and of three
    const MatrixXd means = resampled(losses, 8, {0, 1, 1, 1}, 2);
    int seen[3] = {0, 0, 0};
    for (Index b = 0; b < means.rows(); ++b) {
        const double value = means(b, 0);
        if (value == Approx(10).epsilon(1e-12))
            ++seen[0];
        else if (value == Approx(4).epsilon(1e-12))
            ++seen[1];
        else if (value == Approx(2).epsilon(1e-12))
            ++seen[2];
        else
            FAIL("a mean of " << value << " that no draw of two clusters has");
    }
    CHECK(seen[0] / 2000.0 == Approx(0.25).margin(0.04));  // four Monte Carlo standard errors
    CHECK(seen[1] / 2000.0 == Approx(0.5).margin(0.045));
    CHECK(seen[2] / 2000.0 == Approx(0.25).margin(0.04));
}

TEST_CASE("rows that repeat each other within clusters do not make a set surer", "[set]") {
    const MatrixXd once = invented_losses(40, {0, 0.12});
    const MatrixXd five = once.replicate(5, 1);
    std::vector<int> clusters(200);
    for (std::size_t i = 0; i < 200; ++i) clusters[i] = static_cast<int>(i % 40);
    const double p = confidence_set(once, {}, 0, 1, kResamples).range.p[1];
    CHECK(confidence_set(five, clusters, 40, 1, kResamples).range.p[1] == Approx(p).margin(1e-12));
    CHECK(confidence_set(five, {}, 0, 1, kResamples).range.p[1] < p / 2);
}

TEST_CASE("a resampled mean has the mean and the standard error of the mean", "[set]") {
    const MatrixXd losses = invented_losses(120, {0, 1});
    const MatrixXd means = resampled(losses, 3);
    for (Index j = 0; j < 2; ++j) {
        const VectorXd centred = losses.col(j).array() - losses.col(j).mean();
        const double se = std::sqrt(centred.squaredNorm()) / 120;  // of a resampled mean: divisor n
        CHECK(means.col(j).mean() == Approx(losses.col(j).mean()).margin(4 * se / std::sqrt(2000.0)));
        const VectorXd apart = means.col(j).array() - means.col(j).mean();
        CHECK(std::sqrt(apart.squaredNorm() / 2000) == Approx(se).epsilon(4 / std::sqrt(2 * 2000.0)));
    }
}

TEST_CASE("the seed alone decides the draws: neither the other theories nor their order, unit or level", "[set]") {
    const MatrixXd losses = invented_losses(60, {0, 0.05, 0.1, 0.2});
    const ConfidenceSet set = confidence_set(losses, {}, 0, 6, kResamples);
    check_same(set.range, confidence_set(losses, {}, 0, 6, kResamples).range);
    CHECK(set.range.p != confidence_set(losses, {}, 0, 7, kResamples).range.p);
    const std::vector<Index> order{2, 0, 3, 1};
    const ConfidenceSet shuffled_set = confidence_set(losses(Eigen::all, order), {}, 0, 6, kResamples);
    const ConfidenceSet scaled = confidence_set(losses * 1024, {}, 0, 6, kResamples);
    const VectorXd level = losses.col(0) * 3;
    const ConfidenceSet shifted = confidence_set(losses.colwise() + level, {}, 0, 6, kResamples);
    for (std::size_t k = 0; k < 4; ++k) {
        const auto old = static_cast<std::size_t>(order[k]);
        CHECK(shuffled_set.range.p[k] == set.range.p[old]);
        CHECK(shuffled_set.maximum.p[k] == Approx(set.maximum.p[old]).margin(1.5 / kResamples));
        CHECK(scaled.range.p[k] == set.range.p[k]);
        CHECK(shifted.range.p[k] == Approx(set.range.p[k]).margin(1.5 / kResamples));
    }
    CHECK(resampled(losses.leftCols(1), 6).col(0).isApprox(resampled(losses, 6).col(0), 1e-13));
}

TEST_CASE("above 20,000 rows the rows are drawn in groups, with the same standard error", "[set]") {
    const MatrixXd losses = invented_losses(20001, {0});
    bool grouped = false;
    const MatrixXd means = bootstrap_means(losses, {}, 0, 1, kResamples, grouped);
    CHECK(grouped);
    const VectorXd centred = losses.col(0).array() - losses.col(0).mean(),
                   apart = means.col(0).array() - means.col(0).mean();
    const double se = std::sqrt(centred.squaredNorm()) / 20001;
    CHECK(means.col(0).mean() == Approx(losses.col(0).mean()).margin(4 * se / std::sqrt(2000.0)));
    // Groups dealt at random: the variance between 5,000 groups has a relative error of sqrt(2 / 5000), the draws one
    // of sqrt(2 / 2000).
    CHECK(apart.squaredNorm() / 2000 == Approx(se * se).epsilon(4 * std::sqrt(2.0 / 5000 + 2.0 / 2000)));
}
