#include "calibration/simulation.hpp"

#include "rivalfold/folds/fold_plan.hpp"
#include "rivalfold/study/read_study.hpp"
#include "rivalfold/theory/sample.hpp"
#include "rivalfold/trial/losses.hpp"
#include "rivalfold/verdict/distributions.hpp"
#include "rivalfold/verdict/verdict.hpp"

#include <algorithm>
#include <atomic>
#include <cmath>
#include <ctime>
#include <exception>
#include <limits>
#include <mutex>
#include <stdexcept>
#include <thread>

namespace rivalfold::calibration {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

/// The stream of one sample: its cell, what it is for, and its number (below 2^20), so that no two share numbers.
RandomStream stream_of(const Cell& cell, std::uint64_t seed, Part part, std::uint32_t sample) {
    return {seed, Purpose::simulation, (cell.stream << 22U) | (static_cast<std::uint32_t>(part) << 20U) | sample};
}

Study study_of(const Cell& cell) { return read_study_text(study_text(cell), "simulated.yaml"); }

double p_of_splits(const Eigen::VectorXd& s) {
    const auto count = static_cast<double>(s.size());
    const double variance = (s.array() - s.mean()).square().sum() / (count - 1);
    return variance > 0 ? student_two_sided(s.mean() / std::sqrt(variance / count), count - 1) : kNaN;
}

PairJudgement judge_pair(const PairReport& report, const Trial& trial) {
    PairJudgement pair;
    const bool turned = report.a > report.b;  // the report has the better-ranked theory first
    pair.first = std::min(report.a, report.b);
    pair.second = std::max(report.a, report.b);
    pair.difference = turned ? -report.difference : report.difference;
    pair.se_rows = report.rows.se;
    pair.se_corrected = report.corrected.se;
    pair.p_rows = report.rows.p;
    pair.p_corrected = report.corrected.p;
    pair.p_both = report.p;
    pair.p_splits = p_of_splits(trial.contestants[report.a].split_loss - trial.contestants[report.b].split_loss);
    pair.low = turned ? -report.high : report.low;
    pair.high = turned ? -report.low : report.high;
    pair.called_different = report.outcome == PairOutcome::first_better || report.outcome == PairOutcome::second_better;
    pair.called_equal = report.outcome == PairOutcome::practically_equal;
    pair.p_clark_west = report.inner ? report.extra_terms.p : kNaN;
    return pair;
}

Judgement judge(const Study& study, const Survey& survey, const Sample& sample, const Trial& trial) {
    Judgement out;
    for (std::size_t t = 0; t < study.theories.size(); ++t)
        out.failed = out.failed || trial.contestants[t].failed || trial.whole[t].failed;
    if (out.failed) return out;
    const Verdict verdict = reach_verdict(study, survey, sample, trial);
    out.winner = verdict.winner;
    for (const std::size_t c : verdict.order)
        if (trial.contestants[c].is_theory) out.ranked.push_back(c);
    for (const PairReport& report : verdict.pairs)
        if (report.theories) out.pairs.push_back(judge_pair(report, trial));
    std::sort(out.pairs.begin(), out.pairs.end(), [](const PairJudgement& a, const PairJudgement& b) {
        return std::pair(a.first, a.second) < std::pair(b.first, b.second);
    });
    for (const TheoryReport& theory : verdict.theories) {
        out.p_set_range.push_back(theory.p_set_range);
        out.p_set_max.push_back(theory.p_set_max);
    }
    return out;
}

/// Every block of `block` rows in turn is the training set (fold 1 when fold 0, all the rest, is held out).
FoldPlan blocks_as_training(std::size_t rows, std::size_t block) {
    FoldPlan plan;
    plan.n_rows = rows;
    plan.folds = 2;
    plan.repeats = static_cast<int>(rows / block);
    plan.fold_of.assign(rows * (rows / block), 0);
    for (std::size_t r = 0; r < rows / block; ++r)
        for (std::size_t i = r * block; i < (r + 1) * block; ++i) plan.fold_of[r * rows + i] = 1;
    return plan;
}

/// Mean loss on the held-out rest over the training sets of one large sample, per theory.
std::vector<double> losses_of_large_sample(const Cell& cell, const Study& study, RandomStream& stream) {
    const std::size_t block = static_cast<std::size_t>(cell.rows) * 9 / 10;
    const std::size_t rows = std::max<std::size_t>(1000 / block + 1, 6) * block;
    const Survey survey = build_survey(study, simulate(cell, study, rows, stream));
    const Sample sample = build_sample(survey);
    FoldPlan plan = blocks_as_training(rows, block);
    const Trial trial = run_trial(study, survey, sample, plan, 1);
    std::vector<double> losses(study.theories.size(), 0);
    int fitted = 0;
    for (Eigen::Index split = 0; split < 2 * plan.repeats; split += 2) {
        // Weights that do not settle, in a few of a thousand small training sets, leave the split without a loss: that
        // set is left out.
        bool all = true;
        for (std::size_t t = 0; t < losses.size(); ++t) all = all && trial.contestants[t].split_loss(split) > 0;
        if (!all) continue;
        ++fitted;
        for (std::size_t t = 0; t < losses.size(); ++t) losses[t] += trial.contestants[t].split_loss(split);
    }
    if (fitted == 0) throw std::runtime_error(cell.name() + ": no training set could be fitted");
    for (double& loss : losses) loss /= fitted;
    return losses;
}

/// Calls task(number) for every number below `count`, in several threads.
template <class Task>
void share_out(std::size_t count, unsigned threads, const Task& task) {
    std::atomic<std::size_t> next{0};
    std::exception_ptr error;
    std::mutex mutex;
    const auto work = [&] {
        for (std::size_t number = next++; number < count; number = next++) {
            try {
                task(number);
            } catch (...) {
                const std::lock_guard lock(mutex);
                error = std::current_exception();
            }
        }
    };
    std::vector<std::jthread> helpers;
    for (unsigned t = 1; t < threads; ++t) helpers.emplace_back(work);
    work();
    helpers.clear();
    if (error) std::rethrow_exception(error);
}

ExpectedLosses simulate_losses(const Cell& cell, std::uint64_t seed, Part part, std::size_t training_sets,
                               unsigned threads) {
    const Study study = study_of(cell);
    const std::size_t block = static_cast<std::size_t>(cell.rows) * 9 / 10;
    const std::size_t large_samples =
        std::max<std::size_t>(2, training_sets / std::max<std::size_t>(1000 / block + 1, 6));
    std::vector<std::vector<double>> losses(large_samples);
    share_out(large_samples, threads, [&](std::size_t number) {
        RandomStream stream = stream_of(cell, seed, part, static_cast<std::uint32_t>(number));
        losses[number] = losses_of_large_sample(cell, study, stream);
    });
    const auto mean_of = [&](const auto& value) {
        double sum = 0;
        for (const std::vector<double>& one : losses) sum += value(one);
        return sum / static_cast<double>(large_samples);
    };
    ExpectedLosses out;
    for (std::size_t t = 0; t < study.theories.size(); ++t)
        out.loss.push_back(mean_of([t](const std::vector<double>& one) { return one[t]; }));
    for (std::size_t a = 0; a < study.theories.size(); ++a)
        for (std::size_t b = a + 1; b < study.theories.size(); ++b) {
            const double mean = out.loss[a] - out.loss[b];
            const double variance = mean_of(
                [&](const std::vector<double>& one) { return (one[a] - one[b] - mean) * (one[a] - one[b] - mean); });
            out.difference.push_back(mean);
            out.difference_se.push_back(std::sqrt(variance / static_cast<double>(large_samples - 1)));
        }
    return out;
}

/// (L2 - L1) - wanted x min(L1, L2) at a square of the tuned number, always with the same random numbers.
struct Excess {
    const Cell& cell;
    std::uint64_t seed;
    std::size_t training_sets;
    unsigned threads;
    double tolerance = 0;  ///< a twentieth of its Monte Carlo error

