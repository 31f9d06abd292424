#include "judged.hpp"

#include "rivalfold/theory/blueprint.hpp"
#include "rivalfold/trial/standard_error.hpp"
#include "rivalfold/verdict/distributions.hpp"
#include "verdict/companions.hpp"

using namespace rivalfold;
using Eigen::Index;
using Eigen::VectorXd;

namespace {

constexpr Index kRows = 90;
const std::string kConstructs = R"(constructs:
  planning: {indicators: ["pln*"]}
  skill: {indicators: ["skl*"]}
  supply: {indicators: ["sup*"]}
  delivery: {indicators: ["dlv*"]}
target: delivery
)";

std::string study_of(const std::string& theories, const std::string& trial = "folds: 5, repeats: 3",
                     const std::string& more = "", const std::string& data = "") {
    return "study: refits\ndata: {file: refits.csv" + data + "}\n" + kConstructs + more + "theories:\n" + theories +
           "trial: {" + trial + "}\n";
}

/// Rows with a yard: 18 of them, five rows each.
std::string answers_with_yards() {
    Answers answers = invented_answers(kRows);
    answers.names.push_back("yard");
    answers.values.conservativeResize(Eigen::NoChange, 12);
    for (Index i = 0; i < kRows; ++i) answers.values(i, 11) = static_cast<double>(i / 5);
    return answers.csv();
}

const PairReport& pair(const Judged& judged, std::size_t one, std::size_t other) {
    for (const PairReport& report : judged.verdict.pairs)
        if ((report.a == one && report.b == other) || (report.a == other && report.b == one)) return report;
    throw std::logic_error("no such pair");
}

/// The test of what `other` knows beyond `own`.
const OneSidedTest& beyond(const PairReport& report, std::size_t own) {
    return report.a == own ? report.b_knows_more : report.a_knows_more;
}

/// Is the target equation of the first theory nested in that of the second, and the second's in the first's?
std::pair<bool, bool> nesting(const std::string& first, const std::string& second,
                              const std::string& trial = "folds: 5, repeats: 2", const std::string& more = "") {
    const SmallContest contest =
        prepare(study_of("  - {name: A, " + first + "}\n  - {name: B, " + second + "}\n", trial, more),
                invented_answers(30).csv());
    const std::vector<Blueprint> blueprints = build_blueprints(contest.study, contest.survey, *contest.sample);
    return {nested(blueprints[0], blueprints[1]), nested(blueprints[1], blueprints[0])};
}

std::string equation(const std::string& terms) { return "equations: {delivery: [" + terms + "]}"; }

const std::pair kFirstInSecond{true, false}, kSecondInFirst{false, true}, kNotNested{false, false};

const std::string kTwoNested =
    "  - {name: additive, equations: {delivery: [planning, skill]}}\n"
    "  - {name: amplifying, equations: {delivery: [{crossed: [skill, planning]}]}}\n"
    "  - {name: scarcest, equations: {delivery: [{minimum: [planning, supply]}]}}\n";

/// A finished contest of two theories whose errors on one indicator and in one repeat are then made by hand.
struct HandMade {
    Judged judged;
    HandMade(const VectorXd& e1, const VectorXd& e2, const std::string& data = "",
             const std::string& loss = "squared") {
        judged = run_and_judge(
            study_of(
                "  - {name: A, equations: {delivery: [planning]}}\n  - {name: B, equations: {delivery: [skill]}}\n",
                "folds: 5, repeats: 2, loss: " + loss, "", data),
            answers_with_yards());
        ErrorProducts& errors = judged.trial.errors;
        REQUIRE(errors.members == std::vector<std::size_t>{0, 1});
        REQUIRE(errors.products.cols() == 1);
        errors.products.col(ErrorProducts::column(1, 0)) = e1.cwiseProduct(e2);
        const bool absolute = loss == "absolute";
        REQUIRE(errors.squares.cols() == (absolute ? 2 : 0));
        const VectorXd* e[] = {&e1, &e2};
        for (Index t = 0; t < 2; ++t) {
            judged.trial.contestants[static_cast<std::size_t>(t)].row_loss =
                absolute ? e[t]->cwiseAbs().eval() : e[t]->cwiseAbs2().eval();
            if (absolute) errors.squares.col(t) = e[t]->cwiseAbs2();
        }
    }
    PairReport companions(std::size_t a = 0, std::size_t b = 1) const {
        PairReport report;
        report.a = a;
        report.b = b;
        report.theories = true;
        add_companions(judged.contest.study, judged.contest.survey, judged.trial, report);
        return report;
    }
};

