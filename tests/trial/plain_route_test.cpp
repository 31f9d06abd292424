#include "contests.hpp"

#include <Eigen/QR>

using namespace rivalfold;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

/// Rows of a sample as one block of their own.
struct OwnRows {
    MatrixXd values, gaps;
    OwnRows(const Sample& sample, const std::vector<Index>& rows)
        : values(sample.values(rows, Eigen::indexing::all)), gaps(sample.gaps(rows, Eigen::indexing::all)) {}
    RowBlock block() const {
        return {values.data(), gaps.size() > 0 ? gaps.data() : nullptr, values.rows(), values.rows()};
    }
};

/// Fits a contestant to rows in one piece: moments in two passes, designs by one matrix product.
Fit plain_fit(const Sample& sample, const Contestant& contestant, const std::vector<Index>& in) {
    Moments moments;
    moments_of_rows(sample, in, moments);
    Fit fit;
    const auto scratch = contestant.make_scratch();
    contestant.fit_moments(moments, *scratch, fit);
    REQUIRE(fit.status == FitStatus::fitted);
    const OwnRows rows(sample, in);
    for (int d = 0; d < contestant.n_designs(); ++d) {
        RowScratch room;
        MatrixXd design = MatrixXd::Ones(rows.values.rows(), contestant.design_columns(d) + 1);
        contestant.form_design(d, fit, rows.block(), room, design.data(), design.rows());
        contestant.fit_design(d, design.transpose() * design, fit);
    }
    contestant.finish(*scratch, fit);
    return fit;
}

/// Row losses of every contestant, split by split, with none of the engine's passes over the rows.
std::vector<VectorXd> plain_losses(const SmallContest& contest, const Trial& trial) {
    const Sample& sample = *contest.sample;
    const std::vector<Blueprint> blueprints = build_blueprints(contest.study, contest.survey, sample);
    const std::vector<int> target = blueprints.front().target_columns();
    std::vector<std::unique_ptr<Contestant>> contestants;
    for (const Blueprint& blueprint : blueprints)
        contestants.push_back(std::make_unique<TheoryContestant>(sample, blueprint, false));
    contestants.push_back(std::make_unique<TrainingMean>(target));
    contestants.push_back(
        std::make_unique<LinearBenchmark>(sample, target, benchmark_columns(blueprints, contest.survey)));
    std::vector<VectorXd> losses(contestants.size(), VectorXd::Zero(sample.n));
    for (int r = 0; r < contest.plan.repeats; ++r)
        for (std::uint32_t k = 0; k < static_cast<std::uint32_t>(contest.plan.folds); ++k) {
            std::vector<Index> in, out;
            for (Index i = 0; i < sample.n; ++i)
                (contest.plan.fold(r, static_cast<std::size_t>(i)) == k ? out : in).push_back(i);
            const OwnRows held_out(sample, out);
            for (std::size_t c = 0; c < contestants.size(); ++c) {
                const Fit fit = plain_fit(sample, *contestants[c], in);
                RowScratch room;
                MatrixXd predicted(held_out.values.rows(), static_cast<Index>(target.size()));
                contestants[c]->predict(fit, held_out.block(), room, predicted.data(), predicted.rows());
                for (std::size_t i = 0; i < out.size(); ++i)
                    for (std::size_t j = 0; j < target.size(); ++j) {
                        const double error =
                            sample.values(out[i], target[j]) - predicted(static_cast<Index>(i), static_cast<Index>(j));
                        const double scaled = error / trial.unit(static_cast<Index>(j));
                        losses[c](out[i]) +=
                            (contest.study.trial.loss == Loss::absolute ? std::fabs(scaled) : scaled * scaled) /
                            static_cast<double>(target.size()) / contest.plan.repeats;
                    }
            }
        }
    return losses;
}

/// The largest relative disagreement of a trial's row and split losses with the plain ones.
double disagreement_with_plain(const SmallContest& contest, const Trial& trial) {
    const std::vector<VectorXd> plain = plain_losses(contest, trial);
    double worst = 0;
    for (std::size_t c = 0; c < plain.size(); ++c) {
        const ContestantLosses& losses = trial.contestants[c];
        REQUIRE_FALSE(losses.failed);
        worst =
            std::max(worst, ((losses.row_loss - plain[c]).array().abs() / plain[c].array().abs().max(1e-3)).maxCoeff());
        worst = std::max(worst, std::fabs(losses.loss - plain[c].mean()) / plain[c].mean());
        if (contest.plan.repeats > 1) continue;
        for (int k = 0; k < contest.plan.folds; ++k) {
            double sum = 0, rows = 0;
            for (Index i = 0; i < plain[c].size(); ++i)
                if (contest.plan.fold(0, static_cast<std::size_t>(i)) == static_cast<std::uint32_t>(k))
                    sum += plain[c](i), ++rows;
            worst = std::max(worst, std::fabs(losses.split_loss(k) - sum / rows) / (sum / rows));
        }
    }
    return worst;
}

