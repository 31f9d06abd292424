#include "hand_made.hpp"
#include "verdict/companions.hpp"

#include "rivalfold/verdict/outcome.hpp"
#include "rivalfold/verdict/reversals.hpp"

using namespace rivalfold;
using Eigen::Index;
using Eigen::VectorXd;

namespace {

/// B's target equation is A's with a term more; yards of `per_yard` rows each are clusters if `clustered`.
Judged nested_contest(Index rows, bool clustered = false, Index per_yard = 1) {
    Answers answers = invented_answers(rows);
    answers.names.push_back("yard");
    answers.values.conservativeResize(Eigen::NoChange, 12);
    for (Index i = 0; i < rows; ++i) answers.values(i, 11) = static_cast<double>(i / per_yard);
    return run_and_judge(std::string("study: refits\ndata: {file: refits.csv") + (clustered ? ", cluster: yard" : "") +
                             R"(}
constructs:
  planning: {indicators: [pln1]}
  skill: {indicators: [skl1]}
  delivery: {indicators: [dlv1]}
target: delivery
trial: {folds: 5, repeats: 2}
theories:
  - {name: A, equations: {delivery: [planning]}}
  - {name: B, equations: {delivery: [planning, skill]}}
)",
                         answers.csv());
}

/// The companions' words for errors e1 of A and e2 of B and a finding of the paired tests.
PairReport companions(Judged judged, const VectorXd& e1, const VectorXd& e2, PairOutcome outcome) {
    judged.trial.errors.products.col(ErrorProducts::column(1, 0)) = e1.cwiseProduct(e2);
    judged.trial.contestants[0].row_loss = e1.cwiseAbs2();
    judged.trial.contestants[1].row_loss = e2.cwiseAbs2();
    PairReport report;
    report.a = 0;
    report.b = 1;
    report.theories = true;
    report.outcome = outcome;
    add_companions(judged.contest.study, judged.contest.survey, judged.trial, report);
    return report;
}

/// Errors for which 2 e1 (e1 - e2) has mean 2 and the given t: e1 = 1 throughout, e2 around 0.
VectorXd outer_errors(Index rows, double t) { return made_differences(rows, 0, 1 / t, 3); }

std::string words(Judged judged, double t, PairOutcome outcome) {
    const Index rows = judged.contest.sample->n;
    return companions(std::move(judged), VectorXd::Ones(rows), outer_errors(rows, t), outcome).nested_words;
}

const std::string kFinding = "\"B\" is \"A\" with extra terms. ";

}  // namespace

// Normal upper tails: t = 2 has .023, t = 1 has .159, t = 4 is below .001.
TEST_CASE("extra terms have a sentence for each thing that the two tests can find together", "[words]") {
    CHECK(words(nested_contest(60), 2, PairOutcome::practically_equal) ==
          kFinding + "They carry information (Clark-West p = .023), but change the loss by less than the margin.");
    CHECK(words(nested_contest(60), 4, PairOutcome::second_better) ==
          kFinding + "They carry information (Clark-West p < .001), enough to predict better with 60 rows.");
    CHECK(words(nested_contest(60), 2, PairOutcome::unresolved) ==
          kFinding +
              "They carry information (Clark-West p = .023), but too little to show better prediction with 60 "
              "rows.");
    CHECK(words(nested_contest(60), 1, PairOutcome::unresolved) ==
          kFinding + "No sign that they carry information (Clark-West p = .159).");
    CHECK(words(nested_contest(60), 1, PairOutcome::practically_equal) ==
          kFinding + "No sign that they carry information (Clark-West p = .159).");
}

TEST_CASE("extra terms that change no prediction are told so, with any number of rows", "[words]") {
    for (const Index rows : {20, 60}) {
        const VectorXd e = made_differences(rows, 0, 0.1, 4);
        const PairReport same = companions(nested_contest(rows), e, e, PairOutcome::practically_equal);
        CHECK(same.nested_words == kFinding + "Both make the same predictions.");
        CHECK(same.extra_terms.reason == "the two theories make the same predictions");
    }
}

// Fewer than about 30 rows or 10 clusters: common practice, no source.
TEST_CASE("with fewer than 30 rows the nested-model test is said to be unreliable, whatever it found", "[words]") {
    for (const double t : {1.0, 4.0})
        CHECK(words(nested_contest(29), t, PairOutcome::unresolved) ==
              kFinding + "With 29 rows the Clark-West test cannot be relied on.");
    CHECK(words(nested_contest(30), 4, PairOutcome::second_better) ==
          kFinding + "They carry information (Clark-West p < .001), enough to predict better with 30 rows.");
}