VectorXd draws(std::uint32_t number) {
    RandomStream stream(55, Purpose::simulation, number);
    VectorXd out(kRows);
    for (Index i = 0; i < kRows; ++i) out(i) = bell(stream);
    return out;
}

}  // namespace

// Harvey, Leybourne & Newbold 1998: d_i = e1 (e1 - e2).
TEST_CASE("the encompassing test is the one-sided t test of e1 (e1 - e2)", "[companions]") {
    const VectorXd e1 = draws(1), e2 = 0.7 * draws(1) + 0.5 * draws(2);
    const PairReport report = HandMade(e1, e2).companions();
    const VectorXd d = e1.cwiseProduct(e1 - e2);
    const double se = std::sqrt((d.array() - d.mean()).matrix().squaredNorm() / (kRows - 1) / kRows);
    CHECK(report.b_knows_more.t == Approx(d.mean() / se).epsilon(1e-10));
    CHECK(report.b_knows_more.df == kRows - 1);
    const double two_sided = student_two_sided(d.mean() / se, kRows - 1);
    CHECK(report.b_knows_more.p == Approx(d.mean() > 0 ? two_sided / 2 : 1 - two_sided / 2).epsilon(1e-9));
    CHECK(report.a_knows_more.t == Approx(HandMade(e2, e1).companions().b_knows_more.t).epsilon(1e-12));
    CHECK(report.a_knows_more.t == Approx(HandMade(e1, e2, "", "absolute").companions().a_knows_more.t)
                                       .epsilon(1e-12));  // squared errors all the same
    CHECK(report.a_knows_more.t == Approx(HandMade(e1, e2).companions(1, 0).b_knows_more.t).epsilon(1e-12));
}

TEST_CASE("a theory whose errors are another's plus noise lacks what the other knows, not the other way round",
          "[companions]") {
    const VectorXd x = draws(3), noise = draws(4);
    const PairReport report = HandMade(x + noise, x).companions();
    CHECK(report.b_knows_more.p < 1e-4);
    CHECK(report.a_knows_more.p > 0.01);
    CHECK(report.a_knows_more.p < 0.99);
}

TEST_CASE("two theories with independent errors each know something that the other lacks", "[companions]") {
    const PairReport report = HandMade(draws(5), draws(6)).companions();
    CHECK(report.a_knows_more.p < 1e-3);
    CHECK(report.b_knows_more.p < 1e-3);
}

TEST_CASE("theories with the same errors have no companion tests, with the reason", "[companions]") {
    const VectorXd e = draws(7);
    for (const double rounding : {0.0, 1e-15}) {
        const PairReport report = HandMade(e, e * (1 + rounding)).companions();
        for (const OneSidedTest* test : {&report.a_knows_more, &report.b_knows_more}) {
            CHECK(std::isnan(test->t));
            CHECK(std::isnan(test->p));
            CHECK_FALSE(test->reason.empty());
        }
    }
}

TEST_CASE("with clusters the companion tests are by cluster", "[companions]") {
    const VectorXd e1 = draws(8), e2 = draws(9);
    const HandMade made(e1, e2, ", cluster: yard");
    const PairReport report = made.companions();
    const VectorXd d = e1.cwiseProduct(e1 - e2);
    CHECK(report.b_knows_more.df == 17);
    CHECK(report.b_knows_more.t ==
          Approx(d.mean() / standard_error(d, made.judged.contest.survey.clusters, 18)).epsilon(1e-10));
}

