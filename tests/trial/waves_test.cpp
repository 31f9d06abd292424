#include "contests.hpp"

using namespace rivalfold;
using Eigen::Index;
using Eigen::VectorXd;

namespace {

const std::string kItems = R"(study: refits
data: {file: refits.csv}
constructs:
  p1: {indicators: [pln1]}
  p2: {indicators: [pln2]}
  p3: {indicators: [pln3]}
  k1: {indicators: [skl1]}
  k2: {indicators: [skl2]}
  k3: {indicators: [skl3]}
  s1: {indicators: [sup1]}
  s2: {indicators: [sup2]}
  delivery: {indicators: ["dlv*"]}
target: delivery
theories:
  - {name: additive, equations: {delivery: [p1, p2, p3, k1, k2, k3, s1, s2]}}
  - {name: bent, equations: {delivery: [p1, {square: k1}, {minimum: [p2, k2, s1]}]}}
)";
/// 255 terms.
const std::string kCrossed =
    "  - {name: crossed, equations: {delivery: [{crossed: [p1, p2, p3, k1, k2, k3, s1, s2]}]}}\n";

struct Watched {
    Trial trial;
    std::size_t waves = 0;  ///< progress is told once per wave
};

Watched watch(const std::string& theories, const std::string& trial) {
    const SmallContest contest = prepare(kItems + theories + "trial: {" + trial + "}\n", invented_answers(120).csv());
    Watched out;
    out.trial = run(contest, 2, [&](double) { ++out.waves; });
    return out;
}

void check_same_losses(const ContestantLosses& a, const ContestantLosses& b) {
    INFO(a.name);
    REQUIRE(a.name == b.name);
    CHECK(a.row_loss == b.row_loss);
    CHECK(a.split_loss == b.split_loss);
    CHECK(a.repeat_loss == b.repeat_loss);
    CHECK((a.loss == b.loss && a.rmse == b.rmse && a.mae == b.mae && a.q2 == b.q2));
}

}  // namespace

TEST_CASE("a theory of 255 terms splits the repeats into waves, and no other theory's losses change a bit", "[trial]") {
    const std::string settings = "folds: 5, repeats: 12, loss: absolute";
    const Watched narrow = watch("", settings), wide = watch(kCrossed, settings);
    CHECK(narrow.waves == 1);
    CHECK(wide.waves > 1);
    REQUIRE_FALSE(wide.trial.contestants[2].failed);
    const std::size_t here[] = {0, 1, 2, 3}, there[] = {0, 1, 3, 4};  // the wide theory stands third
    for (std::size_t k = 0; k < 4; ++k)
        check_same_losses(narrow.trial.contestants[here[k]], wide.trial.contestants[there[k]]);
}

TEST_CASE("the losses of a wide theory over several waves are those of each repeat, averaged", "[trial]") {
    const Watched many = watch(kCrossed, "folds: 5, repeats: 12"), few = watch(kCrossed, "folds: 5, repeats: 2");
    REQUIRE(many.waves > 1);
    CHECK(few.waves == 1);
    for (std::size_t c = 0; c < many.trial.contestants.size(); ++c) {
        const ContestantLosses& all = many.trial.contestants[c];
        CHECK(all.split_loss.head(10) == few.trial.contestants[c].split_loss);
        CHECK(all.repeat_loss.head(2) == few.trial.contestants[c].repeat_loss);
        REQUIRE(all.repeat_loss.size() == 12);
        REQUIRE(all.split_loss.size() == 60);
        CHECK(all.loss == Approx(all.repeat_loss.mean()).epsilon(1e-12));
        CHECK(all.loss == Approx(all.row_loss.mean()).epsilon(1e-12));
        // 120 rows in 5 folds: every fold holds 24, so the mean over splits is the mean over rows.
        CHECK(all.loss == Approx(all.split_loss.mean()).epsilon(1e-12));
    }
}
