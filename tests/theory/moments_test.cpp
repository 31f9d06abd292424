#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include "rivalfold/theory/kernels.hpp"
#include "rivalfold/theory/sample.hpp"

using namespace rivalfold;
using Eigen::Index;
using Eigen::MatrixXd;

namespace {

const double kGap = std::numeric_limits<double>::quiet_NaN();

/// Invented answers as a survey: eleven items, a category of three levels, and the given share of gaps in three items.
Survey survey_of(Index n, double shift, double gap_share, std::uint64_t seed = 7) {
    Survey survey;
    survey.values = invented_answers(n, seed).values.array() + shift;
    RandomStream stream(seed, Purpose::simulation, 1);
    for (const Index column : {0, 4, 7})
        for (Index i = 0; i < n; ++i)
            if (stream.unit() < gap_share) survey.values(i, column) = kGap;
    Category category{"sector", {"a", "b", "c"}, {}};
    for (Index i = 0; i < n; ++i) category.codes.push_back(static_cast<int>(stream.below(3)));
    survey.categories.push_back(category);
    return survey;
}

/// The Gram matrix of rows as its definition says: [values, 1, observed masks of gappy columns].
Gram gram_of(const Sample& sample, const std::vector<Index>& in) {
    MatrixXd rows(static_cast<Index>(in.size()), gram_size(sample));
    for (std::size_t r = 0; r < in.size(); ++r) {
        const auto i = static_cast<Index>(r);
        rows.row(i).head(sample.n_columns) = sample.values.row(in[r]);
        rows(i, sample.n_columns) = 1;
        for (Index g = 0; g < sample.gaps.cols(); ++g) rows(i, sample.n_columns + 1 + g) = 1 - sample.gaps(in[r], g);
    }
    return (rows.transpose() * rows).eval();
}

struct BothWays {
    Moments downdated, direct;
    bool suspect = false;
};

BothWays without(const Sample& sample, const std::function<bool(Index)>& held_out) {
    std::vector<Index> all, out, in;
    for (Index i = 0; i < sample.n; ++i) {
        all.push_back(i);
        (held_out(i) ? out : in).push_back(i);
    }
    BothWays both;
    moments_by_downdating(sample, gram_of(sample, all), gram_of(sample, out), both.downdated, both.suspect);
    moments_of_rows(sample, in, both.direct);
    return both;
}

/// The largest disagreement, relative to the deviations of the columns.
double disagreement(const Moments& a, const Moments& b) {
    double worst = std::fabs(a.n - b.n);
    for (Index h = 0; h < a.mean.size(); ++h) {
        if (!(b.sd(h) > 0)) continue;
        worst = std::max({worst, std::fabs(a.mean(h) - b.mean(h)) / b.sd(h), std::fabs(a.sd(h) - b.sd(h)) / b.sd(h)});
        for (Index k = 0; k < a.mean.size(); ++k)
            if (b.sd(k) > 0)
                worst = std::max(worst, std::fabs(a.ss(h, k) - b.ss(h, k)) / (b.sd(h) * b.sd(k) * (b.n - 1)));
    }
    return worst;
}

}  // namespace

TEST_CASE("a sample is centred, gaps are zero and marked, and levels are 0 or 1", "[theory]") {
    const Survey survey = survey_of(60, 100, 0.2);
    const Sample sample = build_sample(survey);
    REQUIRE(sample.n_variables == 11);
    REQUIRE(sample.n_columns == 14);
    REQUIRE(sample.gappy == std::vector<int>{0, 4, 7});
    CHECK(gram_size(sample) == 18);
    CHECK(sample.gap_of == std::vector<int>{0, -1, -1, -1, 1, -1, -1, 2, -1, -1, -1, -1, -1, -1});
    for (int v = 0; v < 11; ++v) {
        CHECK(std::fabs(sample.values.col(v).sum()) < 1e-10);
        for (Index i = 0; i < sample.n; ++i) {
            const bool gap = std::isnan(survey.values(i, v));
            CHECK(sample.values(i, v) == (gap ? 0 : survey.values(i, v) - sample.centre(v)));
            const int g = sample.gap_of[static_cast<std::size_t>(v)];
            if (g >= 0) CHECK(sample.gaps(i, g) == (gap ? 1 : 0));
        }
    }
    REQUIRE(sample.categories.size() == 1);
    CHECK(sample.categories[0].first == 11);
    CHECK(sample.categories[0].n_levels == 3);
    for (Index i = 0; i < sample.n; ++i)
        for (int level = 0; level < 3; ++level)
            CHECK(sample.values(i, 11 + level) ==
                  (survey.categories[0].codes[static_cast<std::size_t>(i)] == level ? 1 : 0));
    CHECK(sample.centre.tail(3).isZero(0));
}

TEST_CASE("direct moments are means, deviations and products of the rows, gaps filled with their own mean",
          "[theory]") {
    const Survey survey = survey_of(40, 0, 0.2);
    const Sample sample = build_sample(survey);
    std::vector<Index> in;
    for (Index i = 0; i < 40; ++i)
        if (i % 4 != 1) in.push_back(i);
    Moments moments;
    moments_of_rows(sample, in, moments);
    CHECK(moments.n == 30);
    CHECK(moments.constant == -1);
    MatrixXd raw(30, 11);
    for (Index r = 0; r < 30; ++r) raw.row(r) = survey.values.row(in[static_cast<std::size_t>(r)]);
    for (Index v = 0; v < 11; ++v) {
        double sum = 0, observed = 0;
        for (Index r = 0; r < 30; ++r)
            if (!std::isnan(raw(r, v))) sum += raw(r, v), ++observed;
        for (Index r = 0; r < 30; ++r)
            if (std::isnan(raw(r, v))) raw(r, v) = sum / observed;
        CHECK(moments.mean(v) + sample.centre(v) == Approx(sum / observed).epsilon(1e-13));
    }
    const MatrixXd centred = raw.rowwise() - raw.colwise().mean();
    const MatrixXd ss = centred.transpose() * centred;
    CHECK((moments.ss.topLeftCorner(11, 11) - ss).cwiseAbs().maxCoeff() < 1e-12 * ss.maxCoeff());
    for (Index v = 0; v < 11; ++v) CHECK(moments.sd(v) == Approx(std::sqrt(ss(v, v) / 29)).epsilon(1e-13));
}

