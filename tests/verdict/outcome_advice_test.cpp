#include "judged.hpp"

using namespace rivalfold;
using Texts = std::vector<std::string>;

namespace {

Texts advice_of(const Judged& judged) {
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

std::string study(const std::string& constructs, const std::string& theories,
                  const std::string& trial = "folds: 5, repeats: 4") {
    return "study: refits\ndata: {file: refits.csv}\nconstructs:\n" + constructs +
           "  delivery: {indicators: [\"dlv*\"]}\ntarget: delivery\ntrial: {" + trial + "}\ntheories:\n" + theories;
}

}  // namespace

TEST_CASE("a theory that predicts no better than the mean is told so, with its q2", "[verdict]") {
    Answers answers = invented_answers(80);
    RandomStream stream(4, Purpose::simulation, 9);
    answers.names.push_back("noise");
    answers.values.conservativeResize(Eigen::NoChange, 12);
    for (Eigen::Index i = 0; i < 80; ++i) answers.values(i, 11) = static_cast<double>(stream.below(7));
    const Judged judged = run_and_judge(
        study(
            "  planning: {indicators: [\"pln*\"]}\n  noise: {indicators: [noise]}\n",
            "  - {name: real, equations: {delivery: [planning]}}\n  - {name: empty, equations: {delivery: [noise]}}\n"),
        answers.csv());
    const ContestantLosses& empty = judged.trial.contestants[1];
    REQUIRE(empty.loss >= judged.trial.contestants[2].loss);
    const Texts told = advice_of(judged);
    CHECK(says(told, fmt::format("Theory \"empty\" predicts no better than the mean (q2 {:.3f}): knowing its "
                                 "antecedents does not help to predict new rows.",
                                 empty.q2)));
    CHECK_FALSE(mentions(told, "Theory \"real\" predicts no better than the mean"));
}

TEST_CASE("a theory that loses to the plain linear benchmark is told so, with both losses", "[verdict]") {
    Answers answers = invented_answers(300);
    answers.names.push_back("strong");
    answers.values.conservativeResize(Eigen::NoChange, 12);
    answers.values.col(11) = answers.values.rightCols(4).leftCols(3).rowwise().sum();
    const Judged judged = run_and_judge(
        study(
            "  planning: {indicators: [\"pln*\"]}\n  strong: {indicators: [strong]}\n",
            "  - {name: weak, equations: {delivery: [planning]}}\n  - {name: all, equations: {delivery: [strong]}}\n"),
        answers.csv());
    const ContestantLosses& weak = judged.trial.contestants[0];
    const ContestantLosses& linear = judged.trial.contestants[3];
    REQUIRE(weak.loss > linear.loss);
    REQUIRE(judged.trial.contestants[1].loss <= linear.loss);
    const Texts told = advice_of(judged);
    CHECK(says(told, fmt::format("Theory \"weak\" predicts no better than the plain linear benchmark (loss {:.4f} "
                                 "against {:.4f}): its structure and weighting lose information that "
                                 "the indicators hold.",
                                 weak.loss, linear.loss)));
    CHECK_FALSE(mentions(told, "Theory \"all\""));
}

TEST_CASE("linearly dependent terms are told with the number of splits", "[verdict]") {
    Answers answers = invented_answers(60);
    answers.column("pln2") = 3 * answers.column("pln1").array() - 1;
    const Judged judged = run_and_judge(study("  planning: {indicators: [pln1]}\n  again: {indicators: [pln2]}\n",
                                              "  - {name: both, equations: {delivery: [planning, again]}}\n  - {name: "
                                              "one, equations: {delivery: [planning]}}\n"),
                                        answers.csv());
    const Texts told = advice_of(judged);
    CHECK(says(told,
               "Theory \"both\": the terms are linearly dependent in 20 of 20 splits; the smallest-norm solution was "
               "used. The other terms determine "
               "\"again\": leave it out."));
    CHECK_FALSE(mentions(told, "\"linear benchmark\": the terms"));  // nobody chose its terms
    CHECK_FALSE(mentions(told, "\"one\""));
}

TEST_CASE("levels that no training row had are told with the number of splits", "[verdict]") {
    const auto told_with = [](int rare_rows) {
        Answers answers = invented_answers(60);
        answers.names.push_back("sector");
        answers.values.conservativeResize(Eigen::NoChange, 12);
        for (Eigen::Index i = 0; i < 60; ++i) answers.values(i, 11) = i < rare_rows ? 9 : static_cast<double>(i % 2);
        return advice_of(run_and_judge(study("  planning: {indicators: [pln1]}\n  sector: {category: sector}\n",
                                             "  - {name: sectors, equations: {delivery: [planning, sector]}}\n  - "
                                             "{name: one, equations: {delivery: [planning]}}\n"),
                                       answers.csv()));
    };
    CHECK(says(told_with(1),
               "\"sectors\": some category level had no training row in 4 of 20 splits; its held-out rows were "
               "predicted as if at the first level. Merge rare levels."));
    CHECK_FALSE(mentions(told_with(1), "\"one\": some category level"));
    CHECK_FALSE(mentions(told_with(20), "some category level"));
}
