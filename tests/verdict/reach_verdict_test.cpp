#include "judged.hpp"

#include "rivalfold/verdict/distributions.hpp"

using namespace rivalfold;
using Eigen::Index;
using Eigen::VectorXd;
using Numbers = std::vector<std::size_t>;

namespace {

constexpr Index kRows = 60;
constexpr int kFolds = 5, kRepeats = 4;

/// n differences with exactly the given mean and standard error of the mean.
VectorXd differences(Index n, double mean, double se, std::uint32_t stream_index) {
    RandomStream stream(12, Purpose::simulation, stream_index);
    VectorXd noise(n);
    for (Index i = 0; i < n; ++i) noise(i) = bell(stream);
    noise.array() -= noise.mean();
    const double own = std::sqrt(noise.squaredNorm() / static_cast<double>(n - 1) / static_cast<double>(n));
    return (noise * (se / own)).array() + mean;
}

/// A contest of three theories whose losses are then made by hand. Theory c's losses are the first's plus differences.
struct HandMade {
    SmallContest contest;
    Trial trial;

    explicit HandMade(const std::string& keys = "", const std::string& verdict = "") {
        Answers answers = invented_answers(kRows);
        answers.names.push_back("yard");
        answers.values.conservativeResize(Eigen::NoChange, 12);
        for (Index i = 0; i < kRows; ++i) answers.values(i, 11) = static_cast<double>(i % 15);
        contest = prepare("study: refits\ndata: {file: refits.csv" + keys + "}\n" + R"(constructs:
  planning: {indicators: [pln1]}
  skill: {indicators: [skl1]}
  delivery: {indicators: [dlv1]}
target: delivery
theories:
  - {name: A, equations: {delivery: [planning]}}
  - {name: B, equations: {delivery: [skill]}}
  - {name: C, equations: {delivery: [{minimum: [planning, skill]}]}}
trial: {folds: 5, repeats: 4}
)" + verdict,
                          answers.csv());
        trial = run_trial(contest.study, contest.survey, *contest.sample, contest.plan, 1);
        for (std::size_t c = 0; c < 5; ++c)
            set(c, VectorXd::Constant(kRows, c < 3 ? 1 : 3) + differences(kRows, 0, 0.05, 77),
                VectorXd::Constant(kFolds * kRepeats, c < 3 ? 1 : 3));
    }

    void set(std::size_t c, const VectorXd& row_loss, const VectorXd& split_loss) {
        ContestantLosses& losses = trial.contestants[c];
        losses.row_loss = row_loss;
        losses.loss = row_loss.mean();
        losses.split_loss = split_loss;
    }
    /// Makes theory c worse than A by `mean`, with these t values of the row test and of the corrected test.
    void worse(std::size_t c, double mean, double t_rows, double t_splits) {
        const double n_splits = kFolds * kRepeats;
        const double correction = std::sqrt(n_splits * (1 / n_splits + 1.0 / (kFolds - 1)));
        set(c, trial.contestants[0].row_loss + differences(kRows, mean, mean / t_rows, static_cast<std::uint32_t>(c)),
            trial.contestants[0].split_loss +
                differences(kFolds * kRepeats, mean, mean / t_splits / correction, 20 + static_cast<std::uint32_t>(c)));
    }
    Verdict judged() const { return judge(contest, trial); }
};

const PairReport& pair(const Verdict& verdict, std::size_t a, std::size_t b) {
    for (const PairReport& report : verdict.pairs)
        if (report.a == a && report.b == b) return report;
    throw std::logic_error("no such pair");
}

}  // namespace

