#include "hand_made.hpp"

using namespace rivalfold;
using Eigen::VectorXd;

namespace {

/// The part of `text` from `start` on; all of it where `start` does not occur.
std::string from(const std::string& text, const std::string& start) {
    const std::size_t at = text.find(start);
    return at == std::string::npos ? text : text.substr(at);
}
bool holds(const std::string& text, const std::string& part) { return text.find(part) != std::string::npos; }

const std::string kSame = R"(study: refits
data: {file: refits.csv}
constructs:
  planning: {indicators: ["pln*"]}
  skill: {indicators: ["skl*"]}
  supply: {indicators: ["sup*"]}
  delivery: {indicators: ["dlv*"]}
target: delivery
trial: {folds: 5, repeats: 3}
theories:
)";

}  // namespace

// 0.3 of 1.3 is 23.1%. The corrected test's interval is the wider: standard error 0.3 / 5, the quantile of t with 19
// degrees of freedom 2.0930, so 0.3 -+ 0.1256: 13.4% to 32.7% of 1.3.
TEST_CASE("a winner's headline tells size, interval and typical errors as losses that are smaller", "[words]") {
    MadeContest made;
    made.worse(1, 0.3, 6, 5);
    made.worse(2, 0.4, 6, 6);
    made.typical_errors(1.25, 1.5);
    const Verdict verdict = made.judged();
    REQUIRE(verdict.winner == std::optional<std::size_t>{0});
    CHECK(verdict.headline ==
          "\"A\" predicts new rows better than every rival (both tests against each, largest p < .001): its loss is "
          "23.1% smaller than that of \"B\" (95% interval 13.4 to 32.7%), a typical error of 1.250 instead of 1.500 "
          "in the units of \"dlv1\".");
    CHECK(verdict.theories[0].verdict == "predicts better than every rival");
    CHECK(verdict.theories[1].verdict == "predicts worse than \"A\"");
    CHECK(verdict.theories[2].verdict == "predicts worse than \"A\"");
}

// t = 2.6 with 19 degrees of freedom: p = .018. Standard error 0.2 / 2.6, 90% quantile 1.7291: 0.2 -+ 0.1330.
TEST_CASE("the headline follows the study's level, names the largest p and several indicators together", "[words]") {
    MadeContest made(120, "verdict: {level: 0.1}\n", "dlv1, dlv2");
    made.worse(1, 0.2, 5, 2.6);
    made.worse(2, 0.4, 8, 8);
    made.typical_errors(0.5, 0.75);
    CHECK(made.judged().headline ==
          "\"A\" predicts new rows better than every rival (both tests against each, largest p = .018): its loss is "
          "16.7% smaller than that of \"B\" (90% interval 5.6 to 27.8%), a typical error of 0.500 instead of 0.750 in "
          "the units of the target's indicators.");
}

TEST_CASE("a rival that failed is named beside the winner, not counted as beaten", "[words]") {
    MadeContest made(120, "", "dlv1", "tied");
    made.worse(1, 0.3, 6, 5);
    made.typical_errors(1.25, 1.5);
    const Verdict verdict = made.judged();
    REQUIRE(made.trial.contestants[2].failed);
    CHECK(verdict.headline ==
          "\"A\" predicts new rows better than every rival that could be fitted (both tests against each, largest p < "
          ".001): its loss is 23.1% smaller than that of \"B\" (95% interval 13.4 to 32.7%), a typical error of 1.250 "
          "instead of 1.500 in the units of \"dlv1\". Not judged, because it could not be fitted in every split: "
          "\"C\".");
    CHECK(verdict.theories[2].verdict == "failed " + made.trial.contestants[2].reason);
}

TEST_CASE("a rival that failed is named where nobody wins, too", "[words]") {
    MadeContest made(120, "", "dlv1", "tied");
    made.worse(1, 0.3, 1, 1);
    CHECK(from(made.judged().headline, " Not judged") ==
          " Not judged, because it could not be fitted in every split: \"C\".");
}

