#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include "rivalfold/report/writers.hpp"

using namespace rivalfold;

namespace {

const std::string kStudy = R"(constructs:
  planning: {indicators: ["pln*"]}
  skill: {indicators: ["skl*"]}
  delivery: {indicators: ["dlv*"]}
target: delivery
theories:
  - {name: A, equations: {delivery: [planning]}}
  - {name: B, equations: {delivery: [skill]}}
)";

/// What a run with these settings did, from its study, rows and splits; no contest is needed for the text.
std::string text_of(const std::string& data_keys, const std::string& keys, const std::string& trial, int segments = 0) {
    Answers answers = invented_answers(60);
    for (Eigen::Index i = 0; i < 60; ++i) answers.column("sup2")(i) = static_cast<double>(i % 12);
    std::replace(answers.names.begin(), answers.names.end(), std::string("sup2"), std::string("yard"));
    SmallContest contest = prepare(
        "study: refits\ndata: {file: refits.csv" + data_keys + "}\n" + kStudy + keys + "trial: {" + trial + "}\n",
        answers.csv());
    Outcome outcome;
    outcome.study = contest.study;
    outcome.survey = contest.survey;
    outcome.plan = contest.plan;
    outcome.verdict.set.resamples = 2000;
    outcome.run.version = "9.8.7";
    outcome.segments.resize(static_cast<std::size_t>(segments));
    return methods_text(outcome);
}

bool holds(const std::string& text, const std::string& part) { return text.find(part) != std::string::npos; }

struct Fact {
    std::string data_keys, keys, trial;
    std::string said;   ///< with these settings
    std::string other;  ///< what would be said without them
};

}  // namespace

TEST_CASE("the methods text of a plain study, whole", "[report]") {
    CHECK(
        text_of("", "", "folds: 5, repeats: 4, seed: 3") ==
        "Held-out prediction of \"delivery\" over 4 repeats of 5 folds of rows (seed 3), 60 rows; squared loss in "
        "units "
        "of each indicator's standard deviation; mediators measured; metric standard. Composite scores by the weights "
        "of the study file (path weighting: Wold 1982; Lohmöller 1989), equations by least squares, everything from "
        "the training rows. Pairs: paired test over rows and corrected repeated k-fold test (Nadeau & Bengio 2003; "
        "Bouckaert & Frank 2004); one theory is called better only if both reject at 0.05 after Holm's (1979) "
        "adjustment, practically equal if the 90% interval lies within 2% of the smaller loss (Schuirmann 1987); a "
        "winner must beat every rival (Berger 1982); otherwise the model confidence set (Hansen, Lunde & Nason 2011; "
        "2000 bootstrap resamples of rows). Nested pairs: Clark & West (2007). Encompassing: Harvey, Leybourne & "
        "Newbold (1998). Stack: Breiman (1996); both from squared errors. Computed with rivalfold 9.8.7.");
}

TEST_CASE("each setting that was used is a fact of the methods text, and only then", "[report]") {
    const std::string plain = "folds: 5, repeats: 4, seed: 3";
    const Fact facts[] = {
        {", cluster: yard", "", plain, " over 4 repeats of 5 folds of whole clusters (seed 3), ", "5 folds of rows"},
        {", cluster: yard", "", plain, "Pairs: paired test over clusters (Liang & Zeger 1986) and corrected",
         "paired test over rows"},
        {", cluster: yard", "", plain, "2000 bootstrap resamples of clusters)", "bootstrap resamples of rows"},
        {", rows: mean", "", plain, " Missing predictor answers were filled with the training mean. Pairs:", ""},
        {"", "", plain + ", loss: absolute", " 60 rows; absolute loss in units", "; squared loss"},
        {"", "", plain + ", mediators: predicted", "; mediators predicted; ", "mediators measured"},
        {"", "metric: response\n", plain, "; metric response. ", "metric standard"},
        {"", "", "folds: 6, repeats: 2, seed: 17", " over 2 repeats of 6 folds of rows (seed 17), ", "seed 3"},
        {"", "verdict: {level: 0.1}\n", plain, "only if both reject at 0.1 after", "reject at 0.05"},
        {"", "verdict: {level: 0.1}\n", plain, "equal if the 80% interval lies", "90% interval"},
        {"", "verdict: {margin: 0.05}\n", plain, "within 5% of the smaller loss", "within 2%"},
        {"", "verdict: {completeness: true}\n", plain,
         " Completeness: Fudenberg, Kleinberg, Liang & Mullainathan (2022); restrictiveness: Fudenberg, Gao & Liang "
         "(2023). Computed",
         ""},
    };
    const std::string without = text_of("", "", plain);
    for (const Fact& fact : facts) {
        INFO(fact.data_keys << " " << fact.keys << " " << fact.trial);
        const std::string text = text_of(fact.data_keys, fact.keys, fact.trial);
        CHECK(holds(text, fact.said));
        CHECK_FALSE(holds(without, fact.said));
        if (fact.other.empty()) continue;
        CHECK_FALSE(holds(text, fact.other));
        CHECK(holds(without, fact.other));
    }
}

TEST_CASE("splits from a file have no seed in the methods text", "[report]") {
    Outcome outcome;
    SmallContest contest = prepare("study: refits\ndata: {file: refits.csv}\n" + kStudy, invented_answers(30).csv());
    outcome.study = contest.study;
    outcome.survey = contest.survey;
    outcome.plan = contest.plan;
    outcome.study.trial.folds_file = Name{"splits.csv", {}};
    const std::string text = methods_text(outcome);
    CHECK(holds(text, " folds of rows (splits from a file), 30 rows;"));
    CHECK_FALSE(holds(text, "seed"));
}

TEST_CASE("segments have their sentence in the methods text where the study has them", "[report]") {
    const std::string sentence =
        " Segments: differences of differences with Welch's (1947) degrees of freedom, Holm over all. ";
    CHECK(holds(text_of("", "", "folds: 5", 2), sentence));
    CHECK_FALSE(holds(text_of("", "", "folds: 5"), "Segments"));
}