TEST_CASE("contestants are ranked by loss, theories numbered without the benchmarks", "[verdict]") {
    HandMade made;
    made.worse(1, 0.5, 8, 8);
    made.worse(2, 0.2, 8, 8);
    made.set(3, VectorXd::Constant(kRows, 1.3), VectorXd::Constant(kFolds * kRepeats, 1.3));
    const Verdict verdict = made.judged();
    CHECK(verdict.order == Numbers{0, 2, 3, 1, 4});
    CHECK(verdict.theories[0].rank == 1);
    CHECK(verdict.theories[2].rank == 2);
    CHECK(verdict.theories[1].rank == 3);
    CHECK(verdict.pairs.size() == 10);
    for (const PairReport& report : verdict.pairs) {
        CHECK(made.trial.contestants[report.a].loss <= made.trial.contestants[report.b].loss);
        CHECK(report.theories == (report.a < 3 && report.b < 3));
        CHECK(std::isnan(report.p_holm) == !report.theories);
        CHECK(std::isnan(report.rows.p_holm) == !report.theories);
        CHECK(report.relative == report.difference / made.trial.contestants[report.b].loss);
    }
}

TEST_CASE("a theory that both tests set before every rival is the winner", "[verdict]") {
    HandMade made;
    made.worse(1, 0.3, 6, 5);
    made.worse(2, 0.4, 5, 6);
    const Verdict verdict = made.judged();
    const PairReport& first = pair(verdict, 0, 1);
    CHECK(first.rows.t == Approx(-6).epsilon(1e-9));
    CHECK(first.rows.df == 59);
    CHECK(first.corrected.t == Approx(-5).epsilon(1e-9));
    CHECK(first.corrected.df == 19);
    CHECK(first.p == std::max(first.rows.p, first.corrected.p));
    CHECK(first.p == Approx(student_two_sided(5, 19)).epsilon(1e-8));
    CHECK(first.low == std::min(first.rows.low, first.corrected.low));
    CHECK(first.high == std::max(first.rows.high, first.corrected.high));
    CHECK(first.difference == Approx(-0.3).epsilon(1e-12));
    CHECK(first.outcome == PairOutcome::first_better);
    CHECK(pair(verdict, 0, 2).outcome == PairOutcome::first_better);
    CHECK(verdict.winner == std::optional<std::size_t>{0});
    CHECK(verdict.theories[0].verdict == "predicts better than every rival");
    CHECK(verdict.theories[1].verdict == "predicts worse than \"A\"");
}

TEST_CASE("one test alone decides nothing", "[verdict]") {
    for (const bool rows_reject : {true, false}) {
        HandMade made;
        made.worse(1, 0.3, rows_reject ? 8 : 1, rows_reject ? 1 : 8);
        made.worse(2, 0.4, 6, 6);
        const Verdict verdict = made.judged();
        const PairReport& report = pair(verdict, 0, 1);
        CHECK(std::min(report.rows.p, report.corrected.p) < 1e-5);
        CHECK(report.p > 0.3);
        CHECK(report.outcome == PairOutcome::unresolved);
        CHECK_FALSE(verdict.winner);
        CHECK(verdict.theories[0].verdict == "ranks first, without a clear lead");
        CHECK(verdict.theories[1].verdict == "cannot be told from \"A\"");
        CHECK(verdict.theories[2].verdict == "predicts worse than \"A\"");
    }
}

// Berger 1982: the winner needs no adjustment; the pairs table is adjusted by Holm.
TEST_CASE("the winner is found by unadjusted p, the pairs by adjusted p", "[verdict]") {
    HandMade made;
    made.worse(1, 0.2, 2.3, 9);
    made.worse(2, 0.21, 2.4, 9);
    const Verdict verdict = made.judged();
    const PairReport& ab = pair(verdict, 0, 1);
    const PairReport& ac = pair(verdict, 0, 2);
    CHECK(ab.p == Approx(student_two_sided(2.3, 59)).epsilon(1e-8));
    CHECK(ac.p == Approx(student_two_sided(2.4, 59)).epsilon(1e-8));
    CHECK((ab.p < 0.05 && ac.p < 0.05));
    CHECK(ac.p_holm == Approx(3 * ac.p).epsilon(1e-12));
    CHECK(ab.p_holm == Approx(std::max(3 * ac.p, 2 * ab.p)).epsilon(1e-12));
    CHECK(ac.outcome == PairOutcome::unresolved);
    CHECK(verdict.winner == std::optional<std::size_t>{0});
    CHECK(verdict.theories[1].verdict == "predicts worse than \"A\"");
    made.worse(2, 0.21, 1.9, 9);  // p = .062
    CHECK_FALSE(made.judged().winner);
}

