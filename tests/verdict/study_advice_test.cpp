#include "judged.hpp"

using namespace rivalfold;
using Texts = std::vector<std::string>;

namespace {

const std::string kConstructs = R"(constructs:
  planning: {indicators: ["pln*"], range: [1, 7]}
  skill: {indicators: ["skl*"], range: [1, 7]}
  hours: {indicators: [hours]}
  delivery: {indicators: ["dlv*"], range: [1, 7]}
target: delivery
)";
const std::string kPlain = "  - {name: plain, equations: {delivery: [planning, skill]}}\n";

Answers with_hours(Answers answers) {
    answers.names.push_back("hours");
    answers.values.conservativeResize(Eigen::NoChange, answers.values.cols() + 1);
    for (Eigen::Index i = 0; i < answers.values.rows(); ++i)
        answers.values(i, answers.values.cols() - 1) = static_cast<double>((i * i + 3 * i) % 41);
    return answers;
}

Texts advice(const std::string& theories, const Answers& answers = with_hours(invented_answers(200)),
             const std::string& constructs = kConstructs, const std::string& trial = "folds: 5, repeats: 2",
             const std::string& data_keys = "") {
    const SmallContest contest = prepare("study: refits\ndata: {file: refits.csv" + data_keys + "}\n" + constructs +
                                             "trial: {" + trial + "}\ntheories:\n" + theories,
                                         answers.csv());
    const Trial fits = fit_all_rows(contest.study, contest.survey, *contest.sample, 1);
    return advise_on_study(contest.study, contest.survey, *contest.sample, contest.plan, fits);
}

/// Exactly this sentence, once.
bool says(const Texts& advice, const std::string& sentence) {
    return std::count(advice.begin(), advice.end(), sentence) == 1;
}
bool mentions(const Texts& advice, const std::string& part) {
    return std::any_of(advice.begin(), advice.end(),
                       [&](const std::string& a) { return a.find(part) != std::string::npos; });
}

}  // namespace

TEST_CASE("a sound study gets no advice", "[verdict]") {
    const Texts none =
        advice(kPlain + "  - {name: crossed, equations: {delivery: [{crossed: [planning, skill]}, hours]}}\n");
    CHECK(none == Texts{});
}

// Schmidt 1973; Evans 1991.
TEST_CASE("a product without the scores that it multiplies is advised against", "[verdict]") {
    const Texts both =
        advice(kPlain + "  - {name: amplifying, equations: {delivery: [hours, {product: [planning, skill]}]}}\n");
    CHECK(says(both,
               "Theory \"amplifying\": planning x skill stands without \"planning\" and \"skill\" as terms of its own, "
               "so the result depends on where the "
               "scales have their zero (Schmidt 1973; Evans 1991). Add \"planning\" and \"skill\", or use {crossed: "
               "[...]}, unless the scales have a true zero."));
    const Texts one =
        advice(kPlain + "  - {name: amplifying, equations: {delivery: [planning, {product: [planning, skill]}]}}\n");
    CHECK(says(one,
               "Theory \"amplifying\": planning x skill stands without \"skill\" as a term of its own, so the result "
               "depends on where the scales have their "
               "zero (Schmidt 1973; Evans 1991). Add \"skill\", or use {crossed: [...]}, unless the scales have a true "
               "zero."));
    CHECK_FALSE(mentions(
        advice(kPlain +
               "  - {name: amplifying, equations: {delivery: [planning, skill, {product: [planning, skill]}]}}\n"),
        "stands without"));
    // A control is a term of the target's equation.
    CHECK_FALSE(mentions(advice("  - {name: one, equations: {delivery: [planning, {product: [planning, hours]}]}}\n  - "
                                "{name: two, equations: {delivery: [skill]}}\n",
                                with_hours(invented_answers(200)), kConstructs + "controls: [hours]\n"),
                         "stands without"));
}

TEST_CASE("a square without its score is advised against", "[verdict]") {
    CHECK(says(advice(kPlain + "  - {name: bent, equations: {delivery: [skill, {square: planning}]}}\n"),
               "Theory \"bent\": square(planning) stands without \"planning\" as a term of its own, so the result "
               "depends on where the scales have their zero "
               "(Schmidt 1973; Evans 1991). Add \"planning\", unless the scales have a true zero."));
    CHECK_FALSE(mentions(advice(kPlain + "  - {name: bent, equations: {delivery: [planning, {square: planning}]}}\n"),
                         "stands without"));
}

