#include "contests.hpp"

using namespace rivalfold;
using Eigen::Index;

namespace {

/// Answers with one more column of texts.
std::string with_column(const Answers& answers, const std::string& name, const std::vector<std::string>& cells) {
    std::istringstream lines(answers.csv());
    std::string out, line;
    std::getline(lines, line);
    out = line + "," + name + "\n";
    for (std::size_t i = 0; std::getline(lines, line); ++i) out += line + "," + cells[i] + "\n";
    return out;
}

}  // namespace

TEST_CASE("an indicator that is constant in a training fold is a fault with column, repeat and fold", "[trial]") {
    Answers answers = invented_answers(40);
    answers.column("skl2").setConstant(4);
    answers.values(17, answers.at("skl2")) = 5;
    const SmallContest contest = prepare(study_text(), answers.csv());
    for (const unsigned threads : {1U, 3U})
        CHECK(fault_of([&] { run(contest, threads); }) ==
              fmt::format("refits.csv: column \"skl2\": has one and the same value in all training rows of repeat 1, "
                          "fold {}; it cannot be standardised there\n"
                          "drop the indicator, or use more folds, so that each trains on more rows",
                          contest.plan.fold(0, 17) + 1));
    answers.values(3, answers.at("skl2")) = 5;
    std::string clean = fault_of([&] { run(prepare(study_text("folds: 40"), answers.csv())); });
    CHECK(clean == "nothing thrown");
}

TEST_CASE("an indicator with no answer left in a training fold is the same fault", "[trial]") {
    Answers answers = invented_answers(40);
    answers.column("skl2").setConstant(std::numeric_limits<double>::quiet_NaN());
    answers.values(17, answers.at("skl2")) = 5;
    answers.values(18, answers.at("skl2")) = 4;
    SmallContest contest = prepare(study_text("folds: 2, repeats: 1", ", rows: mean"), answers.csv());
    for (std::size_t i = 0; i < 40; ++i) contest.plan.fold_of[i] = i == 17 || i == 18 || i > 30 ? 1 : 0;
    CHECK(fault_of([&] { run(contest); }) ==
          "refits.csv: column \"skl2\": has one and the same value in all training rows of repeat 1, fold 2; it cannot "
          "be standardised there\n"
          "drop the indicator, or use more folds, so that each trains on more rows");
}

TEST_CASE("a theory that cannot be fitted is kept with its reason, and the others are as without it", "[trial]") {
    Answers answers = invented_answers(60);
    // Skill's indicators run together while delivery follows their difference, so that mode B weighs them with both
    // signs.
    answers.column("skl2") = answers.column("skl1").array() + 0.3 * (answers.column("dlv1").array() - 4) +
                             0.1 * answers.column("pln1").array();
    std::string constructs = kConstructs;
    constructs.replace(constructs.find("[\"skl*\"]"), 8, "[skl1, skl2]");
    constructs += "metric: response\n";
    const std::string good = R"(theories:
  - {name: one, equations: {delivery: [planning, supply]}}
  - {name: two, equations: {delivery: [{minimum: [planning, supply]}]}}
  - {name: three, equations: {delivery: [planning, )";
    const Trial trial =
        run(prepare(study_text("folds: 5, repeats: 4", "", constructs, good + "skill]}}\n"), answers.csv()));
    REQUIRE(trial.contestants.size() == 5);
    const ContestantLosses& failed = trial.contestants[2];
    CHECK(failed.name == "three");
    CHECK(failed.failed);
    CHECK(failed.reason ==
          "in repeat 1, fold 1: metric: response needs indicator weights of one sign, but those of \"skill\" differ in "
          "sign; reverse or drop an "
          "indicator, or use weights: equal");
    CHECK(trial.whole[2].failed);
    CHECK(trial.whole[2].reason ==
          "metric: response needs indicator weights of one sign, but those of \"skill\" differ in sign; reverse or "
          "drop an indicator, "
          "or use weights: equal");
    CHECK(std::isnan(trial.full_model.sse(2)));
    CHECK(trial.full_model.rank == 4);  // 1, planning, supply, minimum: nothing of the failed theory
    std::string equal = constructs;
    equal.replace(equal.find("mode_b"), 6, "equal");
    const Trial other = run(prepare(study_text("folds: 5, repeats: 4", "", equal, good + "skill]}}\n"), answers.csv()));
    for (const std::size_t c : {0U, 1U, 3U, 4U}) {
        CHECK_FALSE(trial.contestants[c].failed);
        CHECK(trial.contestants[c].row_loss == other.contestants[c].row_loss);
    }
    CHECK_FALSE(other.contestants[2].failed);
}

TEST_CASE("a theory that fails in one split only names the first such split", "[trial]") {
    Answers answers = invented_answers(60);
    answers.column("skl3") = answers.column("skl1") + 2 * answers.column("skl2");
    answers.values(23, answers.at("skl3")) += 3;  // without this row the three are collinear
    const SmallContest contest = prepare(study_text("folds: 5, repeats: 4, mediators: measured"), answers.csv());
    const Trial trial = run(contest);
    CHECK_FALSE(trial.whole[0].failed);
    CHECK(trial.contestants[0].failed);
    CHECK(trial.contestants[0].reason ==
          fmt::format("in repeat 1, fold {}: weights: mode_b of \"skill\" needs indicators that are no linear "
                      "combinations of each other; drop one or use mode_a",
                      contest.plan.fold(0, 23) + 1));
    CHECK_FALSE(trial.contestants[5].failed);
    CHECK(trial.contestants[5].rank_deficient_splits ==
          4);  // the linear benchmark takes the smallest-norm solution there, once a repeat
}

TEST_CASE("a geometric mean without a value fails its theory, in training or in a held-out row", "[trial]") {
    const std::string constructs = R"(constructs:
  planning: {indicators: [pln1, pln2], weights: equal}
  skill: {indicators: [skl1, skl2], weights: equal}
  delivery: {indicators: ["dlv*"]}
target: delivery
metric: response
)";
    const std::string theories = R"(theories:
  - {name: additive, equations: {delivery: [planning, skill]}}
  - {name: geometric, equations: {delivery: [{geometric_mean: [planning, skill]}]}}
)";
    Answers answers = invented_answers(40);
    SmallContest contest = prepare(study_text("folds: 4, repeats: 2", "", constructs, theories), answers.csv());
    CHECK_FALSE(run(contest).contestants[1].failed);
    answers.values(9, answers.at("pln1")) = -30;
    contest = prepare(study_text("folds: 4, repeats: 2", "", constructs, theories), answers.csv());
    const Trial trial = run(contest);
    CHECK_FALSE(trial.contestants[0].failed);
    CHECK(trial.whole[1].failed);
    CHECK(trial.whole[1].reason ==
          "geometric_mean(planning, skill) has no value in some training row: a score there is zero or negative; use "
          "minimum or product, or "
          "items that start at 1");
    const bool first_fold_trains_on_it = contest.plan.fold(0, 9) != 0;
    CHECK(trial.contestants[1].reason == (first_fold_trains_on_it
                                              ? "in repeat 1, fold 1: " + trial.whole[1].reason
                                              : "in repeat 1, fold 1: a held-out row has no finite prediction: a score "
                                                "there is zero, negative or far outside the training rows"));
    // The other way round: the row stands in the first fold.
    for (std::size_t i = 0; i < 40; ++i)
        contest.plan.fold_of[i] =
            (contest.plan.fold_of[i] + 4 - contest.plan.fold(0, 9) + (first_fold_trains_on_it ? 0 : 1)) % 4;
    CHECK(run(contest).contestants[1].reason ==
          (first_fold_trains_on_it ? "in repeat 1, fold 1: a held-out row has no finite prediction: a score there is "
                                     "zero, negative or far outside the training rows"
                                   : "in repeat 1, fold 1: " + trial.whole[1].reason));
}