TEST_CASE("the level of the study decides", "[verdict]") {
    for (const auto& [level, wins] : {std::pair{"{level: 0.05}", false}, std::pair{"{level: 0.1}", true}}) {
        HandMade made("", std::string("verdict: ") + level + "\n");
        made.worse(1, 0.2, 1.9, 9);
        made.worse(2, 0.3, 6, 9);
        CHECK(made.judged().winner.has_value() == wins);
    }
}

// Two one-sided tests (Schuirmann 1987): the 1 - 2 level interval within the margin.
TEST_CASE("theories are practically equal if the 90% interval lies within the margin, before anything else",
          "[verdict]") {
    HandMade made;
    made.worse(1, 0.008, 4, 4);  // significant, but far below 2%
    made.worse(2, 0.001, 0.4, 0.5);
    const Verdict verdict = made.judged();
    CHECK(pair(verdict, 0, 1).p < 0.05);
    CHECK(pair(verdict, 0, 1).outcome == PairOutcome::practically_equal);
    CHECK(pair(verdict, 0, 2).outcome == PairOutcome::practically_equal);
    CHECK_FALSE(verdict.winner);
    CHECK(verdict.theories[1].verdict == "practically equal to \"A\"");
}

TEST_CASE("equality is decided at exactly the margin, by the wider of the two intervals", "[verdict]") {
    for (const double t_rows : {3.0, 9.0}) {
        HandMade made;
        made.worse(1, 0.01, t_rows, 5);
        const PairReport report = pair(made.judged(), 0, 1);
        const double reach =
            std::max(student_quantile(0.05, 59) * report.rows.se, student_quantile(0.05, 19) * report.corrected.se);
        const double margin = (0.01 + reach) / made.trial.contestants[0].loss;
        made.contest.study.verdict.margin = margin * (1 + 1e-9);
        CHECK(pair(made.judged(), 0, 1).outcome == PairOutcome::practically_equal);
        made.contest.study.verdict.margin = margin * (1 - 1e-9);
        CHECK(pair(made.judged(), 0, 1).outcome != PairOutcome::practically_equal);
    }
}

TEST_CASE("a wide interval is neither equal nor different", "[verdict]") {
    HandMade made;
    made.worse(1, 0.001, 0.05, 0.05);
    CHECK(pair(made.judged(), 0, 1).outcome == PairOutcome::unresolved);
}

TEST_CASE("identical theories have no t and no p, and are practically equal", "[verdict]") {
    HandMade made;
    made.set(1, made.trial.contestants[0].row_loss, made.trial.contestants[0].split_loss);
    made.worse(2, 0.4, 6, 6);
    const Verdict verdict = made.judged();
    const PairReport& same = pair(verdict, 0, 1);
    CHECK(same.difference == 0);
    CHECK(std::isnan(same.p));
    CHECK(std::isnan(same.p_holm));
    CHECK(same.rows.reason == "the differences are all equal, so nothing varies that could be tested");
    CHECK(same.corrected.reason == same.rows.reason);
    CHECK(same.outcome == PairOutcome::practically_equal);
    CHECK_FALSE(verdict.winner);
    // Holm runs over the two pairs that have a p.
    CHECK(pair(verdict, 0, 2).p_holm == Approx(2 * pair(verdict, 0, 2).p).epsilon(1e-12));
}

TEST_CASE("with clusters the row test is the one by cluster", "[verdict]") {
    HandMade made(", cluster: yard");
    made.worse(1, 0.3, 6, 6);
    const Verdict verdict = made.judged();
    const PairReport& report = pair(verdict, 0, 1);
    CHECK(report.rows.df == 14);
    const VectorXd d = made.trial.contestants[0].row_loss - made.trial.contestants[1].row_loss;
    CHECK(report.rows.se == cluster_test(d, made.contest.survey.clusters, 15, 0.05).se);
    CHECK(report.rows.se != row_test(d, 0.05).se);
}

