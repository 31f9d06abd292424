#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include "rivalfold/trial/losses.hpp"
#include "rivalfold/trial/standard_error.hpp"
#include "rivalfold/verdict/completeness.hpp"
#include "verdict/flexible_benchmark.hpp"
#include "verdict/kernel_ridge.hpp"
#include "verdict/restrictiveness.hpp"

#include <set>

using namespace rivalfold;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

const std::string kConstructs = R"(constructs:
  planning: {indicators: ["pln*"]}
  skill: {indicators: ["skl*"]}
  supply: {indicators: ["sup*"]}
  delivery: {indicators: ["dlv*"]}
target: delivery
)";
const std::string kTheories = R"(theories:
  - {name: additive, equations: {delivery: [planning, skill, supply]}}
  - {name: amplifying, equations: {delivery: [{crossed: [planning, skill, supply]}]}}
  - {name: planning only, equations: {delivery: [planning]}}
)";

std::string study_text(const std::string& trial, const std::string& data_keys = "",
                       const std::string& theories = kTheories, const std::string& constructs = kConstructs) {
    return "study: refits\ndata: {file: refits.csv" + data_keys + "}\n" + constructs + theories + "trial: {" + trial +
           "}\n";
}

struct Measured {
    SmallContest contest;
    Trial trial;
    CompletenessReport report;
};

Measured measure(SmallContest contest, unsigned threads = 1, const CompletenessLimits& limits = {}) {
    Measured out;
    out.contest = std::move(contest);
    out.trial = run_trial(out.contest.study, out.contest.survey, *out.contest.sample, out.contest.plan, threads);
    out.report = measure_completeness(out.contest.study, out.contest.survey, *out.contest.sample, out.contest.plan,
                                      out.trial, threads, limits);
    return out;
}

Measured measure(const std::string& study, const Answers& answers, const CompletenessLimits& limits = {}) {
    return measure(prepare(study, answers.csv()), 1, limits);
}

/// The invented answers with delivery a sum of the three, and noise.
Answers linear_answers(Index n, double share) {
    Answers out = invented_answers(n);
    RandomStream stream(5, Purpose::simulation, 1);
    for (Index i = 0; i < n; ++i) {
        const double sum = (out.values.row(i).head(8).sum() - 32) / 8;
        for (Index j = 8; j < 11; ++j) out.values(i, j) = share * sum + bell(stream);
    }
    return out;
}

std::set<int> clusters_of(const Measured& measured) {
    std::set<int> out;
    for (const std::size_t row : measured.report.row_index) out.insert(measured.contest.survey.clusters[row]);
    return out;
}

}  // namespace

// By scikit-learn, with length-scale and penalty from refits without each row: tests/reference/outside/kernel_ridge.py.
TEST_CASE("the flexible benchmark's losses are those of scikit-learn", "[verdict]") {
    SmallContest contest = prepare(R"(study: exercise
data: {file: linnerud.csv}
constructs: {body: {indicators: [Weight, Waist, Pulse]}, chins: {indicators: [Chins]}, situps: {indicators: [Situps]}, jumps: {indicators: [Jumps]}}
target: body
theories:
  - {name: all, equations: {body: [chins, situps, jumps]}}
  - {name: two, equations: {body: [chins, situps]}}
trial: {folds: 4, repeats: 1}
)",
                                   file_text("reference/outside/linnerud.csv"));
    for (std::size_t i = 0; i < 20; ++i) contest.plan.fold_of[i] = static_cast<std::uint32_t>(i % 4);
    const Measured measured = measure(std::move(contest));
    const auto frozen = frozen_cells("reference/outside/flexible_linnerud.csv");
    REQUIRE(measured.report.flexible_row_loss.size() == 20);
    double sum = 0;
    for (std::size_t i = 0; i < 20; ++i) {
        CHECK(measured.report.flexible_row_loss(static_cast<Index>(i)) ==
              Approx(std::stod(frozen[i + 1][2])).epsilon(1e-9));
        CHECK(measured.report.row_index[i] == i);
        sum += std::stod(frozen[i + 1][2]);
    }
    CHECK(measured.report.loss_flexible == Approx(sum / 20).epsilon(1e-9));
    CHECK(measured.report.loss_mean == Approx(measured.trial.contestants[2].loss).epsilon(1e-12));
    CHECK(measured.report.q2_flexible ==
          Approx(1 - sum / 20 / measured.trial.contestants[2].loss).epsilon(1e-9));  // squared loss, one repeat
}