TEST_CASE("a minimum or maximum over unlike scales is advised against, with the scales", "[verdict]") {
    CHECK(says(advice(kPlain + "  - {name: scarcest, equations: {delivery: [{minimum: [planning, hours]}]}}\n"),
               "Theory \"scarcest\": minimum(planning, hours) compares scores on unlike scales (planning 1 to 7, hours "
               "0 to 40); under metric: standard it compares "
               "standings within this sample, not amounts. Bring the members to one scale before reading it as the "
               "scarcest of them, or declare their range if it is the same."));
    CHECK(says(advice(kPlain + "  - {name: strongest, equations: {delivery: [{maximum: [hours, skill]}]}}\n",
                      with_hours(invented_answers(200)), kConstructs + "metric: response\n"),
               "Theory \"strongest\": maximum(hours, skill) compares scores on unlike scales (hours 0 to 40, skill 1 "
               "to 7); the smaller unit decides which one it "
               "picks. Bring the members to one scale before reading it as the strongest of them, or declare their "
               "range if it is the same."));
    CHECK_FALSE(
        mentions(advice(kPlain + "  - {name: scarcest, equations: {delivery: [{minimum: [planning, skill]}]}}\n"),
                 "unlike scales"));
}

TEST_CASE("one indicator with weights of mode A or B is advised against", "[verdict]") {
    std::string constructs = kConstructs;
    constructs.replace(constructs.find("[hours]"), 7, "[hours], weights: mode_b");
    const std::string theories =
        kPlain +
        "  - {name: hours, equations: {delivery: [hours]}}\n  - {name: more, equations: {delivery: [hours, skill]}}\n";
    CHECK(says(advice(theories, with_hours(invented_answers(200)), constructs),
               "Construct \"hours\" has one indicator, so weights: mode_b has nothing to weigh and its measurement "
               "error counts in full. Add indicators if you have them."));
    CHECK_FALSE(mentions(advice(theories), "has one indicator"));  // the default was not asked for
    constructs.replace(constructs.find("mode_b"), 6, "equal");
    CHECK_FALSE(mentions(advice(theories, with_hours(invented_answers(200)), constructs), "has one indicator"));
}

TEST_CASE("loadings of mixed sign are named", "[verdict]") {
    const std::string theories = kPlain + "  - {name: one, equations: {delivery: [planning]}}\n";
    Answers answers = with_hours(invented_answers(200));
    answers.column("pln2") = 8 - answers.column("pln2").array();
    CHECK(says(advice(theories, answers),
               "Construct \"planning\" has loadings of mixed sign: \"pln2\" runs against the others. List it under "
               "reversed if worded the other way round, else drop it."));
    answers = with_hours(invented_answers(200));
    for (const char* name : {"a1", "a2"}) {
        answers.names.push_back(name);
        answers.values.conservativeResize(Eigen::NoChange, answers.values.cols() + 1);
        answers.values.rightCols(1) = 8 - answers.column(name[1] == '1' ? "skl1" : "skl2").array();
    }
    std::string constructs = kConstructs;
    constructs.replace(constructs.find("[\"skl*\"]"), 8, "[skl1, skl2, skl3, a1, a2]");
    CHECK(says(advice(theories, answers, constructs),
               "Construct \"skill\" has loadings of mixed sign: \"a1\" and \"a2\" run against the others. List them "
               "under reversed if "
               "worded the other way round, else drop them."));
    CHECK_FALSE(mentions(advice(theories), "mixed sign"));
}

TEST_CASE("a nearly constant column is named with the share of its commonest value", "[verdict]") {
    const std::string theories = kPlain + "  - {name: one, equations: {delivery: [planning]}}\n";
    Answers answers = with_hours(invented_answers(200));
    answers.column("skl2").setConstant(4);
    for (Eigen::Index i = 0; i < 9; ++i)
        answers.values(20 * i, answers.at("skl2")) = static_cast<double>(1 + i % 7 + (i % 7 == 3 ? 1 : 0));
    CHECK(says(advice(theories, answers),
               "Column \"skl2\" is nearly constant: 95% of the rows used share one value. It carries little "
               "information and can fail in a fold; consider dropping it."));
    for (Eigen::Index i = 0; i < 2; ++i) answers.values(20 * i + 1, answers.at("skl2")) = 6;
    CHECK_FALSE(mentions(advice(theories, answers), "nearly constant"));
}