TEST_CASE("moments by downdating equal direct ones to 1e-12, with gaps and far from zero", "[theory]") {
    for (const double shift : {0.0, 1e4, 1e8})
        for (const double gap_share : {0.0, 0.15})
            for (const int folds : {2, 5, 10}) {
                const Sample sample = build_sample(survey_of(200, shift, gap_share));
                for (int k = 0; k < folds; ++k) {
                    const BothWays both = without(sample, [&](Index i) { return i % folds == k; });
                    INFO("shift " << shift << ", gaps " << gap_share << ", " << folds << " folds");
                    CHECK_FALSE(both.suspect);
                    CHECK(disagreement(both.downdated, both.direct) < 1e-12);
                    CHECK(both.downdated.constant == -1);
                    CHECK(both.downdated.in_force == both.direct.in_force);
                }
            }
}

TEST_CASE("items shifted by 1e8 have the same deviations and products to 1e-12", "[theory]") {
    for (const double gap_share : {0.0, 0.15}) {
        const Sample near = build_sample(survey_of(200, 0, gap_share)),
                     far = build_sample(survey_of(200, 1e8, gap_share));
        Moments a = without(near, [](Index i) { return i % 7 == 0; }).downdated,
                b = without(far, [](Index i) { return i % 7 == 0; }).downdated;
        // The centre of the shifted sample is a rounded number near 1e8, so means are compared in raw units.
        CHECK(((far.centre + b.mean) - (near.centre + a.mean))
                  .head(11)
                  .isApprox(Eigen::VectorXd::Constant(11, 1e8), 1e-15));
        a.mean.setZero();
        b.mean.setZero();
        CHECK(disagreement(a, b) < 1e-12);
    }
}

TEST_CASE("a large value among the held-out rows makes downdating suspect, and the direct pass is right", "[theory]") {
    Survey survey = survey_of(100, 0, 0);
    const auto held_out = [](Index i) { return i % 10 == 3; };
    const Moments clean = without(build_sample(survey), held_out).direct;
    survey.values(33, 5) = 1e8;
    const BothWays both = without(build_sample(survey), held_out);
    CHECK(both.suspect);
    CHECK(disagreement(both.downdated, both.direct) > 1e-9);  // what the check is for
    // Centring on a mean of 1e6 leaves the other cells of that column 1e-10 of their own size.
    CHECK(std::fabs(both.direct.sd(5) - clean.sd(5)) < 1e-9 * clean.sd(5));
    Moments direct = both.direct, expected = clean;
    direct.mean.setZero();
    expected.mean.setZero();
    CHECK(disagreement(direct, expected) < 1e-9);
}

TEST_CASE("as long as downdating is not suspect it keeps 1e-11", "[theory]") {
    bool suspect_seen = false;
    double worst = 0;
    for (double outlier = 10; outlier < 1e5; outlier *= 1.3) {
        Survey survey = survey_of(100, 0, 0);
        survey.values(33, 5) = outlier;
        const BothWays both = without(build_sample(survey), [](Index i) { return i % 10 == 3; });
        suspect_seen = suspect_seen || both.suspect;
        if (!both.suspect) worst = std::max(worst, disagreement(both.downdated, both.direct));
    }
    CHECK(suspect_seen);
    CHECK(worst < 1e-11);
}

TEST_CASE("a column that does not vary among the training rows is named both ways", "[theory]") {
    Survey survey = survey_of(30, 0, 0);
    survey.values.col(6).setConstant(4);
    survey.values(8, 6) = 5;
    const BothWays both = without(build_sample(survey), [](Index i) { return i == 8 || i == 9; });
    CHECK(both.suspect);  // so that the direct pass decides
    CHECK(both.direct.constant == 6);
    survey.values.col(6).setConstant(kGap);
    survey.values(8, 6) = 5;
    survey.values(9, 6) = 4;
    const BothWays empty = without(build_sample(survey), [](Index i) { return i == 8 || i == 9; });
    CHECK(empty.downdated.constant == 6);  // no observed cell is left
    CHECK(empty.direct.constant == 6);
}

TEST_CASE("the first level that is present and levels that are absent are out of force", "[theory]") {
    Survey survey = survey_of(30, 0, 0);
    for (Index i = 0; i < 30; ++i) survey.categories[0].codes[static_cast<std::size_t>(i)] = i < 3 ? 0 : i < 6 ? 1 : 2;
    const Sample sample = build_sample(survey);
    const auto levels = [&](Index first, Index last) {
        const BothWays both = without(sample, [&](Index i) { return i >= first && i < last; });
        CHECK(both.downdated.in_force == both.direct.in_force);
        return std::vector<int>(both.direct.in_force.end() - 3, both.direct.in_force.end());
    };
    CHECK(levels(20, 30) == std::vector<int>{0, 1, 1});
    CHECK(levels(0, 3) == std::vector<int>{0, 0, 1});  // the first is absent, the second takes its part
    CHECK(levels(3, 6) == std::vector<int>{0, 0, 1});  // the second is absent
    CHECK(levels(0, 6) == std::vector<int>{0, 0, 0});  // one level is left
}