// Equality by the 90% intervals (Schuirmann 1987): they end at 0.9% and 1.6%, within 2%.
TEST_CASE("practically equal rivals are told as equal, and nothing is said to be beyond these data", "[words]") {
    MadeContest made;
    made.worse(1, 0.005, 4, 2);
    made.worse(2, 0.009, 4, 4);
    made.typical_errors(1.25, 1.26);
    const Verdict verdict = made.judged();
    CHECK(verdict.headline.substr(0, verdict.headline.find(" Shortlist")) ==
          "No single winner: \"A\" ranks first. Practically equal to the first (surely within 2%): \"B\" and \"C\".");
    CHECK_FALSE(holds(verdict.headline, "cannot tell"));
    CHECK_FALSE(holds(verdict.headline, "Shown to predict worse"));
    CHECK(verdict.theories[0].verdict == "ranks first, no better than one that is practically equal");
    CHECK(verdict.theories[1].verdict == "practically equal to \"A\"");
    CHECK(verdict.theories[2].verdict == "practically equal to \"A\"");
    made.contest.study.verdict.margin = 0.035;
    CHECK(holds(made.judged().headline, " Practically equal to the first (surely within 3.5%): \"B\" and \"C\"."));
}

TEST_CASE("one rival equal and one shown worse leave no rival open", "[words]") {
    MadeContest made;
    made.worse(1, 0.005, 4, 1);
    made.worse(2, 0.5, 9, 9);
    made.typical_errors(1.25, 1.26);
    const Verdict verdict = made.judged();
    // 0.005 of 1.005 is 0.5%; 0.005 -+ 2.0930 x 0.005 ends at -0.0055 and 0.0155.
    CHECK(verdict.headline ==
          "No single winner: \"A\" ranks first. Practically equal to the first (surely within 2%): \"B\". Shown to "
          "predict worse than the first: \"C\". Shortlist of theories that may be the best (model confidence set at "
          "0.05): \"A\"; not on it: \"B\" and \"C\". Against the second: its loss is 0.5% smaller than that of \"B\" "
          "(95% interval -0.5 to 1.5%), a typical error of 1.250 instead of 1.260 in the units of \"dlv1\".");
    CHECK(verdict.theories[2].verdict == "predicts worse than \"A\"");
}

TEST_CASE("rivals that the tests leave open are those that these data cannot tell from the first", "[words]") {
    MadeContest made;
    made.worse(1, 0.2, 1, 1);
    made.worse(2, 0.5, 9, 9);
    made.typical_errors(1.25, 1.5);
    const Verdict verdict = made.judged();
    // 0.2 of 1.2 is 16.7%; standard error 0.2, 0.2 -+ 2.0930 x 0.2.
    CHECK(verdict.headline ==
          "No single winner: \"A\" ranks first, but these data cannot tell it from \"B\". Shown to predict worse than "
          "the first: \"C\". Shortlist of theories that may be the best (model confidence set at 0.05): \"A\" and "
          "\"B\"; not on it: \"C\". Against the second: its loss is 16.7% smaller than that of \"B\" (95% interval "
          "-18.2 to 51.6%), a typical error of 1.250 instead of 1.500 in the units of \"dlv1\".");
    CHECK(verdict.theories[0].verdict == "ranks first, without a clear lead");
    CHECK(verdict.theories[1].verdict == "cannot be told from \"A\"");
    CHECK(verdict.theories[2].verdict == "predicts worse than \"A\"");
}

TEST_CASE("with 100 rows or fewer the headline says what cannot be shown, unless it was", "[words]") {
    const std::string sentence = " With 100 rows or fewer, practical equality can almost never be shown.";
    for (const Eigen::Index rows : {100, 101}) {
        MadeContest made(rows);
        made.worse(1, 0.2, 1, 1);
        made.worse(2, 0.3, 1, 1);
        CHECK(holds(made.judged().headline, sentence) == (rows == 100));
        made.worse(1, 0.001, 1, 1);
        CHECK_FALSE(holds(made.judged().headline, sentence));
        made.set(1, made.trial.contestants[0].row_loss, made.trial.contestants[0].split_loss);
        CHECK_FALSE(holds(made.judged().headline, sentence));
    }
}