TEST_CASE("length-scale and penalty are those with the smallest error of refits without each training row",
          "[verdict]") {
    Answers answers = linear_answers(48, 0);
    for (Index i = 0; i < 48; ++i)  // a bent truth, so that no smooth function is best
        for (Index j = 8; j < 11; ++j)
            answers.values(i, j) =
                0.3 * answers.values(i, j) + std::sin(2 * answers.values(i, 0)) + 0.3 * answers.values(i, 4);
    answers.values.col(10) *= 50;  // large numbers count no more than small ones
    RandomStream stream(8, Purpose::simulation, 2);
    for (Index i = 0; i < 48; ++i) answers.values(i, 10) += 100 * bell(stream);
    const SmallContest contest = prepare(study_text("folds: 3, repeats: 1", "", kTheories), answers.csv());
    FlexibleTask task;
    task.predictors = {contest.survey.measurement(0, "planning")->variables[0],
                       contest.survey.measurement(0, "skill")->variables[1]};
    task.targets = contest.survey.measurement(0, "delivery")->variables;
    task.folds = 3;
    task.most_choice_rows = 1000;
    for (std::size_t i = 0; i < 48; ++i) {
        task.rows.push_back(static_cast<Index>(i));
        task.fold_of.push_back(contest.plan.fold(0, i));
    }
    WorkerPool pool(1);
    const FlexibleErrors found = predict_flexibly(*contest.sample, task, pool);
    for (std::uint32_t fold = 0; fold < 3; ++fold) {
        std::vector<Index> training;
        for (std::size_t i = 0; i < 48; ++i)
            if (task.fold_of[i] != fold) training.push_back(static_cast<Index>(i));
        const auto standardised = [&](const std::vector<int>& columns) {
            const MatrixXd all = contest.sample->values(training, columns);
            MatrixXd z = all.rowwise() - all.colwise().mean();
            z.array().rowwise() /= (z.colwise().squaredNorm() / static_cast<double>(z.rows() - 1)).cwiseSqrt().array();
            return z;
        };
        const MatrixXd x = standardised(task.predictors), y = standardised(task.targets);
        double least = std::numeric_limits<double>::infinity(), multiple = 0, penalty = 0;
        for (const double tried : {8.0, 4.0, 2.0, 1.0, 0.5})
            for (int step = 0; step < kPenalties; ++step) {
                double error = 0;
                for (Index out = 0; out < x.rows(); ++out) {
                    std::vector<Index> others;
                    for (Index i = 0; i < x.rows(); ++i)
                        if (i != out) others.push_back(i);
                    const MatrixXd kept = x(others, Eigen::indexing::all);
                    const double length = tried * median_distance(x);
                    const KernelRidge fit = fit_kernel_ridge(gaussian_kernel(kept, kept, length),
                                                             y(others, Eigen::indexing::all), penalty_at(step));
                    error += (y.row(out) - fit.predict(gaussian_kernel(x.row(out), kept, length))).squaredNorm();
                }
                if (error < least) {
                    least = error;
                    multiple = tried;
                    penalty = penalty_at(step);
                }
            }
        CHECK(found.multiple[fold] == multiple);
        CHECK(found.penalty[fold] == penalty);
        CHECK(multiple < 8);
    }
}

TEST_CASE("completeness is the same for any number of threads, and comes from the seed", "[verdict]") {
    const Answers answers = invented_answers(90);
    const std::string study = study_text("folds: 5, repeats: 3, seed: 3");
    CompletenessLimits small;
    small.choice_rows = 50;
    small.draw_rows = 60;
    const CompletenessReport one = measure(prepare(study, answers.csv()), 1, small).report;
    const CompletenessReport four = measure(prepare(study, answers.csv()), 4, small).report;
    const CompletenessReport other =
        measure(prepare(study_text("folds: 5, repeats: 3, seed: 4"), answers.csv()), 1, small).report;
    REQUIRE(one.computed);
    CHECK(one.flexible_row_loss == four.flexible_row_loss);
    CHECK(one.note == four.note);
    for (std::size_t t = 0; t < 3; ++t) {
        CHECK((one.theories[t].completeness == four.theories[t].completeness &&
               one.theories[t].low == four.theories[t].low && one.theories[t].high == four.theories[t].high &&
               one.theories[t].restrictiveness == four.theories[t].restrictiveness));
        CHECK(one.theories[t].low != other.theories[t].low);
        CHECK(one.theories[t].restrictiveness != other.theories[t].restrictiveness);
    }
    CHECK(one.note ==
          "The flexible benchmark's length-scale and penalty were chosen on 50 of each fold's training rows, then "
          "fitted to all of them. "
          "Restrictiveness was measured on 60 of the 90 rows, drawn from the seed.");
}

