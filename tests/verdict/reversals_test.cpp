#include "judged.hpp"

#include "rivalfold/verdict/distributions.hpp"
#include "rivalfold/verdict/outcome.hpp"
#include "rivalfold/verdict/reversals.hpp"

using namespace rivalfold;

namespace {

/// One segment's comparison of two theories: D = loss(a) - loss(b), and each test's standard error with its degrees of
/// freedom.
struct Side {
    double difference, rows_se, rows_df, corrected_se, corrected_df;
};

PairReport report_of(std::size_t a, std::size_t b, const Side& side) {
    PairReport report;
    report.a = a;
    report.b = b;
    report.theories = true;
    report.difference = side.difference;
    report.rows.se = side.rows_se;
    report.rows.df = side.rows_df;
    report.corrected.se = side.corrected_se;
    report.corrected.df = side.corrected_df;
    return report;
}

/// A run of two or three theories with a segment per element; pairs are then made by hand.
Outcome outcome_of(std::size_t n_segments, bool three = false, const std::string& verdict = "") {
    const std::string text = std::string(R"(study: refits
data: {file: refits.csv}
constructs:
  planning: {indicators: ["pln*"]}
  skill: {indicators: ["skl*"]}
  delivery: {indicators: ["dlv*"]}
target: delivery
trial: {folds: 5, repeats: 2}
theories:
  - {name: A, equations: {delivery: [planning]}}
  - {name: B, equations: {delivery: [skill]}}
)") + (three ? "  - {name: C, equations: {delivery: [planning, skill]}}\n" : "") +
                             verdict;
    const std::string data = invented_answers(60).csv();
    const auto finished = [&] {
        Judged judged = run_and_judge(text, data);
        Outcome out;
        out.study = judged.contest.study;
        out.survey = judged.contest.survey;
        out.sample = std::shared_ptr<Sample>(std::move(judged.contest.sample));
        out.trial = std::move(judged.trial);
        out.verdict = std::move(judged.verdict);
        return out;
    };
    Outcome whole = finished();
    for (std::size_t s = 0; s < n_segments; ++s) {
        whole.segments.push_back(finished());
        whole.segments.back().segment_name = "kind: " + std::to_string(s);
        whole.segments.back().verdict.pairs.clear();
    }
    return whole;
}

Reversal reversal_of(const Side& first, const Side& second) {
    Outcome whole = outcome_of(2);
    whole.segments[0].verdict.pairs = {report_of(0, 1, first)};
    whole.segments[1].verdict.pairs = {report_of(0, 1, second)};
    const std::vector<Reversal> found = find_reversals(whole);
    REQUIRE(found.size() == 1);
    return found[0];
}

}  // namespace

// Frozen in tests/reference/outside/welch.py: scipy.stats.ttest_ind(equal_var=False).
TEST_CASE("a reversal is Welch's test of the difference of two differences", "[reversals]") {
    for (const auto& line : frozen_table("reference/outside/welch.csv")) {
        const double se_1 = number(line, "se_1"), se_2 = number(line, "se_2");
        const Reversal found = reversal_of({number(line, "mean_1"), se_1, number(line, "df_1"), se_1 / 2, 999},
                                           {number(line, "mean_2"), se_2, number(line, "df_2"), se_2 / 2, 999});
        CHECK(found.difference_first == number(line, "mean_1"));
        CHECK(found.difference_second == number(line, "mean_2"));
        CHECK(found.difference == found.difference_first - found.difference_second);
        CHECK(found.t == Approx(number(line, "t")).epsilon(1e-12));
        CHECK(found.df == Approx(number(line, "df")).epsilon(1e-12));
        CHECK(found.p == Approx(number(line, "p")).epsilon(1e-10));
        CHECK(found.p_holm == found.p);
        const double reach = student_quantile(0.025, found.df) * found.se;
        CHECK(found.low == Approx(found.difference - reach).epsilon(1e-12));
        CHECK(found.high == Approx(found.difference + reach).epsilon(1e-12));
    }
}