TEST_CASE("with fewer than 10 clusters the nested-model test is said to be unreliable, whatever the rows", "[words]") {
    CHECK(words(nested_contest(90, true, 10), 4, PairOutcome::unresolved) ==
          kFinding + "With 9 clusters the Clark-West test cannot be relied on.");
    const std::string ten = words(nested_contest(100, true, 10), 4, PairOutcome::unresolved);
    CHECK(ten.find("cannot be relied on") == std::string::npos);
    // 25 rows in 25 clusters are enough clusters.
    CHECK(words(nested_contest(25, true, 1), 4, PairOutcome::unresolved).find("cannot be relied on") ==
          std::string::npos);
}

// The stack's losses are A's less a known amount; A loses 1. The corrected test's interval is the wider: quantile of t
// with 19 degrees of freedom 2.0930 (95%) or 1.7291 (90%).
TEST_CASE("the stack's sentence tells its change of loss with the interval of the study's level", "[words]") {
    const auto stacked = [](double mean, double t_splits, const std::string& verdict = "") {
        MadeContest made(120, verdict);
        made.worse(1, mean, 9, t_splits);
        StackLosses& stack = made.trial.errors.stack;
        stack.row_loss = made.trial.contestants[1].row_loss;
        stack.split_loss = made.trial.contestants[1].split_loss;
        stack.loss = stack.row_loss.mean();
        return judge_stack(made.contest.study, made.contest.survey, made.trial, 0).words;
    };
    CHECK(stacked(-0.1, 5) ==
          "The theories are complementary: their stacked mixture changes the loss of \"A\" by -10.0% (95% interval "
          "-14.2 to -5.8%). Each holds something that the others lack.");
    CHECK(stacked(-0.1, 5, "verdict: {level: 0.1}\n") ==
          "The theories are complementary: their stacked mixture changes the loss of \"A\" by -10.0% (90% interval "
          "-13.5 to -6.5%). Each holds something that the others lack.");
    CHECK(stacked(0.1, 1) ==
          "A stacked mixture of the theories changes the loss of \"A\" by +10.0% (95% interval -10.9 to +30.9%): no "
          "proof that the others add to it.");
    // Both ends and the middle round to zero: neither sign is printed.
    for (const double sign : {-1.0, 1.0})
        CHECK(stacked(sign * 0.0001, 2) ==
              "A stacked mixture of the theories changes the loss of \"A\" by 0.0% (95% interval 0.0 to 0.0%): no "
              "proof that the others add to it.");
    CHECK(stacked(0.0006, 20).find("by +0.1%") != std::string::npos);
}

TEST_CASE("under absolute loss the stack's sentence says where its weights come from", "[words]") {
    const std::string note = "; weights from squared errors)";
    for (const std::string loss : {"absolute", "squared"}) {
        MadeContest made;
        made.contest.study.trial.loss = loss == "absolute" ? Loss::absolute : Loss::squared;
        const std::string told = judge_stack(made.contest.study, made.contest.survey, made.trial, 0).words;
        CHECK((told.find(note) != std::string::npos) == (loss == "absolute"));
    }
}

namespace {

std::string reversal_words(double first, double second, double se) {
    Judged judged = nested_contest(60);
    Outcome whole;
    whole.study = judged.contest.study;
    whole.trial = std::move(judged.trial);
    for (const auto& [name, difference] : {std::pair{"kind: old", first}, std::pair{"kind: new", second}}) {
        Outcome segment;
        segment.segment_name = name;
        PairReport report;
        report.a = 0;
        report.b = 1;
        report.theories = true;
        report.difference = difference;
        report.rows.se = se;
        report.rows.df = 30;
        segment.verdict.pairs = {report};
        whole.segments.push_back(std::move(segment));
    }
    return find_reversals(whole).at(0).words;
}

}  // namespace

// se = 0.05 sqrt 2 = 0.07071, 60 degrees of freedom by Welch's formula, quantile 2.0003: reach 0.1414.
// t = 0.2 / 0.07071 = 2.828: p = .006; t = 0.6 / 0.07071: p < .001.
TEST_CASE("a difference between segments is told with both differences, its interval and the order", "[words]") {
    CHECK(reversal_words(-0.4, 0.2, 0.05) ==
          "The segments differ: loss of \"A\" minus loss of \"B\" is -0.4000 in \"kind: old\" and +0.2000 in \"kind: "
          "new\" (difference -0.6000, interval -0.7414 to -0.4586, Holm-adjusted p < .001); the order of the two turns "
          "round.");
    CHECK(reversal_words(0.4, 0.2, 0.05) ==
          "The segments differ: loss of \"A\" minus loss of \"B\" is +0.4000 in \"kind: old\" and +0.2000 in \"kind: "
          "new\" (difference +0.2000, interval +0.0586 to +0.3414, Holm-adjusted p = .006); the order of the two "
          "stays.");
    CHECK(reversal_words(0.4, 0.39, 0.05).empty());
}