TEST_CASE("a held-out row's outcome leaves its flexible prediction unchanged", "[verdict]") {
    Answers answers = invented_answers(60);
    answers.names.push_back("kind");
    answers.values.conservativeResize(Eigen::NoChange, 12);
    for (Index i = 0; i < 60; ++i)
        answers.values(i, 11) = i == 7 ? 3 : static_cast<double>(i % 3 == 0);  // one row has a level of its own
    answers.values(7, 0) = answers.values(20, 4) = std::numeric_limits<double>::quiet_NaN();
    const std::string constructs =
        kConstructs.substr(0, kConstructs.find("  delivery")) +
        "  kind: {category: kind}\n  delivery: {indicators: [dlv1]}\ncontrols: [kind]\ntarget: delivery\n";
    const std::string study = study_text("folds: 6, repeats: 1, loss: absolute", ", rows: mean", kTheories, constructs);
    for (const Index row : {Index{7}, Index{20}, Index{59}}) {
        const auto predicted = [&](double outcome) {
            Answers changed = answers;
            changed.values(row, changed.at("dlv1")) = outcome;
            const Measured measured = measure(study, changed);
            const double error = measured.report.flexible_row_loss(row) * measured.trial.unit(0);
            return outcome > 0 ? outcome - error : outcome + error;
        };
        const double high = predicted(100);
        CHECK(std::fabs(predicted(-100) - high) < 1e-9);
        CHECK(std::fabs(predicted(40) - high) < 1e-9);
        CHECK((high > 0 && high < 8));
    }
}

TEST_CASE("a level that the training rows lack counts as none of the levels", "[verdict]") {
    Answers answers = invented_answers(60);
    answers.names.push_back("kind");
    answers.values.conservativeResize(Eigen::NoChange, 12);
    for (Index i = 0; i < 60; ++i) answers.values(i, 11) = i == 7 ? 3 : static_cast<double>(i % 2);
    const std::string constructs = kConstructs.substr(0, kConstructs.find("target")) +
                                   "  kind: {category: kind}\ncontrols: [kind]\ntarget: delivery\n";
    const SmallContest contest = prepare(study_text("folds: 6, repeats: 1", "", kTheories, constructs), answers.csv());
    const LevelColumns& levels = contest.sample->categories.at(0);
    REQUIRE(levels.n_levels == 3);
    FlexibleTask task;
    task.predictors = {0, 3, levels.first, levels.first + 1, levels.first + 2};
    task.targets = contest.survey.measurement(0, "delivery")->variables;
    task.folds = 6;
    task.most_choice_rows = 1000;
    for (std::size_t i = 0; i < 60; ++i) {
        task.rows.push_back(static_cast<Index>(i));
        task.fold_of.push_back(contest.plan.fold(0, i));
    }
    WorkerPool pool(1);
    const FlexibleErrors with = predict_flexibly(*contest.sample, task, pool);
    task.predictors.pop_back();
    const FlexibleErrors without = predict_flexibly(*contest.sample, task, pool);
    CHECK(with.errors.row(7) == without.errors.row(7));
    CHECK(with.errors != without.errors);
    task.predictors.pop_back();
    CHECK(predict_flexibly(*contest.sample, task, pool).errors.row(7) != without.errors.row(7));
}

TEST_CASE("a gap in a held-out row is filled with the mean of the training rows", "[verdict]") {
    Answers answers = invented_answers(60);
    answers.values(20, 4) = std::numeric_limits<double>::quiet_NaN();
    const std::string study = study_text("folds: 6, repeats: 1", ", rows: mean");
    const Measured gap = measure(study, answers);
    double mean = 0, rows = 0;
    for (std::size_t i = 0; i < 60; ++i) {
        if (gap.contest.plan.fold(0, i) == gap.contest.plan.fold(0, 20)) continue;
        mean += answers.values(static_cast<Index>(i), 4);
        rows += 1;
    }
    answers.values(20, 4) = mean / rows;
    const Measured filled = measure(study, answers);
    CHECK(filled.report.flexible_row_loss(20) == Approx(gap.report.flexible_row_loss(20)).epsilon(1e-9));
    answers.values(20, 4) += 1;
    CHECK(std::fabs(measure(study, answers).report.flexible_row_loss(20) - gap.report.flexible_row_loss(20)) > 1e-6);
}

