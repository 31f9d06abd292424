// The contest that the tests of this room share: four theories over invented answers, every weighting and bent terms
// among them.
#pragma once

#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include "rivalfold/trial/losses.hpp"

namespace rivalfold {

inline const std::string kConstructs = R"(constructs:
  planning: {indicators: ["pln*"]}
  skill: {indicators: ["skl*"], weights: mode_b}
  supply: {indicators: ["sup*"], weights: principal}
  delivery: {indicators: ["dlv*"]}
target: delivery
)";

inline const std::string kTheories = R"(theories:
  - {name: additive, equations: {delivery: [planning, skill, supply]}}
  - {name: amplifying, equations: {delivery: [{crossed: [planning, skill]}]}}
  - {name: chain, equations: {skill: [supply, {square: planning}], delivery: [planning, skill]}}
  - {name: scarcest, equations: {delivery: [{minimum: [planning, skill, supply]}, {maximum: [planning, supply]}]}}
)";

inline std::string study_text(const std::string& trial = "folds: 5, repeats: 4, seed: 3, mediators: predicted",
                              const std::string& data_keys = "", const std::string& constructs = kConstructs,
                              const std::string& theories = kTheories) {
    return "study: refits\ndata: {file: refits.csv" + data_keys + "}\n" + constructs + theories + "trial: {" + trial +
           "}\n";
}

inline Trial run(const SmallContest& contest, unsigned threads = 1, const std::function<void(double)>& progress = {}) {
    FoldPlan plan = contest.plan;
    return run_trial(contest.study, contest.survey, *contest.sample, plan, threads, progress);
}

/// The largest relative disagreement of any number that the tables use. Rows of `b` in the order `row_of_b` of the rows
/// of `a`.
inline double disagreement(const Trial& a, const Trial& b, const std::vector<Eigen::Index>& row_of_b = {}) {
    REQUIRE(a.contestants.size() == b.contestants.size());
    double worst = 0;
    const auto compare = [&](double x, double y) {
        if (std::isnan(x) && std::isnan(y)) return;
        const double apart = std::fabs(x - y) / std::max({1e-3, std::fabs(x), std::fabs(y)});
        worst = apart <= worst ? worst : apart;  // NaN on one side stays
    };
    for (std::size_t c = 0; c < a.contestants.size(); ++c) {
        const ContestantLosses& x = a.contestants[c];
        const ContestantLosses& y = b.contestants[c];
        REQUIRE_FALSE(x.failed);
        REQUIRE_FALSE(y.failed);
        REQUIRE(x.row_loss.size() == y.row_loss.size());
        REQUIRE(x.split_loss.size() == y.split_loss.size());
        for (Eigen::Index i = 0; i < x.row_loss.size(); ++i)
            compare(x.row_loss(i), y.row_loss(row_of_b.empty() ? i : row_of_b[static_cast<std::size_t>(i)]));
        for (Eigen::Index s = 0; s < x.split_loss.size(); ++s) compare(x.split_loss(s), y.split_loss(s));
        for (Eigen::Index r = 0; r < x.repeat_loss.size(); ++r) compare(x.repeat_loss(r), y.repeat_loss(r));
        compare(x.loss, y.loss);
        compare(x.rmse, y.rmse);
        compare(x.mae, y.mae);
        compare(x.q2, y.q2);
    }
    return worst;
}

/// Every number the same, bit by bit.
inline void check_same_bits(const Trial& a, const Trial& b) {
    REQUIRE(a.contestants.size() == b.contestants.size());
    for (std::size_t c = 0; c < a.contestants.size(); ++c) {
        const ContestantLosses& x = a.contestants[c];
        const ContestantLosses& y = b.contestants[c];
        INFO(x.name);
        CHECK(x.row_loss == y.row_loss);
        CHECK(x.split_loss == y.split_loss);
        CHECK(x.repeat_loss == y.repeat_loss);
        CHECK((x.loss == y.loss && x.rmse == y.rmse && x.mae == y.mae && x.q2 == y.q2));
        REQUIRE(x.indicators.size() == y.indicators.size());
        for (std::size_t j = 0; j < x.indicators.size(); ++j)
            CHECK((x.indicators[j].rmse == y.indicators[j].rmse && x.indicators[j].mae == y.indicators[j].mae &&
                   x.indicators[j].mape == y.indicators[j].mape && x.indicators[j].q2 == y.indicators[j].q2));
    }
    for (std::size_t t = 0; t < a.whole.size(); ++t)
        for (std::size_t e = 0; e < a.whole[t].fit.equations.size(); ++e)
            CHECK(a.whole[t].fit.equations[e].slopes == b.whole[t].fit.equations[e].slopes);
    CHECK(a.full_model.sse == b.full_model.sse);
    CHECK(a.errors.products == b.errors.products);
    CHECK(a.errors.squares == b.errors.squares);
    CHECK(a.errors.mean_error == b.errors.mean_error);
    CHECK(a.errors.stack.row_loss == b.errors.stack.row_loss);
    CHECK(a.errors.stack.weights == b.errors.stack.weights);
}

}  // namespace rivalfold