TEST_CASE("a held-out row of a level that no training row has is predicted as the first level present", "[trial]") {
    const Answers answers = invented_answers(30);
    for (const std::string rare : {"a", "c", "z"}) {
        std::vector<std::string> sector;
        for (int i = 0; i < 30; ++i) sector.push_back(i == 11 ? rare : i % 2 == 0 ? "b" : "d");
        const SmallContest contest = prepare(study_text("folds: 30, repeats: 1", "", R"(constructs:
  sector: {category: sector}
  planning: {indicators: [pln1]}
  delivery: {indicators: [dlv1]}
target: delivery
)",
                                                        R"(theories:
  - {name: sectors, equations: {delivery: [sector]}}
  - {name: planning, equations: {delivery: [planning]}}
)"),
                                             with_column(answers, "sector", sector));
        const Trial trial = run(contest);
        REQUIRE_FALSE(trial.contestants[0].failed);
        double sum = 0, rows = 0;
        for (Index i = 0; i < 30; ++i)
            if (sector[static_cast<std::size_t>(i)] == "b") sum += answers.values(i, 8), ++rows;
        const double error = (answers.values(11, 8) - sum / rows) / trial.unit(0);
        INFO("level " << rare);
        CHECK(trial.contestants[0].row_loss(11) == Approx(error * error).epsilon(1e-12));
        CHECK(trial.contestants[0].unseen_level_splits == 1);
        CHECK(trial.contestants[1].unseen_level_splits == 0);
        // Every other row is predicted by the mean of its own level, the row itself left out.
        sum = 0;
        rows = 0;
        for (Index i = 1; i < 30; i += 2)
            if (i != 11 && i != 3) sum += answers.values(i, 8), ++rows;
        const double other = (answers.values(3, 8) - sum / rows) / trial.unit(0);
        CHECK(trial.contestants[0].row_loss(3) == Approx(other * other).epsilon(1e-12));
    }
}

TEST_CASE("linearly dependent terms are counted per split", "[trial]") {
    Answers answers = invented_answers(60);
    answers.names.push_back("pln1_again");
    answers.values.conservativeResize(Eigen::NoChange, 12);
    answers.values.col(11) = answers.values.col(0);
    const Trial trial = run(prepare(study_text("folds: 5, repeats: 4", "", R"(constructs:
  planning: {indicators: [pln1]}
  again: {indicators: [pln1_again]}
  delivery: {indicators: ["dlv*"]}
target: delivery
)",
                                               R"(theories:
  - {name: both, equations: {delivery: [planning, again]}}
  - {name: one, equations: {delivery: [planning]}}
)"),
                                    answers.csv()));
    CHECK(trial.contestants[0].rank_deficient_splits == 20);
    CHECK(trial.contestants[1].rank_deficient_splits == 0);
    CHECK((trial.contestants[0].row_loss - trial.contestants[1].row_loss).cwiseAbs().maxCoeff() < 1e-10);
    CHECK(trial.full_model.rank == 2);
}