Answers with_gaps(Answers answers) {
    RandomStream stream(1, Purpose::simulation, 5);
    for (const char* name : {"pln2", "skl1"})
        for (Index i = 0; i < answers.values.rows(); ++i)
            if (stream.unit() < 0.05) answers.values(i, answers.at(name)) = std::numeric_limits<double>::quiet_NaN();
    return answers;
}

}  // namespace

// 40,000 rows are two segments of 32,768 rows and forty blocks of 1,024; the last block is not full.
TEST_CASE("several segments of rows give the losses of a plain single block, for any number of threads", "[trial]") {
    const SmallContest contest = prepare(study_text("folds: 3, repeats: 1, mediators: predicted", ", rows: mean"),
                                         with_gaps(invented_answers(40001)).csv());
    const Trial trial = run(contest, 2);
    CHECK(disagreement_with_plain(contest, trial) < 1e-10);
    check_same_bits(trial, run(contest, 1));
    check_same_bits(trial, run(contest, 5));
}

TEST_CASE("more than 256 folds, taken in several waves, give the losses of a plain single block", "[trial]") {
    const SmallContest contest = prepare(study_text("folds: 300, mediators: predicted, loss: absolute", ", rows: mean"),
                                         with_gaps(invented_answers(300)).csv());
    REQUIRE(contest.plan.repeats == 1);
    const Trial trial = run(contest, 2);
    CHECK(disagreement_with_plain(contest, trial) < 1e-10);
}

TEST_CASE("many repeats, taken in several waves, give the mean loss of a plain single block", "[trial]") {
    const SmallContest contest =
        prepare(study_text("folds: 5, repeats: 230", ", rows: mean"), with_gaps(invented_answers(48)).csv());
    const Trial trial = run(contest, 2);
    CHECK(trial.repeats == 230);
    CHECK(trial.contestants[0].split_loss.size() == 1150);
    CHECK(disagreement_with_plain(contest, trial) < 1e-10);
    for (const ContestantLosses& losses : trial.contestants) CHECK((losses.split_loss.array() > 0).all());
}

TEST_CASE("raw scores far from zero lose no digits in products", "[trial]") {
    Answers answers = invented_answers(150);
    for (const char* name : {"pln1", "pln2", "pln3"}) answers.column(name).array() += 1000;
    const SmallContest contest =
        prepare(study_text("folds: 5, repeats: 2", "", kConstructs + "metric: response\n", R"(theories:
  - {name: amplifying, equations: {delivery: [{crossed: [planning, supply]}]}}
  - {name: bent, equations: {delivery: [planning, {square: planning}]}}
)"),
                answers.csv());
    const Trial trial = run(contest);
    // On scales with another zero the products of crossed terms are other columns of the same space: the same
    // predictions.
    for (const char* name : {"pln1", "pln2", "pln3"}) answers.column(name).array() -= 1000;
    const SmallContest near = prepare(contest.study.source, answers.csv());
    CHECK(disagreement(trial, run(near)) < 1e-7);
}