// With squared errors f = e1^2 - e2^2 + (p1 - p2)^2 = e1^2 - e2^2 + (e2 - e1)^2 = 2 e1 (e1 - e2): Clark & West (2007)
// has the t of the encompassing test of the inner theory, and the normal distribution.
TEST_CASE("the nested-model test has the t of the inner theory's encompassing test", "[companions]") {
    for (const auto& [data, loss] :
         {std::pair{"", "squared"}, std::pair{", cluster: yard", "squared"}, std::pair{"", "absolute"}}) {
        const Judged judged = run_and_judge(
            study_of(kTwoNested, std::string("folds: 5, repeats: 3, loss: ") + loss, "", data), answers_with_yards());
        const PairReport& report = pair(judged, 0, 1);
        REQUIRE(report.inner == std::optional<std::size_t>{0});
        CHECK(report.extra_terms.t == Approx(beyond(report, 0).t).epsilon(1e-9));
        CHECK(report.extra_terms.df == 0);
        CHECK(report.extra_terms.p == Approx(normal_upper(report.extra_terms.t)).epsilon(1e-12));
        CHECK_FALSE(report.nested_words.empty());
        CHECK_FALSE(pair(judged, 0, 2).inner);
        CHECK(pair(judged, 0, 2).nested_words.empty());
    }
}

// The invented answers hold skill's effect on delivery; a column of noise stands in for supply.
TEST_CASE("a real extra term is found by the nested-model test, noise is not", "[companions]") {
    Answers answers = invented_answers(200);
    RandomStream stream(56, Purpose::simulation, 0);
    for (Index i = 0; i < 200; ++i) answers.column("sup1")(i) = bell(stream), answers.column("sup2")(i) = bell(stream);
    const Judged judged = run_and_judge(study_of("  - {name: planning, equations: {delivery: [planning]}}\n"
                                                 "  - {name: skill too, equations: {delivery: [planning, skill]}}\n"
                                                 "  - {name: noise too, equations: {delivery: [planning, supply]}}\n"),
                                        answers.csv());
    CHECK(pair(judged, 0, 1).extra_terms.p < 0.001);
    CHECK(pair(judged, 0, 2).extra_terms.p > 0.05);
    CHECK_FALSE(pair(judged, 1, 2).inner);
}

TEST_CASE("a theory is nested if its terms are some of the other's", "[companions]") {
    CHECK(nesting(equation("planning"), equation("planning, skill")) == kFirstInSecond);
    CHECK(nesting(equation("supply, skill, planning"), equation("planning, supply")) == kSecondInFirst);
    CHECK(nesting(equation("planning, skill"), equation("{crossed: [skill, planning]}")) == kFirstInSecond);
    CHECK(nesting(equation("planning, {product: [planning, skill]}"), equation("{crossed: [skill, planning]}")) ==
          kFirstInSecond);
    CHECK(nesting(equation("planning, skill"), equation("skill, planning")) == kNotNested);
    CHECK(nesting(equation("planning, skill"), equation("planning, supply")) == kNotNested);
    CHECK(nesting(equation("{minimum: [planning, skill]}"), equation("planning, skill")) == kNotNested);
    CHECK(nesting(equation("{minimum: [planning, skill]}"), equation("{minimum: [skill, planning]}, supply")) ==
          kFirstInSecond);
    CHECK(nesting(equation("{minimum: [planning, skill]}"), equation("{maximum: [planning, skill]}, supply")) ==
          kNotNested);
}

TEST_CASE("controls do not prevent nesting", "[companions]") {
    CHECK(nesting(equation("planning"), equation("planning, skill"), "folds: 5, repeats: 2", "controls: [supply]\n") ==
          kFirstInSecond);
    CHECK(nesting(equation("planning"), equation("skill"), "folds: 5, repeats: 2", "controls: [supply]\n") ==
          kNotNested);
}

TEST_CASE("a term that is measured in another way is another term", "[companions]") {
    const std::string two_items = ", constructs: {planning: {indicators: [pln1, pln2]}}";
    CHECK(nesting(equation("planning") + two_items, equation("planning, skill")) == kNotNested);
    CHECK(nesting(equation("planning") + two_items, equation("planning, skill") + two_items) == kFirstInSecond);
    CHECK(nesting(equation("planning"),
                  equation("planning, skill") + ", constructs: {planning: {indicators: [\"pln*\"], weights: equal}}") ==
          kNotNested);
}