    double at(double square) {
        Cell tuned = cell;
        tuned.design = with_tuned(cell.design, std::sqrt(square));
        const ExpectedLosses losses = simulate_losses(tuned, seed, Part::tuning, training_sets, threads);
        tolerance = 0.05 * losses.difference_se[0];
        return -losses.difference[0] - cell.design.wanted * std::min(losses.loss[0], losses.loss[1]);
    }
};

/// A root and the slope there.
struct Root {
    double square = 0, slope = 0;
};

Root find_coarse(const Cell& cell, Excess excess) {
    double low = 0, high = cell.design.tuned == Tuned::extra_effects ? 0.06 : 0.16;
    if (cell.design.tuned == Tuned::correlation) low = 0.64, high = 0.998;
    double at_low = excess.at(low), at_high = excess.at(high);
    if (!(at_low > 0 && at_high < 0)) throw std::runtime_error(cell.name() + ": the tuned number lies outside its range");
    Root root{low, (at_high - at_low) / (high - low)};
    double before = low, value_before = at_low;
    int side = 0;
    for (int step = 0; step < 25; ++step) {
        root.square = (low * at_high - high * at_low) / (at_high - at_low);
        const double value = excess.at(root.square);
        root.slope = (value - value_before) / (root.square - before);
        before = root.square;
        value_before = value;
        if (std::fabs(value) <= excess.tolerance) break;
        const int now = value > 0 ? 1 : -1;
        (now > 0 ? low : high) = root.square;
        (now > 0 ? at_low : at_high) = value;
        if (now == side) (now > 0 ? at_high : at_low) /= 2;
        side = now;
    }
    return root;
}

double tune_in(const Cell& cell, std::uint64_t seed, std::size_t training_sets, unsigned threads) {
    Root root = find_coarse(cell, {cell, seed, training_sets / 6, threads});
    Excess fine{cell, seed, training_sets, threads};
    double before = 0, value_before = 0;
    for (int step = 0; step < 8; ++step) {
        const double value = fine.at(root.square);
        if (std::fabs(value) <= fine.tolerance) break;
        if (step > 0 && root.square != before) root.slope = (value - value_before) / (root.square - before);
        before = root.square;
        value_before = value;
        root.square = std::max(0.0, root.square - value / root.slope);
    }
    return std::sqrt(root.square);
}

}  // namespace

