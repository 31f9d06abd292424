#include "contests.hpp"

#include <numeric>

using namespace rivalfold;
using Eigen::Index;
using Eigen::VectorXd;

namespace {

/// Answers with some gaps outside the target, which rows: mean fills.
Answers with_gaps(Answers answers) {
    RandomStream stream(1, Purpose::simulation, 5);
    for (const char* name : {"pln2", "skl1", "sup2"})
        for (Index i = 0; i < answers.values.rows(); ++i)
            if (stream.unit() < 0.1) answers.values(i, answers.at(name)) = std::numeric_limits<double>::quiet_NaN();
    return answers;
}

Answers in_order(const Answers& answers, const std::vector<Index>& rows, const std::vector<Index>& columns) {
    Answers out{{}, answers.values(rows, columns)};
    for (const Index column : columns) out.names.push_back(answers.names[static_cast<std::size_t>(column)]);
    return out;
}

std::vector<Index> counting(Index n) {
    std::vector<Index> order(static_cast<std::size_t>(n));
    std::iota(order.begin(), order.end(), Index{0});
    return order;
}

}  // namespace

TEST_CASE("one, two and five threads give the same bits", "[trial]") {
    for (const char* rows : {"", ", rows: mean"}) {
        const SmallContest contest = prepare(study_text("folds: 7, repeats: 12, mediators: predicted", rows),
                                             with_gaps(invented_answers(120)).csv());
        const Trial one = run(contest, 1);
        check_same_bits(one, run(contest, 2));
        check_same_bits(one, run(contest, 5));
    }
}

TEST_CASE("the same run twice gives the same bits, and progress is told upwards to 1", "[trial]") {
    const SmallContest contest = prepare(study_text("folds: 100, repeats: 30"), invented_answers(120).csv());
    std::vector<double> shares;
    const Trial watched = run(contest, 2, [&](double share) { shares.push_back(share); });
    check_same_bits(run(contest), watched);
    CHECK(std::is_sorted(shares.begin(), shares.end()));
    REQUIRE_FALSE(shares.empty());
    CHECK(shares.back() == 1);
    CHECK(shares.size() > 1);
}

TEST_CASE("the order of the columns changes nothing", "[trial]") {
    const Answers answers = with_gaps(invented_answers(90));
    std::vector<Index> backwards = counting(11);
    std::reverse(backwards.begin(), backwards.end());
    const std::string study = study_text("folds: 5, repeats: 4, mediators: predicted", ", rows: mean");
    const Trial one = run(prepare(study, answers.csv())),
                two = run(prepare(study, in_order(answers, counting(90), backwards).csv()));
    CHECK(two.contestants[0].indicators[0].name == "dlv3");
    CHECK(disagreement(one, two) < 1e-10);
}

TEST_CASE("the order of the rows within their folds changes nothing", "[trial]") {
    const Answers answers = with_gaps(invented_answers(90));
    const std::string study = study_text("folds: 5, repeats: 4, mediators: predicted", ", rows: mean");
    const SmallContest contest = prepare(study, answers.csv());
    RandomStream stream(6, Purpose::simulation, 0);
    std::vector<Index> order, place(90);  // row order[i] of the first data stands at i of the second
    for (const std::uint32_t row : shuffled(90, stream)) order.push_back(row);
    for (std::size_t i = 0; i < 90; ++i) place[static_cast<std::size_t>(order[i])] = static_cast<Index>(i);
    SmallContest moved = prepare(study, in_order(answers, order, counting(11)).csv());
    for (int r = 0; r < 4; ++r)
        for (std::size_t i = 0; i < 90; ++i)
            moved.plan.fold_of[static_cast<std::size_t>(r) * 90 + i] =
                contest.plan.fold(r, static_cast<std::size_t>(order[i]));
    CHECK(disagreement(run(contest), run(moved), place) < 1e-10);
}

TEST_CASE("a linear rescaling of an indicator changes nothing, predictor or outcome", "[trial]") {
    const Answers answers = with_gaps(invented_answers(90));
    const std::string study = study_text("folds: 5, repeats: 4, mediators: predicted", ", rows: mean");
    const Trial plain = run(prepare(study, answers.csv()));
    for (const char* name : {"pln2", "skl1", "sup1", "dlv2"}) {
        Answers rescaled = answers;
        rescaled.column(name) = 12.5 * rescaled.column(name).array() - 300;
        INFO(name);
        const Trial trial = run(prepare(study, rescaled.csv()));
        CHECK(disagreement(plain, trial) < 1e-10);
        const bool outcome = std::string(name) == "dlv2";
        CHECK(trial.contestants[1].indicators[1].rmse ==
              Approx(plain.contestants[1].indicators[1].rmse * (outcome ? 12.5 : 1)).epsilon(1e-10));
        CHECK(trial.contestants[1].indicators[1].q2 == Approx(plain.contestants[1].indicators[1].q2).epsilon(1e-9));
    }
}

