// Advice that hangs on a limit: said on one side of it, not on the other.
#include "judged.hpp"

#include <limits>

using namespace rivalfold;
using Eigen::Index;
using Texts = std::vector<std::string>;

namespace {

Answers with_column(Answers answers, const std::string& name, double (*value)(Index)) {
    answers.names.push_back(name);
    answers.values.conservativeResize(Eigen::NoChange, answers.values.cols() + 1);
    for (Index i = 0; i < answers.values.rows(); ++i) answers.values(i, answers.values.cols() - 1) = value(i);
    return answers;
}

std::string study_of(const std::string& constructs, const std::string& terms, const std::string& keys = "",
                     const std::string& data_keys = "", const std::string& trial = "folds: 5, repeats: 2") {
    return "study: refits\ndata: {file: refits.csv" + data_keys + "}\nconstructs:\n" + constructs +
           "  delivery: {indicators: [\"dlv*\"]}\ntarget: delivery\n" + keys + "trial: {" + trial +
           "}\ntheories:\n  - {name: plain, equations: {delivery: [skill]}}\n  - {name: other, equations: {delivery: "
           "[" +
           terms + "]}}\n";
}

Texts advice(const std::string& study, const Answers& answers) {
    const SmallContest contest = prepare(study, answers.csv());
    const Trial fits = fit_all_rows(contest.study, contest.survey, *contest.sample, 1);
    return advise_on_study(contest.study, contest.survey, *contest.sample, contest.plan, fits);
}

Texts outcome_advice(const Judged& judged) {
    return advise_on_outcome(judged.contest.study, judged.contest.survey, judged.contest.plan, judged.trial,
                             judged.verdict);
}

bool says(const Texts& advice, const std::string& sentence) {
    return std::count(advice.begin(), advice.end(), sentence) == 1;
}
bool mentions(const Texts& advice, const std::string& part) {
    return std::any_of(advice.begin(), advice.end(),
                       [&](const std::string& a) { return a.find(part) != std::string::npos; });
}

const std::string kTwo = "  skill: {indicators: [\"skl*\"]}\n  hours: {indicators: [hours]}\n";

}  // namespace

TEST_CASE("products of raw scores whose zero lies far off are advised against", "[verdict]") {
    const Answers far =
        with_column(invented_answers(200), "hours", [](Index i) { return 1e5 + (i % 2 == 0 ? 1 : -1); });
    const Answers near =
        with_column(invented_answers(200), "hours", [](Index i) { return 9e3 + (i % 2 == 0 ? 1 : -1); });
    const std::string raw = "metric: response\n", crossed = "{crossed: [skill, hours]}";
    CHECK(says(advice(study_of(kTwo, crossed, raw), far),
               "Construct \"hours\": its mean is 1e+05 times its spread, so products of it under metric: response lose "
               "their digits. Subtract a constant from its columns, or use metric: standard."));
    CHECK_FALSE(mentions(advice(study_of(kTwo, crossed, raw), near), "lose their digits"));
    CHECK_FALSE(mentions(advice(study_of(kTwo, crossed), far), "lose their digits"));
    CHECK_FALSE(mentions(advice(study_of(kTwo, "skill, hours", raw), far), "lose their digits"));
}

TEST_CASE("a column of which a twentieth is filled with the training mean is named with the share", "[verdict]") {
    const std::string constructs = "  skill: {indicators: [\"skl*\"]}\n  planning: {indicators: [\"pln*\"]}\n";
    const auto told = [&](Index missing) {
        Answers answers = invented_answers(200);
        for (Index i = 0; i < missing; ++i)
            answers.values(7 * i, answers.at("skl2")) = std::numeric_limits<double>::quiet_NaN();
        return advice(study_of(constructs, "planning", "", ", rows: mean"), answers);
    };
    CHECK(says(told(10),
               "Column \"skl2\": 5% of its cells are missing and are filled with the training mean, which weakens what "
               "it can show. Compare with rows: drop."));
    CHECK(says(told(25),
               "Column \"skl2\": 12% of its cells are missing and are filled with the training mean, which weakens "
               "what it can show. Compare with rows: drop."));
    CHECK_FALSE(mentions(told(9), "are filled with the training mean"));
}