TEST_CASE("few training rows per coefficient are told with both numbers", "[verdict]") {
    const std::string theories = kPlain + "  - {name: one, equations: {delivery: [planning]}}\n";
    const Texts few = advice(theories, with_hours(invented_answers(36)));  // 5 folds: at least 28 rows are left
    CHECK(says(few,
               "Theory \"plain\": 28 training rows for 3 coefficients of the target's equation; fewer than about 10 "
               "rows per coefficient make them unstable (common "
               "practice). Use more rows or fewer terms."));
    CHECK_FALSE(mentions(few, "Theory \"one\""));
    CHECK_FALSE(mentions(advice(theories, with_hours(invented_answers(38))), "training rows for"));  // 30 are left
}

TEST_CASE("a linear benchmark with as many predictors as training rows is told", "[verdict]") {
    const std::string theories = kPlain + "  - {name: one, equations: {delivery: [planning]}}\n";
    const std::string sentence =
        "The linear benchmark has 6 predictors but a fold trains on only 6 rows: it fits its training rows exactly, "
        "and how well it then predicts "
        "is chance. Judge the theories by the training mean.";
    CHECK(says(advice(theories, with_hours(invented_answers(12)), kConstructs, "folds: 2, repeats: 2"), sentence));
    CHECK_FALSE(mentions(advice(theories, with_hours(invented_answers(14)), kConstructs, "folds: 2, repeats: 2"),
                         "The linear benchmark has"));
}

TEST_CASE("fewer than ten clusters are told", "[verdict]") {
    const std::string theories = kPlain + "  - {name: one, equations: {delivery: [planning]}}\n";
    for (const int clusters : {9, 10}) {
        Answers answers = with_hours(invented_answers(200));
        answers.names.push_back("yard");
        answers.values.conservativeResize(Eigen::NoChange, answers.values.cols() + 1);
        for (Eigen::Index i = 0; i < 200; ++i)
            answers.values(i, answers.values.cols() - 1) = static_cast<double>(i % clusters);
        const Texts told = advice(theories, answers, kConstructs, "folds: 5, repeats: 2", ", cluster: yard");
        CHECK(says(told,
                   "Only 9 clusters: tests by cluster need about 10 or more to be trusted. Read the intervals as "
                   "rough.") == (clusters == 9));
    }
}

TEST_CASE("two theories with the same equation for the target are named", "[verdict]") {
    const std::string twins =
        "  - {name: one, equations: {delivery: [planning, skill]}}\n  - {name: two, equations: {skill: [hours], "
        "delivery: [skill, planning]}}\n";
    CHECK(says(advice(twins),
               "Theories \"one\" and \"two\" have the same equation for the target. They can differ only through their "
               "other equations; drop one, or set trial: "
               "{mediators: predicted} if their chains are meant to compete."));
    CHECK_FALSE(mentions(advice("  - {name: one, equations: {delivery: [planning, skill]}}\n  - name: two\n    "
                                "equations: {delivery: [planning, skill]}\n"
                                "    constructs: {skill: {indicators: [skl1, skl2]}}\n"),
                         "the same equation"));
}

TEST_CASE("a theory that cannot be fitted to all rows is named with the reason", "[verdict]") {
    Answers answers = with_hours(invented_answers(200));
    answers.column("skl3") = answers.column("skl1") + answers.column("skl2");
    std::string constructs = kConstructs;
    constructs.replace(constructs.find("[\"skl*\"], range: [1, 7]"), 23, "[\"skl*\"], weights: mode_b");
    CHECK(says(advice(kPlain + "  - {name: one, equations: {delivery: [planning]}}\n", answers, constructs),
               "Theory \"plain\" cannot be fitted to all rows used: weights: mode_b of \"skill\" needs indicators that "
               "are no linear combinations of each other; drop one or use "
               "mode_a."));
}

TEST_CASE("advice on the survey and on the folds comes first", "[verdict]") {
    const Texts told = advice(kPlain + "  - {name: bent, equations: {delivery: [{square: planning}]}}\n",
                              with_hours(invented_answers(40)), kConstructs, "folds: 40, repeats: 7");
    REQUIRE(told.size() >= 2);
    const Texts expected = {
        "Leaving one row out at a time splits the rows in only one way: 1 repeat was run instead of 7."};
    CHECK(std::count(told.begin(), told.end(), expected.front()) == 1);
    CHECK(std::find(told.begin(), told.end(), expected.front()) <
          std::find_if(told.begin(), told.end(), [](const std::string& a) { return a.rfind("Theory", 0) == 0; }));
}
