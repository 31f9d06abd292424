#include "contests.hpp"

using namespace rivalfold;
using Eigen::Index;
using Eigen::VectorXd;

namespace {

// One target indicator, one repeat and absolute loss: the row loss is |actual - predicted| / u.
const std::string kOneOutcome = R"(constructs:
  planning: {indicators: ["pln*"]}
  skill: {indicators: ["skl*"], weights: mode_b}
  supply: {indicators: ["sup*"], weights: principal}
  delivery: {indicators: [dlv1]}
target: delivery
)";

std::string one_outcome(const std::string& mediators) {
    return study_text("folds: 6, repeats: 1, loss: absolute, mediators: " + mediators, ", rows: mean", kOneOutcome);
}

/// What each contestant predicted for a row, from a run in which that row's outcome is so large that its error has a
/// known sign.
VectorXd predictions(const std::string& study, Answers answers, Index row, double outcome) {
    answers.values(row, answers.at("dlv1")) = outcome;
    const Trial trial = run(prepare(study, answers.csv()));
    VectorXd out(static_cast<Index>(trial.contestants.size()));
    for (Index c = 0; c < out.size(); ++c) {
        REQUIRE_FALSE(trial.contestants[static_cast<std::size_t>(c)].failed);
        const double error = trial.contestants[static_cast<std::size_t>(c)].row_loss(row) * trial.unit(0);
        out(c) = outcome > 0 ? outcome - error : outcome + error;
    }
    return out;
}

}  // namespace

TEST_CASE("changing a held-out row's outcome never changes its own prediction", "[trial]") {
    Answers answers = invented_answers(72);
    answers.values(5, 1) = std::numeric_limits<double>::quiet_NaN();
    answers.values(30, 4) = std::numeric_limits<double>::quiet_NaN();
    for (const char* mediators : {"measured", "predicted"})
        for (const Index row : {0, 5, 41, 71}) {
            INFO("row " << row << ", mediators " << mediators);
            const std::string study = one_outcome(mediators);
            const VectorXd high = predictions(study, answers, row, 100);
            CHECK((predictions(study, answers, row, -100) - high).cwiseAbs().maxCoeff() < 1e-10);
            CHECK((predictions(study, answers, row, 40) - high).cwiseAbs().maxCoeff() < 1e-10);
            // So large that the training moments must be made anew.
            CHECK((predictions(study, answers, row, 20000) - high).cwiseAbs().maxCoeff() < 1e-8);
            // Predictions are there at all, and differ between contestants.
            CHECK((high.array() > -5).all());
            CHECK((high.array() < 13).all());
            CHECK(high.maxCoeff() - high.minCoeff() > 0.01);
        }
}

TEST_CASE("changing a held-out row's predictors never changes another held-out row's prediction", "[trial]") {
    const Answers answers = invented_answers(72);
    for (const char* mediators : {"measured", "predicted"}) {
        const std::string study =
            study_text(std::string("folds: 6, repeats: 1, mediators: ") + mediators, ", rows: mean");
        const SmallContest contest = prepare(study, answers.csv());
        const Trial before = run(contest);
        for (const Index row : {0, 33}) {
            for (const double value : {40.0, std::numeric_limits<double>::quiet_NaN()}) {
                Answers changed = answers;
                for (const char* name : {"pln1", "skl2", "sup1"}) changed.values(row, changed.at(name)) = value;
                const SmallContest after_contest = prepare(study, changed.csv());
                REQUIRE(after_contest.plan.fold_of == contest.plan.fold_of);
                const Trial after = run(after_contest);
                for (std::size_t c = 0; c < before.contestants.size(); ++c) {
                    const VectorXd& x = before.contestants[c].row_loss;
                    const VectorXd& y = after.contestants[c].row_loss;
                    double same_fold = 0, other_folds = 0;
                    for (Index i = 0; i < 72; ++i) {
                        const bool together = contest.plan.fold(0, static_cast<std::size_t>(i)) ==
                                              contest.plan.fold(0, static_cast<std::size_t>(row));
                        if (i != row)
                            (together ? same_fold : other_folds) =
                                std::max(together ? same_fold : other_folds, std::fabs(x(i) - y(i)));
                    }
                    INFO(before.contestants[c].name << ", row " << row << ", value " << value << ", mediators "
                                                    << mediators);
                    CHECK(same_fold < 1e-10);
                    if (before.contestants[c].name == "training mean") continue;
                    CHECK(other_folds > 1e-6);                 // where the row was used for training it must matter
                    CHECK(std::fabs(x(row) - y(row)) > 1e-6);  // and it changes its own prediction
                }
            }
        }
    }
}

TEST_CASE("a gap in a held-out row is filled with the mean of the training rows", "[trial]") {
    Answers answers = invented_answers(30);
    const std::string study = study_text("folds: 30, loss: absolute", ", rows: mean", R"(constructs:
  planning: {indicators: [pln1]}
  delivery: {indicators: [dlv1]}
target: delivery
)",
                                         "theories:\n  - {name: line, equations: {delivery: [planning]}}\n  - {name: "
                                         "bent, equations: {delivery: [{square: planning}]}}\n");
    answers.values(12, answers.at("pln1")) = std::numeric_limits<double>::quiet_NaN();
    const Trial trial = run(prepare(study, answers.csv()));
    // At the mean of the predictor a line predicts the mean of the outcome, as the training mean does.
    CHECK(trial.contestants[0].row_loss(12) == Approx(trial.contestants[2].row_loss(12)).epsilon(1e-12));
    CHECK(std::fabs(trial.contestants[0].row_loss(11) - trial.contestants[2].row_loss(11)) > 1e-3);
}