// Single indicators need no weights: everything is ordinary least squares on raw rows, here by an orthogonal
// decomposition.
TEST_CASE("losses of single-indicator theories are those of least squares on the raw rows", "[trial]") {
    const Answers answers = invented_answers(60);
    const SmallContest contest = prepare(study_text("folds: 6, repeats: 3", "", R"(constructs:
  planning: {indicators: [pln1]}
  skill: {indicators: [skl1]}
  delivery: {indicators: [dlv1]}
target: delivery
metric: response
)",
                                                    R"(theories:
  - {name: additive, equations: {delivery: [planning, skill]}}
  - {name: amplifying, equations: {delivery: [{crossed: [planning, skill]}]}}
  - {name: scarcest, equations: {delivery: [{minimum: [planning, skill]}]}}
)"),
                                         answers.csv());
    const Trial trial = run(contest);
    const VectorXd p = answers.values.col(0), s = answers.values.col(3), y = answers.values.col(8),
                   one = VectorXd::Ones(60);
    const double unit = std::sqrt((y.array() - y.mean()).square().sum() / 59);
    CHECK(trial.unit(0) == Approx(unit).epsilon(1e-14));
    std::vector<MatrixXd> designs(5);
    designs[0] = (MatrixXd(60, 3) << one, p, s).finished();
    designs[1] = (MatrixXd(60, 4) << one, p, s, p.cwiseProduct(s)).finished();
    designs[2] = (MatrixXd(60, 2) << one, p.cwiseMin(s)).finished();
    designs[3] = one;
    designs[4] = designs[0];
    MatrixXd errors = MatrixXd::Zero(60, 3 * 5),
             mean_errors = MatrixXd::Zero(60, 5);  // repeat by repeat, contestant by contestant
    std::vector<VectorXd> squared(5, VectorXd::Zero(60)), absolute = squared, shares = squared;
    for (std::size_t c = 0; c < 5; ++c)
        for (int r = 0; r < 3; ++r)
            for (std::uint32_t k = 0; k < 6; ++k) {
                std::vector<Index> in, out;
                for (Index i = 0; i < 60; ++i)
                    (contest.plan.fold(r, static_cast<std::size_t>(i)) == k ? out : in).push_back(i);
                const VectorXd b = designs[c](in, Eigen::indexing::all).householderQr().solve(y(in));
                for (const Index i : out) {
                    const double error = y(i) - designs[c].row(i).dot(b);
                    errors(i, 5 * r + static_cast<Index>(c)) = error;
                    mean_errors(i, static_cast<Index>(c)) += error / 3;
                    squared[c](i) += error * error / 3;
                    absolute[c](i) += std::fabs(error) / 3;
                    shares[c](i) += std::fabs(error / y(i)) / 3;
                }
            }
    for (std::size_t c = 0; c < 5; ++c) {
        const ContestantLosses& losses = trial.contestants[c];
        INFO(losses.name);
        CHECK((losses.row_loss - squared[c] / (unit * unit)).cwiseAbs().maxCoeff() < 1e-12);
        CHECK(losses.loss == Approx(squared[c].mean() / (unit * unit)).epsilon(1e-12));
        CHECK(losses.rmse == Approx(std::sqrt(squared[c].mean()) / unit).epsilon(1e-12));
        CHECK(losses.mae == Approx(absolute[c].mean() / unit).epsilon(1e-12));
        CHECK(losses.q2 == Approx(1 - squared[c].sum() / squared[3].sum()).epsilon(1e-12).margin(1e-14));
        CHECK(losses.indicators[0].rmse == Approx(std::sqrt(squared[c].mean())).epsilon(1e-12));
        CHECK(losses.indicators[0].mae == Approx(absolute[c].mean()).epsilon(1e-12));
        CHECK(losses.indicators[0].mape == Approx(100 * shares[c].mean()).epsilon(1e-12));
        CHECK(losses.indicators[0].q2 == Approx(losses.q2).epsilon(1e-12).margin(1e-14));
    }
    REQUIRE(trial.errors.members == std::vector<std::size_t>{0, 1, 2});
    CHECK((trial.errors.mean_error - mean_errors.leftCols(3)).cwiseAbs().maxCoeff() < 1e-12);
    CHECK(trial.errors.squares.size() == 0);  // the row losses themselves
    SmallContest absolute_contest = prepare(contest.study.source, answers.csv());
    absolute_contest.study.trial.loss = Loss::absolute;
    const Trial absolute_trial = run(absolute_contest);
    for (std::size_t a = 0; a < 3; ++a) {
        CHECK((absolute_trial.contestants[a].row_loss - absolute[a] / unit).cwiseAbs().maxCoeff() < 1e-12);
        CHECK((absolute_trial.errors.squares.col(static_cast<Index>(a)) - squared[a] / (unit * unit))
                  .cwiseAbs()
                  .maxCoeff() < 1e-12);
        for (std::size_t b = 0; b < a; ++b) {
            VectorXd product = VectorXd::Zero(60);
            for (Index r = 0; r < 3; ++r)
                product +=
                    errors.col(5 * r + static_cast<Index>(a)).cwiseProduct(errors.col(5 * r + static_cast<Index>(b))) /
                    (3 * unit * unit);
            CHECK((trial.errors.products.col(ErrorProducts::column(a, b)) - product).cwiseAbs().maxCoeff() < 1e-12);
            CHECK(ErrorProducts::column(a, b) == ErrorProducts::column(b, a));
        }
    }
    CHECK(trial.contestants[3].name == "training mean");
    CHECK(trial.contestants[4].name == "linear benchmark");
}

TEST_CASE("the share of error has no value where an actual answer is zero", "[trial]") {
    Answers answers = invented_answers(40);
    answers.values(3, answers.at("dlv2")) = 0;
    const Trial trial = run(prepare(study_text(), answers.csv()));
    CHECK_FALSE(std::isnan(trial.contestants[0].indicators[0].mape));
    CHECK(std::isnan(trial.contestants[0].indicators[1].mape));
    CHECK(std::isfinite(trial.contestants[0].indicators[1].mae));
}