TEST_CASE("a theory that failed has no rank, no pair and no criteria, and says why", "[verdict]") {
    Answers answers = invented_answers(40);
    answers.column("skl3") = answers.column("skl1") + answers.column("skl2");
    const std::string head = R"(study: refits
data: {file: refits.csv}
constructs:
  planning: {indicators: ["pln*"]}
  skill: {indicators: ["skl*"], weights: mode_b}
  delivery: {indicators: ["dlv*"]}
target: delivery
trial: {folds: 5, repeats: 2}
theories:
)";
    const std::string reason =
        "weights: mode_b of \"skill\" needs indicators that are no linear combinations of each other; drop one or use "
        "mode_a";
    const Judged judged = run_and_judge(head + R"(  - {name: bad, equations: {delivery: [skill]}}
  - {name: good, equations: {delivery: [planning]}}
  - {name: bent, equations: {delivery: [{square: planning}]}}
)",
                                        answers.csv());
    CHECK(judged.verdict.theories[0].rank == 0);
    CHECK(judged.verdict.theories[0].verdict == "failed in repeat 1, fold 1: " + reason);
    CHECK(judged.verdict.theories[0].criteria.reason == reason);
    CHECK(std::isnan(judged.verdict.theories[0].criteria.bic_weight));
    CHECK(std::isnan(judged.verdict.theories[0].fitted.r2));
    CHECK(judged.verdict.order.size() == 4);
    for (const PairReport& report : judged.verdict.pairs) CHECK((report.a != 0 && report.b != 0));
    CHECK(judged.verdict.pairs.size() == 6);
    CHECK(judged.verdict.theories[1].criteria.bic_weight + judged.verdict.theories[2].criteria.bic_weight ==
          Approx(1).epsilon(1e-14));
    const Judged alone = run_and_judge(
        head + "  - {name: bad, equations: {delivery: [skill]}}\n  - {name: good, equations: {delivery: [planning]}}\n",
        answers.csv());
    CHECK(alone.verdict.headline == "Only \"good\" could be fitted in every split, so it has no rival.");
    CHECK_FALSE(alone.verdict.winner);
    const Judged none = run_and_judge(head +
                                          "  - {name: bad, equations: {delivery: [skill]}}\n  - {name: worse, "
                                          "equations: {delivery: [skill, planning]}}\n",
                                      answers.csv());
    CHECK(none.verdict.headline == "No theory could be fitted in every split, so there is nothing to compare.");
    CHECK(none.verdict.order.size() == 2);
}

TEST_CASE("theories that weight the target's indicators differently are marked as having several targets",
          "[verdict]") {
    const auto several = [](const std::string& weights) {
        return run_and_judge(
                   "study: refits\ndata: {file: refits.csv}\nconstructs:\n  planning: {indicators: [\"pln*\"]}\n  "
                   "skill: {indicators: [\"skl*\"]}\n"
                   "  delivery: {indicators: [\"dlv*\"], weights: " +
                       weights +
                       "}\ntarget: delivery\ntrial: {folds: 5, repeats: 2}\ntheories:\n"
                       "  - {name: one, equations: {delivery: [planning]}}\n  - {name: two, equations: {delivery: "
                       "[skill]}}\n",
                   invented_answers(50).csv())
            .verdict.several_targets;
    };
    CHECK(several("mode_a"));
    CHECK_FALSE(several("equal"));
}

TEST_CASE("outcomes have their words", "[verdict]") {
    CHECK(std::string(word(PairOutcome::first_better)) == "first predicts better");
    CHECK(std::string(word(PairOutcome::second_better)) == "second predicts better");
    CHECK(std::string(word(PairOutcome::practically_equal)) == "practically equal");
    CHECK(std::string(word(PairOutcome::unresolved)) == "unresolved");
}