TEST_CASE("each segment brings the larger of its two standard errors, with that test's degrees of freedom",
          "[reversals]") {
    const Reversal found = reversal_of({1.0, 0.3, 50, 0.4, 20}, {0.2, 0.5, 30, 0.1, 15});
    CHECK(found.se == Approx(std::sqrt(0.4 * 0.4 + 0.5 * 0.5)).epsilon(1e-14));
    CHECK(found.df == Approx(0.41 * 0.41 / (0.0256 / 20 + 0.0625 / 30)).epsilon(1e-12));
}

TEST_CASE("a pair that ranks the other way round in one segment is turned", "[reversals]") {
    Outcome whole = outcome_of(2);
    whole.segments[0].verdict.pairs = {report_of(0, 1, {-0.3, 0.1, 40, 0.05, 9})};
    whole.segments[1].verdict.pairs = {report_of(1, 0, {-0.2, 0.1, 40, 0.05, 9})};
    const std::vector<Reversal> found = find_reversals(whole);
    REQUIRE(found.size() == 1);
    CHECK((found[0].a == 0 && found[0].b == 1));
    CHECK((found[0].first == 0 && found[0].second == 1));
    CHECK(found[0].difference_first == -0.3);
    CHECK(found[0].difference_second == 0.2);
    CHECK(found[0].difference == Approx(-0.5).epsilon(1e-14));
    CHECK(found[0].p < 0.05);
    CHECK_FALSE(found[0].words.empty());
    CHECK(found[0].words.find("\"A\"") != std::string::npos);
    CHECK(found[0].words.find("\"B\"") != std::string::npos);
    CHECK(found[0].words.find("kind: 0") != std::string::npos);
}

TEST_CASE("a difference within chance has no words", "[reversals]") {
    CHECK(reversal_of({0.1, 0.1, 40, 0.05, 9}, {0.05, 0.1, 40, 0.05, 9}).words.empty());
}

// Holm 1979, over three pairs of theories and three pairs of segments.
TEST_CASE("Holm runs over every pair of theories and of segments at once", "[reversals]") {
    Outcome whole = outcome_of(3, true);
    for (std::size_t s = 0; s < 3; ++s) {
        const auto shift = static_cast<double>(s);
        whole.segments[s].verdict.pairs = {report_of(0, 1, {0.1 * shift, 0.05, 30, 0.04, 9}),
                                           report_of(0, 2, {0.03 * shift * shift, 0.05, 30, 0.04, 9}),
                                           report_of(1, 2, {-0.2 + 0.01 * shift, 0.05, 30, 0.04, 9})};
    }
    const std::vector<Reversal> found = find_reversals(whole);
    REQUIRE(found.size() == 9);
    std::vector<double> p;
    for (const Reversal& reversal : found) p.push_back(reversal.p);
    const std::vector<double> adjusted = holm(p);
    for (std::size_t k = 0; k < 9; ++k) CHECK(found[k].p_holm == adjusted[k]);
    for (const Reversal& reversal : found) CHECK(reversal.words.empty() == !(reversal.p_holm < 0.05));
}

TEST_CASE("benchmarks take no part in reversals", "[reversals]") {
    Outcome whole = outcome_of(2);
    for (Outcome& segment : whole.segments) {
        segment.verdict.pairs = {report_of(0, 1, {0.1, 0.05, 30, 0.04, 9}), report_of(0, 2, {9, 0.05, 30, 0.04, 9})};
        segment.verdict.pairs[1].theories = false;
    }
    CHECK(find_reversals(whole).size() == 1);
}

TEST_CASE("theories that predict the same within a segment have no reversal, with the reason", "[reversals]") {
    const double none = std::nan("");
    const Reversal found = reversal_of({0, none, none, none, none}, {0.1, 0.1, 30, 0.2, 9});
    CHECK(std::isnan(found.p));
    CHECK(std::isnan(found.p_holm));
    CHECK_FALSE(found.reason.empty());
    CHECK(found.words.empty());
}

TEST_CASE("the level of the study sets the interval", "[reversals]") {
    Outcome whole = outcome_of(2, false, "verdict: {level: 0.2}\n");
    for (Outcome& segment : whole.segments) segment.verdict.pairs = {report_of(0, 1, {0.1, 0.05, 30, 0.04, 9})};
    const std::vector<Reversal> found = find_reversals(whole);
    REQUIRE(found.size() == 1);
    CHECK(found[0].high == Approx(student_quantile(0.1, found[0].df) * found[0].se).epsilon(1e-12));
}