TEST_CASE("where the truth is linear the additive theory is about complete, and leaving predictors out is not",
          "[verdict]") {
    const Measured measured = measure(study_text("folds: 10, repeats: 2"), linear_answers(300, 1.5));
    const TheoryCompleteness& additive = measured.report.theories[0];
    const TheoryCompleteness& planning = measured.report.theories[2];
    CHECK(additive.completeness == Approx(1).margin(0.06));
    CHECK((additive.low < additive.completeness && additive.completeness < additive.high));
    CHECK(additive.high - additive.low < 0.3);
    CHECK(planning.high < 0.8);
    CHECK((planning.low < planning.completeness && planning.completeness < planning.high));
    CHECK(planning.reason.empty());
    CHECK(measured.report.note.empty());
    const auto loss = [&](std::size_t c) { return measured.trial.contestants[c].loss; };
    CHECK(planning.completeness ==
          Approx((loss(3) - loss(2)) / (loss(3) - measured.report.loss_flexible)).epsilon(1e-12));
    // The interval is about as wide as linearising the ratio says: standard error of (m - t) - c (m - f), over mean(m -
    // f).
    const VectorXd possible = measured.trial.contestants[3].row_loss - measured.report.flexible_row_loss;
    const VectorXd apart = measured.trial.contestants[3].row_loss - measured.trial.contestants[2].row_loss -
                           planning.completeness * possible;
    CHECK((planning.high - planning.low) / (2 * 1.96 * standard_error(apart, {}, 0) / possible.mean()) ==
          Approx(1).margin(0.12));
    // Above 1 is said so.
    const TheoryCompleteness& best = additive.completeness > 1 ? additive : measured.report.theories[1];
    CHECK((best.reason == "above 1: it predicts better than the flexible benchmark does with this many rows") ==
          (best.completeness > 1));
}

TEST_CASE("noise has no completeness, and the reason says why", "[verdict]") {
    const Measured measured = measure(study_text("folds: 5, repeats: 2"), linear_answers(120, 0));
    const CompletenessReport& report = measured.report;
    REQUIRE(report.loss_flexible >= report.loss_mean);
    for (const TheoryCompleteness& theory : report.theories) {
        CHECK((std::isnan(theory.completeness) && std::isnan(theory.low) && std::isnan(theory.high)));
        CHECK(theory.reason == fmt::format("the flexible benchmark predicts no better than the mean (loss {:.4g} "
                                           "against {:.4g}), so there is no gain of "
                                           "which a theory could reach a share",
                                           report.loss_flexible, report.loss_mean));
        CHECK(theory.restrictiveness > 0);
    }
}

TEST_CASE("a gain that may be nothing gives no completeness, with its interval in the reason", "[verdict]") {
    const Measured measured = measure(study_text("folds: 5, repeats: 1"), linear_answers(40, 0.5));
    const CompletenessReport& report = measured.report;
    REQUIRE(report.loss_flexible < report.loss_mean);
    CHECK(std::isnan(report.theories[0].completeness));
    const std::string& reason = report.theories[0].reason;
    CHECK(reason.rfind(
              fmt::format(
                  "the flexible benchmark's gain over the mean may be nothing (loss lower by {:.3g}, 95% interval -",
                  report.loss_mean - report.loss_flexible),
              0) == 0);
    CHECK(reason.substr(reason.rfind(')')) == "), so no share of it can be given");
}

TEST_CASE("a theory that fails is kept with its reason", "[verdict]") {
    const std::string theories = R"(theories:
  - {name: additive, equations: {delivery: [planning, skill]}}
  - {name: rooted, equations: {delivery: [{geometric_mean: [planning, skill]}]}}
)";
    Answers answers = linear_answers(80, 1.5);
    answers.values.leftCols(3).array() -= 4;  // no root of a negative score
    const Measured measured = measure("metric: response\n" + study_text("folds: 5, repeats: 1", "", theories), answers);
    REQUIRE(measured.trial.contestants[1].failed);
    const TheoryCompleteness& failed = measured.report.theories[1];
    CHECK((std::isnan(failed.completeness) && std::isnan(failed.restrictiveness) &&
           std::isnan(failed.restrictiveness_se)));
    CHECK(failed.reason == "it could not be fitted: " + measured.trial.contestants[1].reason);
    CHECK(measured.report.theories[0].completeness > 0.3);
}