TEST_CASE("a theory and its copy under another order of terms make the same predictions", "[words]") {
    const std::string one = "  - {name: one, equations: {delivery: [planning, skill, supply]}}\n";
    const std::string copy = "  - {name: copy, equations: {delivery: [supply, skill, planning]}}\n";
    for (const auto& [theories, first, second] :
         {std::tuple{one + copy, "one", "copy"}, std::tuple{copy + one, "copy", "one"}}) {
        const Verdict verdict =
            run_and_judge(kSame + theories + "  - {name: bare, equations: {delivery: [{square: supply}]}}\n",
                          invented_answers(150).csv())
                .verdict;
        CHECK(verdict.theories[0].rank == 1);
        CHECK(verdict.theories[1].rank == 2);
        CHECK(verdict.theories[0].first_share == Approx(0.5).epsilon(1e-12));
        CHECK(verdict.theories[1].first_share == Approx(0.5).epsilon(1e-12));
        CHECK(verdict.theories[0].verdict == "ranks first, no better than one that is practically equal");
        CHECK(verdict.theories[1].verdict == fmt::format("makes the same predictions as \"{}\"", first));
        CHECK(verdict.headline ==
              fmt::format("No single winner: \"{0}\" ranks first. \"{1}\" makes the same predictions as the first. "
                          "Shown to predict worse than the first: \"bare\". Shortlist of theories that may be the "
                          "best (model confidence set at 0.05): \"{0}\" and \"{1}\"; not on it: \"bare\".",
                          first, second));
        CHECK_FALSE(verdict.disagreement.present);
        const PairReport& same = pair_of(verdict, 0, 1);
        CHECK(same.difference == 0);
        CHECK(std::isnan(same.p));
    }
}

TEST_CASE("losses that differ in their last digits alone are ranked by file order", "[words]") {
    for (const double rounding : {-2e-15, 0.0, 2e-15}) {
        MadeContest made;
        made.set(1, made.trial.contestants[0].row_loss * (1 + rounding), made.trial.contestants[0].split_loss);
        made.set(2, made.trial.contestants[0].row_loss * (1 - rounding), made.trial.contestants[0].split_loss);
        const Verdict verdict = made.judged();
        CHECK(verdict.order == std::vector<std::size_t>{0, 1, 2, 3, 4});
        for (const TheoryReport& theory : verdict.theories) CHECK(theory.first_share == Approx(1.0 / 3).epsilon(1e-12));
        CHECK(verdict.headline ==
              "No single winner: \"A\" ranks first. \"B\" and \"C\" make the same predictions as the first. Shortlist "
              "of theories that may be the best (model confidence set at 0.05): \"A\", \"B\" and \"C\".");
    }
}

// A difference far above rounding is ranked, however small.
TEST_CASE("a loss smaller by a billionth ranks first against file order", "[words]") {
    MadeContest made;
    made.set(1, made.trial.contestants[0].row_loss * (1 - 1e-9), made.trial.contestants[0].split_loss);
    CHECK(made.judged().order.front() == 1);
    CHECK(made.judged().theories[1].first_share == 1);
}

TEST_CASE("theories that predict every row exactly have a sentence without a percentage", "[words]") {
    MadeContest made;
    const VectorXd zero = VectorXd::Zero(120), no_split = VectorXd::Zero(20);
    made.worse(2, 0.5, 9, 9);
    made.set(0, zero, no_split);
    made.set(1, zero, no_split);
    CHECK(made.judged().headline ==
          "No single winner: \"A\" ranks first. \"B\" makes the same predictions as the first. Shown to predict worse "
          "than the first: \"C\". Shortlist of theories that may be the best (model confidence set at 0.05): \"A\" "
          "and \"B\"; not on it: \"C\".");
    // One row is off by more than rounding, the mean is not.
    VectorXd nearly = zero, nearly_split = no_split;
    nearly(5) = 6e-11;
    nearly_split(3) = 1e-11;
    made.set(1, nearly, nearly_split);
    const Verdict verdict = made.judged();
    CHECK(from(verdict.headline, " Against the second") == " Against the second: both predict every row exactly.");
    CHECK_FALSE(holds(verdict.headline, "nan"));
    CHECK_FALSE(holds(verdict.headline, "inf"));
}