TEST_CASE("predicted mediators end the nesting, measured ones do not", "[companions]") {
    const std::string chain = "equations: {skill: [supply], delivery: [planning, skill]}";
    CHECK(nesting(equation("planning"), chain) == kFirstInSecond);
    CHECK(nesting(equation("planning"), chain, "folds: 5, repeats: 2, mediators: predicted") == kNotNested);
    CHECK(nesting(equation("planning"), equation("planning, skill"), "folds: 5, repeats: 2, mediators: predicted") ==
          kFirstInSecond);
}

// The stack's losses are made by hand: the best theory's less a known amount.
TEST_CASE("theories are complementary only if the stack is better by both tests and by more than the margin",
          "[companions]") {
    Judged judged = run_and_judge(study_of(kTwoNested), answers_with_yards());
    const std::size_t best = judged.verdict.order[0] < 3 ? judged.verdict.order[0] : judged.verdict.order[1];
    const ContestantLosses& own = judged.trial.contestants[best];
    StackLosses& stack = judged.trial.errors.stack;
    const auto judge_with = [&](double gain, double noise) {
        VectorXd rows = own.row_loss, splits = own.split_loss;
        for (Index i = 0; i < rows.size(); ++i) rows(i) -= own.loss * (gain + noise * (i % 2 == 0 ? 1 : -1));
        for (Index s = 0; s < splits.size(); ++s) splits(s) -= own.loss * (gain + noise / 5 * (s % 3 == 0 ? 1 : -0.5));
        stack.row_loss = rows;
        stack.split_loss = splits;
        stack.loss = rows.mean();
        return judge_stack(judged.contest.study, judged.contest.survey, judged.trial, best);
    };
    const StackReport better = judge_with(0.05, 0.05);
    CHECK(better.present);
    CHECK(better.difference == Approx(-0.05 * own.loss).epsilon(1e-9));
    CHECK(better.relative == Approx(-0.05).epsilon(1e-9));
    CHECK(better.p == std::max(better.rows.p, better.corrected.p));
    CHECK(better.low == std::min(better.rows.low, better.corrected.low));
    CHECK(better.high == std::max(better.rows.high, better.corrected.high));
    CHECK(better.p < 0.001);
    CHECK(better.complementary);
    const StackReport within = judge_with(0.019, 0.01);
    CHECK(within.p < 0.001);
    CHECK_FALSE(within.complementary);
    const StackReport unsure = judge_with(0.05, 0.5);
    CHECK(unsure.p > 0.05);
    CHECK_FALSE(unsure.complementary);
    const StackReport worse = judge_with(-0.05, 0.05);
    CHECK(worse.p < 0.001);
    CHECK_FALSE(worse.complementary);
}

TEST_CASE("the stack's weights stand in file order, and a failed theory has none", "[companions]") {
    Answers answers = invented_answers(60);
    answers.column("skl3") = answers.column("skl1") + answers.column("skl2");
    const std::string bad =
        "  - {name: bad, equations: {delivery: [skill]}, constructs: {skill: {indicators: [\"skl*\"], weights: "
        "mode_b}}}\n";
    const std::string good =
        "  - {name: planning, equations: {delivery: [planning]}}\n  - {name: supply, equations: {delivery: "
        "[supply]}}\n";
    const Judged with = run_and_judge(study_of(bad + good), answers.csv()),
                 without = run_and_judge(study_of(good), answers.csv());
    REQUIRE(with.verdict.stack.weights.size() == 3);
    CHECK(with.verdict.stack.weights[0] == 0);
    CHECK(with.verdict.stack.weights[1] == without.verdict.stack.weights[0]);
    CHECK(with.verdict.stack.weights[2] == without.verdict.stack.weights[1]);
    CHECK(with.verdict.stack.weights[1] + with.verdict.stack.weights[2] == Approx(1).epsilon(1e-12));
    CHECK(with.verdict.stack.loss == without.verdict.stack.loss);
}