TEST_CASE("above the limit a seeded subsample of rows stands for all", "[verdict]") {
    const Answers answers = linear_answers(240, 1.5);
    const std::string study = study_text("folds: 5, repeats: 1");
    CompletenessLimits small;
    small.rows = 100;
    const Measured measured = measure(study, answers, small);
    const CompletenessReport& report = measured.report;
    CHECK(report.subsample);
    CHECK(report.rows == 100);
    CHECK(report.note == "Completeness was measured on 100 of the 240 rows, drawn from the seed.");
    REQUIRE(std::set<std::size_t>(report.row_index.begin(), report.row_index.end()).size() == 100);
    CHECK(std::is_sorted(report.row_index.begin(), report.row_index.end()));
    CHECK((report.row_index.front() < 20 && report.row_index.back() > 220 && report.row_index.back() < 240));
    double mean = 0;
    for (const std::size_t row : report.row_index)
        mean += measured.trial.contestants[3].row_loss(static_cast<Index>(row)) / 100;
    CHECK(report.loss_mean == Approx(mean).epsilon(1e-12));
    CHECK_FALSE(measure(study, answers).report.subsample);
}

TEST_CASE("a subsample takes whole clusters while ten or more fit, and rows otherwise", "[verdict]") {
    Answers answers = linear_answers(240, 1.5);
    answers.names.push_back("yard");
    answers.values.conservativeResize(Eigen::NoChange, 12);
    CompletenessLimits small;
    small.rows = 100;
    for (const Index yards : {40, 12}) {
        for (Index i = 0; i < 240; ++i) answers.values(i, 11) = static_cast<double>(i % yards);
        const Measured measured = measure(study_text("folds: 5, repeats: 1", ", cluster: yard"), answers, small);
        INFO(yards << " yards");
        if (yards == 40) {
            CHECK(measured.report.rows == 96);  // sixteen clusters of six
            CHECK(clusters_of(measured).size() == 16);
            CHECK(measured.report.note ==
                  "Completeness was measured on 96 of the 240 rows, in whole clusters drawn from the seed.");
        } else {
            CHECK(measured.report.rows == 100);
            CHECK(clusters_of(measured).size() == 12);
            CHECK(measured.report.note == "Completeness was measured on 100 of the 240 rows, drawn from the seed.");
        }
        CHECK(measured.report.theories[0].low < measured.report.theories[0].completeness);
    }
}

TEST_CASE("with clusters the interval is resampled by cluster", "[verdict]") {
    // Rows in eight identical copies, each set of copies one cluster: resampling rows would see eight times the
    // evidence.
    const Answers few = linear_answers(40, 1.5);
    Answers answers;
    answers.names = few.names;
    answers.names.push_back("yard");
    answers.values.resize(320, 12);
    for (Index i = 0; i < 320; ++i) answers.values.row(i) << few.values.row(i % 40), static_cast<double>(i % 40);
    const auto width = [&](const std::string& keys, std::uint64_t seed) {
        SmallContest contest =
            prepare(study_text(fmt::format("folds: 5, repeats: 1, seed: {}", seed), keys), answers.csv());
        for (std::size_t i = 0; i < 320; ++i)
            contest.plan.fold_of[i] = static_cast<std::uint32_t>(i % 5);  // clusters held out whole, both times
        const Measured measured = measure(std::move(contest));
        return measured.report.theories[2].high - measured.report.theories[2].low;
    };
    const double by_row = width("", 1), by_cluster = width(", cluster: yard", 1);
    CHECK(by_cluster / by_row > 2);
    CHECK(by_cluster / by_row < 4.2);  // the square root of 8 in large samples
}

TEST_CASE("very many folds are joined", "[verdict]") {
    const Answers answers = linear_answers(120, 1.5);
    const Measured measured = measure(study_text("folds: 60, repeats: 1"), answers);
    CHECK(measured.report.note == "For the flexible benchmark the 60 folds were joined to 20.");
    SmallContest joined = prepare(study_text("folds: 20, repeats: 1"), answers.csv());
    for (std::size_t i = 0; i < 120; ++i) joined.plan.fold_of[i] = measured.contest.plan.fold(0, i) % 20;
    CHECK(measure(std::move(joined)).report.flexible_row_loss == measured.report.flexible_row_loss);
}