TEST_CASE("answers shifted by 1e8 lose nothing under metric: standard", "[trial]") {
    const Answers answers = with_gaps(invented_answers(90));
    const std::string study = study_text("folds: 5, repeats: 4, mediators: predicted", ", rows: mean");
    Answers shifted = answers;
    shifted.values.array() += 1e8;
    CHECK(disagreement(run(prepare(study, answers.csv())), run(prepare(study, shifted.csv()))) < 1e-10);
}

TEST_CASE("a reversed item equals the item recoded in the data", "[trial]") {
    Answers answers = invented_answers(90);
    const std::string trial = "folds: 5, repeats: 4, seed: 3, mediators: predicted";
    std::string plain = kConstructs, reversed = kConstructs;
    plain.replace(plain.find("[\"pln*\"]"), 8, "[\"pln*\"], weights: equal");
    reversed.replace(reversed.find("[\"pln*\"]"), 8, "[\"pln*\"], weights: equal, reversed: [pln2], range: [1, 7]");
    reversed.replace(reversed.find("[\"dlv*\"]"), 8, "[\"dlv*\"], reversed: [dlv3], range: [1, 7]");
    const Trial recoded = run(prepare(study_text(trial, "", plain), answers.csv()));
    for (const char* name : {"pln2", "dlv3"}) answers.column(name) = 8 - answers.column(name).array();
    check_same_bits(recoded, run(prepare(study_text(trial, "", reversed), answers.csv())));
    CHECK(disagreement(recoded, run(prepare(study_text(trial, "", plain), answers.csv()))) >
          1e-2);  // so that the reversal matters
}

TEST_CASE("a theory and its renamed copy differ by exactly 0 on every row", "[trial]") {
    std::string theories = kTheories;
    for (const char* name : {"additive", "amplifying", "chain", "scarcest"}) {
        const std::size_t at = kTheories.find(std::string("{name: ") + name), end = kTheories.find('\n', at);
        std::string copy = kTheories.substr(at, end - at);
        copy.replace(copy.find(name), 0, "other ");
        theories += "  - " + copy + "\n";
    }
    const Trial trial =
        run(prepare(study_text("folds: 5, repeats: 4, mediators: predicted", ", rows: mean", kConstructs, theories),
                    with_gaps(invented_answers(90)).csv()),
            2);
    for (std::size_t t = 0; t < 4; ++t) {
        CHECK(trial.contestants[t + 4].name == "other " + trial.contestants[t].name);
        CHECK((trial.contestants[t].row_loss - trial.contestants[t + 4].row_loss).isZero(0));
        CHECK((trial.contestants[t].split_loss - trial.contestants[t + 4].split_loss).isZero(0));
    }
}

TEST_CASE("crossed of one construct equals its name alone", "[trial]") {
    const Trial trial = run(prepare(study_text("folds: 5, repeats: 4", "", kConstructs, R"(theories:
  - {name: alone, equations: {delivery: [planning, skill]}}
  - {name: crossed, equations: {delivery: [{crossed: [planning]}, skill]}}
)"),
                                    invented_answers(90).csv()));
    CHECK(trial.contestants[0].row_loss == trial.contestants[1].row_loss);
}

TEST_CASE("another theory in the contest changes no bit of the others", "[trial]") {
    const std::string data = invented_answers(90).csv();
    const Trial four = run(prepare(study_text(), data));
    std::string theories = kTheories;
    theories.erase(theories.find("  - {name: amplifying"),
                   theories.find("  - {name: chain") - theories.find("  - {name: amplifying"));
    const Trial three = run(
        prepare(study_text("folds: 5, repeats: 4, seed: 3, mediators: predicted", "", kConstructs, theories), data));
    CHECK(three.contestants[0].row_loss == four.contestants[0].row_loss);
    CHECK(three.contestants[1].row_loss == four.contestants[2].row_loss);
    CHECK(three.contestants[2].row_loss == four.contestants[3].row_loss);
    CHECK(three.contestants[3].row_loss == four.contestants[4].row_loss);  // training mean
    CHECK(three.contestants[4].row_loss ==
          four.contestants[5].row_loss);  // the linear benchmark has the same predictors
}