std::optional<std::size_t> Judgement::leader(double PairJudgement::*p, double level) const {
    if (ranked.empty()) return std::nullopt;
    for (const PairJudgement& pair : pairs)
        if ((pair.first == ranked.front() || pair.second == ranked.front()) && !(pair.*p < level)) return std::nullopt;
    return ranked.front();
}

Judgement judge_sample(const Cell& cell, std::uint64_t seed, std::uint32_t sample_number) {
    RandomStream stream = stream_of(cell, seed, Part::samples, sample_number);
    Study study = study_of(cell);
    study.trial.seed = stream.next64();  // folds and bootstrap differ between samples too
    const Survey survey = build_survey(study, simulate(cell, study, static_cast<std::size_t>(cell.rows), stream));
    const Sample sample = build_sample(survey);
    FoldPlan plan = plan_folds(study, survey);
    const Trial trial = run_trial(study, survey, sample, plan, 1);
    return judge(study, survey, sample, trial);
}

ExpectedLosses expected_losses(const Cell& cell, std::uint64_t seed, Part part, std::size_t training_sets) {
    return simulate_losses(cell, seed, part, training_sets, 1);
}

double tune(const Cell& cell, std::uint64_t seed, std::size_t training_sets) {
    return tune_in(cell, seed, training_sets, 1);
}

CellResult run_cell(const Cell& cell, std::uint64_t seed, std::uint32_t samples, unsigned threads,
                    std::size_t training_sets) {
    CellResult result;
    result.cell = cell;
    if (cell.design.tuned != Tuned::nothing) {
        result.tuned = tune_in(cell, seed, training_sets, threads);
        result.cell.design = with_tuned(cell.design, *result.tuned);
    }
    result.best = cell.design.best;
    const std::size_t n_theories = cell.design.theories.size();
    if (cell.design.symmetric) {
        const auto tied = [&](std::size_t theory) { return std::find(result.best.begin(), result.best.end(), theory) != result.best.end(); };
        for (std::size_t a = 0; a < n_theories; ++a)
            for (std::size_t b = a + 1; b < n_theories; ++b) result.truth.difference.push_back(tied(a) && tied(b) ? 0 : kNaN);
        result.truth.difference_se.assign(result.truth.difference.size(), 0);
    } else {
        result.truth = simulate_losses(result.cell, seed, Part::truth, training_sets, threads);
    }
    if (result.best.empty()) {
        const auto least = std::min_element(result.truth.loss.begin(), result.truth.loss.end());
        result.best = {static_cast<std::size_t>(least - result.truth.loss.begin())};
    }
    const std::clock_t begun = std::clock();
    result.judgements.resize(samples);
    share_out(samples, threads, [&](std::size_t number) {
        result.judgements[number] = judge_sample(result.cell, seed, static_cast<std::uint32_t>(number));
    });
    result.seconds_per_sample = static_cast<double>(std::clock() - begun) / CLOCKS_PER_SEC / samples;
    return result;
}

}  // namespace rivalfold::calibration