TEST_CASE("fewer than thirty rows are told", "[verdict]") {
    const std::string constructs = "  skill: {indicators: [skl1]}\n  planning: {indicators: [pln1]}\n";
    CHECK(says(advice(study_of(constructs, "planning"), invented_answers(29)),
               "Only 29 rows: with fewer than about 30 no test or interval here can be trusted (common practice). "
               "Collect more before claiming anything."));
    CHECK_FALSE(mentions(advice(study_of(constructs, "planning"), invented_answers(30)), "no test or interval"));
}

// Undeclared scales are known by the answers seen, where an end may by chance be missing.
TEST_CASE("undeclared scales that differ by less than a quarter of their width count as alike", "[verdict]") {
    const std::string terms = "{minimum: [skill, hours]}";
    const Answers answers = invented_answers(200);
    REQUIRE(answers.values.col(answers.at("skl1")).minCoeff() == 1);
    REQUIRE(answers.values.col(answers.at("skl1")).maxCoeff() == 7);
    const Answers nine = with_column(answers, "hours", [](Index i) { return static_cast<double>(i % 10); });
    const Answers ten = with_column(answers, "hours", [](Index i) { return static_cast<double>(i % 11); });
    CHECK_FALSE(mentions(advice(study_of(kTwo, terms), nine), "unlike scales"));
    CHECK(says(advice(study_of(kTwo, terms), ten),
               "Theory \"other\": minimum(skill, hours) compares scores on unlike scales (skill 1 to 7, hours 0 to "
               "10); under metric: standard it compares standings within this sample, not amounts. Bring the members "
               "to one scale before reading it as the scarcest of them, or declare their range if it is the same."));
    const std::string declared =
        "  skill: {indicators: [\"skl*\"], range: [1, 7]}\n  hours: {indicators: [hours], range: [0, 9]}\n";
    CHECK(says(advice(study_of(declared, terms), nine),
               "Theory \"other\": minimum(skill, hours) compares scores on unlike scales (skill 1 to 7, hours 0 to 9); "
               "under metric: standard it compares standings within this sample, not amounts. Bring the members to "
               "one scale before reading it as the scarcest of them."));
}

TEST_CASE("repeats: auto that stopped at its most is told, one that was enough is not", "[verdict]") {
    const std::string constructs =
        "  skill: {indicators: [\"skl*\"]}\n  planning: {indicators: [\"pln*\"]}\n  supply: {indicators: [\"sup*\"]}\n";
    const std::string sentence =
        "repeats: auto stopped at 200 before the splits' own error was a tenth of the sampling error for every pair; "
        "read monte_carlo_se in pairs.csv beside the standard errors.";
    const auto judged = [&](Index rows, const std::string& repeats) {
        SmallContest contest = prepare(
            study_of(constructs, "{crossed: [skill, planning]}", "", "", "folds: 3, seed: 11, repeats: " + repeats),
            invented_answers(rows, 21).csv());
        Judged out{std::move(contest), {}, {}};
        out.trial = run_trial(out.contest.study, out.contest.survey, *out.contest.sample, out.contest.plan, 1);
        out.verdict = judge(out.contest, out.trial);
        return out;
    };
    Judged most = judged(24, "auto"), asked = judged(24, "200");
    REQUIRE(most.trial.repeats < 200);
    CHECK_FALSE(says(outcome_advice(most), sentence));
    CHECK_FALSE(says(outcome_advice(asked), sentence));
    most.contest.plan = asked.contest.plan;  // as if it had grown to the most that is allowed
    CHECK(says(outcome_advice(most), sentence));
}

// The first level of a category is no column of the regression: positions and terms part there.
TEST_CASE("a dependent term behind a category is told by its own name", "[verdict]") {
    Answers answers = with_column(invented_answers(90), "sector", [](Index i) { return static_cast<double>(i % 3); });
    answers.column("pln2") = 3 * answers.column("pln1").array() - 1;
    const Judged judged = run_and_judge(
        study_of("  skill: {indicators: [skl1]}\n  sector: {category: sector}\n  planning: {indicators: [pln1]}\n"
                 "  again: {indicators: [pln2]}\n",
                 "sector, planning, again"),
        answers.csv());
    CHECK(says(outcome_advice(judged),
               "Theory \"other\": the terms are linearly dependent in 10 of 10 splits; the smallest-norm solution was "
               "used. The other terms determine \"again\": leave it out."));
}
