#include "rivalfold/verdict/completeness.hpp"

#include "rivalfold/folds/random.hpp"
#include "trial/worker_pool.hpp"
#include "verdict/flexible_benchmark.hpp"
#include "verdict/restrictiveness.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <chrono>
#include <cmath>
#include <limits>
#include <numeric>

namespace rivalfold {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr double kInfinity = std::numeric_limits<double>::infinity();
constexpr std::uint32_t kRowStream = 0x43ffffffU;
constexpr std::uint32_t kResampleStream = 0x43000000U;  // + resample
constexpr int kResamples = 2000;
constexpr std::size_t kFewClusters = 10;

struct Interval {
    double low = kNaN, high = kNaN;
};

void say(CompletenessReport& report, const std::string& sentence) {
    report.note += (report.note.empty() ? "" : " ") + sentence;
}

std::vector<std::size_t> first_numbers(std::vector<std::uint32_t> order, std::size_t count) {
    std::sort(order.begin(), order.begin() + static_cast<std::ptrdiff_t>(count));
    return {order.begin(), order.begin() + static_cast<std::ptrdiff_t>(count)};
}

/// Whole clusters in random order, as long as they fit; empty if fewer than kFewClusters do.
std::vector<std::size_t> whole_clusters(const Survey& survey, std::size_t most, RandomStream& stream) {
    std::vector<std::size_t> size(survey.cluster_names.size(), 0);
    for (const int cluster : survey.clusters) ++size[static_cast<std::size_t>(cluster)];
    std::vector<char> in(size.size(), 0);
    std::size_t rows = 0, clusters = 0;
    for (const std::uint32_t cluster : shuffled(size.size(), stream)) {
        if (rows + size[cluster] > most) break;
        rows += size[cluster];
        in[cluster] = 1;
        ++clusters;
    }
    std::vector<std::size_t> out;
    if (clusters < kFewClusters) return out;
    for (std::size_t i = 0; i < survey.clusters.size(); ++i)
        if (in[static_cast<std::size_t>(survey.clusters[i])] != 0) out.push_back(i);
    return out;
}

void choose_rows(const Study& study, const Survey& survey, std::size_t n, std::size_t most,
                 CompletenessReport& report) {
    if (n <= most) {
        report.row_index.resize(n);
        std::iota(report.row_index.begin(), report.row_index.end(), std::size_t{0});
    } else {
        RandomStream stream(study.trial.seed, Purpose::simulation, kRowStream);
        if (!survey.clusters.empty()) report.row_index = whole_clusters(survey, most, stream);
        const bool whole = !report.row_index.empty();
        if (!whole) report.row_index = first_numbers(shuffled(n, stream), most);
        say(report, fmt::format("Completeness was measured on {} of the {} rows, {} from the seed.",
                                report.row_index.size(), n, whole ? "in whole clusters drawn" : "drawn"));
        report.subsample = true;
    }
    report.rows = report.row_index.size();
}

FlexibleTask task_of(const Study& study, const FoldPlan& plan, const Trial& trial, const CompletenessLimits& limits,
                     CompletenessReport& report) {
    FlexibleTask task;
    task.predictors = trial.benchmark_predictors;
    task.targets = trial.theories.front()->blueprint().target_columns();
    task.folds = static_cast<std::uint32_t>(plan.folds);
    if (plan.folds > limits.folds && report.rows > limits.folds_rows) {
        task.folds = static_cast<std::uint32_t>(limits.folds);
        say(report,
            fmt::format("For the flexible benchmark the {} folds were joined to {}.", plan.folds, limits.folds));
    }
    for (const std::size_t row : report.row_index) {
        task.rows.push_back(static_cast<Eigen::Index>(row));
        task.fold_of.push_back(plan.fold(0, row) % task.folds);
    }
    task.most_choice_rows = limits.choice_rows;
    task.seed = study.trial.seed;
    return task;
}

/// Rows outside the fullest fold.
std::size_t smallest_training(const FlexibleTask& task) {
    std::vector<std::size_t> in(task.folds, 0);
    for (const std::uint32_t fold : task.fold_of) ++in[fold];
    return task.rows.size() - *std::max_element(in.begin(), in.end());
}

void take_errors(const FlexibleErrors& errors, const Eigen::VectorXd& unit, Loss loss, CompletenessReport& report) {
    const Eigen::MatrixXd scaled = errors.errors * unit.cwiseInverse().asDiagonal();
    const Eigen::MatrixXd mean_scaled = errors.mean_errors * unit.cwiseInverse().asDiagonal();
    if (loss == Loss::absolute)
        report.flexible_row_loss = scaled.cwiseAbs().rowwise().mean();
    else
        report.flexible_row_loss = scaled.cwiseAbs2().rowwise().mean();
    report.loss_flexible = report.flexible_row_loss.mean();
    report.q2_flexible = 1 - scaled.squaredNorm() / mean_scaled.squaredNorm();
}

/// Losses over the rows of the report, summed by what is resampled (row or cluster): theories, mean, flexible.
Eigen::MatrixXd losses_by_unit(const Survey& survey, const Trial& trial, const CompletenessReport& report) {
    const std::size_t members = trial.theories.size() + 1;  // the training mean stands behind the theories
    const auto n = static_cast<Eigen::Index>(report.rows);
    std::vector<Eigen::Index> slot(report.rows);
    std::iota(slot.begin(), slot.end(), Eigen::Index{0});
    Eigen::Index slots = n;
    if (!survey.clusters.empty()) {
        std::vector<Eigen::Index> number(survey.cluster_names.size(), -1);
        slots = 0;
        for (std::size_t r = 0; r < report.rows; ++r) {
            Eigen::Index& known = number[static_cast<std::size_t>(survey.clusters[report.row_index[r]])];
            if (known < 0) known = slots++;
            slot[r] = known;
        }
    }
    Eigen::MatrixXd out = Eigen::MatrixXd::Zero(static_cast<Eigen::Index>(members) + 1, slots);
    for (Eigen::Index r = 0; r < n; ++r) {
        const Eigen::Index to = slot[static_cast<std::size_t>(r)];
        const auto row = static_cast<Eigen::Index>(report.row_index[static_cast<std::size_t>(r)]);
        for (std::size_t c = 0; c < members; ++c)
            out(static_cast<Eigen::Index>(c), to) += trial.contestants[c].row_loss(row);
        out(static_cast<Eigen::Index>(members), to) += report.flexible_row_loss(r);
    }
    return out;
}

/// Sums of the losses over each resample: (theories, mean, flexible) x resamples.
Eigen::MatrixXd resample(const Eigen::MatrixXd& losses, std::uint64_t seed, WorkerPool& pool) {
    Eigen::MatrixXd out = Eigen::MatrixXd::Zero(losses.rows(), kResamples);
    constexpr std::size_t kTogether = 50;
    pool.run(kResamples / kTogether, [&](std::size_t task, unsigned) {
        for (std::size_t b = task * kTogether; b < (task + 1) * kTogether; ++b) {
            RandomStream stream(seed, Purpose::bootstrap, kResampleStream + static_cast<std::uint32_t>(b));
            for (Eigen::Index k = 0; k < losses.cols(); ++k)
                out.col(static_cast<Eigen::Index>(b)) +=
                    losses.col(static_cast<Eigen::Index>(stream.below(static_cast<std::uint64_t>(losses.cols()))));
        }
    });
    return out;
}

Interval percentiles(Eigen::VectorXd values, double level) {
    std::sort(values.begin(), values.end());
    const auto beyond = std::max<Eigen::Index>(1, static_cast<Eigen::Index>(level / 2 * (kResamples + 1)));
    return {values(beyond - 1), values(kResamples - beyond)};
}

/// Why no share of loss(mean) - loss(flexible) can be given; empty if one can. `gain` is that difference, its interval
/// as a mean per row.
std::string no_share(double gain, const Interval& interval, const CompletenessReport& report, double level) {
    if (!(gain > 0))
        return fmt::format(
            "the flexible benchmark predicts no better than the mean (loss {:.4g} against {:.4g}), so there is no gain "
            "of which a "
            "theory could reach a share",
            report.loss_flexible, report.loss_mean);
    if (!(interval.low > 0))
        return fmt::format(
            "the flexible benchmark's gain over the mean may be nothing (loss lower by {:.3g}, {:g}% interval {:.3g} "
            "to {:.3g}), so no "
            "share of it can be given",
            gain, 100 * (1 - level), interval.low, interval.high);
    return {};
}

void fill_theory(const Eigen::MatrixXd& losses, const Eigen::MatrixXd& resampled, double level,
                 TheoryCompleteness& out) {
    const Eigen::Index flexible = losses.rows() - 1, mean = flexible - 1,
                       theory = static_cast<Eigen::Index>(out.contestant);
    const Eigen::VectorXd sums = losses.rowwise().sum();
    out.completeness = (sums(mean) - sums(theory)) / (sums(mean) - sums(flexible));
    Eigen::VectorXd ratio(kResamples);
    for (Eigen::Index b = 0; b < kResamples; ++b) {
        const double reached = resampled(mean, b) - resampled(theory, b),
                     possible = resampled(mean, b) - resampled(flexible, b);
        // The few resamples without anything to predict stand outside every bound.
        ratio(b) = possible > 0 ? reached / possible : (reached > 0 ? kInfinity : -kInfinity);
    }
    const Interval interval = percentiles(std::move(ratio), level);
    out.low = interval.low;
    out.high = interval.high;
    if (out.completeness > 1)
        out.reason = "above 1: it predicts better than the flexible benchmark does with this many rows";
    if (out.completeness < 0) out.reason = "below 0: it predicts worse than the mean";
}

void fill_completeness(const Study& study, const Survey& survey, const Trial& trial, WorkerPool& pool,
                       CompletenessReport& report) {
    const Eigen::MatrixXd losses = losses_by_unit(survey, trial, report);
    const Eigen::MatrixXd resampled = resample(losses, study.trial.seed, pool);
    const double level = study.verdict.level;
    const auto n = static_cast<double>(report.rows);
    const Eigen::Index flexible = losses.rows() - 1, mean = flexible - 1;
    report.loss_mean = losses.row(mean).sum() / n;
    const Interval gain = percentiles((resampled.row(mean) - resampled.row(flexible)).transpose() / n, level);
    const std::string impossible = no_share(report.loss_mean - report.loss_flexible, gain, report, level);
    for (TheoryCompleteness& theory : report.theories) {
        theory.completeness = theory.low = theory.high = kNaN;
        if (trial.contestants[theory.contestant].failed)
            theory.reason = fmt::format("it could not be fitted: {}", trial.contestants[theory.contestant].reason);
        else if (!impossible.empty())
            theory.reason = impossible;
        else
            fill_theory(losses, resampled, level, theory);
    }
}

}  // namespace

CompletenessReport measure_completeness(const Study& study, const Survey& survey, const Sample& sample,
                                        const FoldPlan& plan, const Trial& trial, unsigned threads,
                                        const CompletenessLimits& limits) {
    const auto begun = std::chrono::steady_clock::now();
    CompletenessReport report;
    choose_rows(study, survey, static_cast<std::size_t>(sample.n), limits.rows, report);
    const FlexibleTask task = task_of(study, plan, trial, limits, report);
    if (smallest_training(task) < 2) {
        report.note = "Completeness was not measured: some fold leaves fewer than two rows to learn from.";
        return report;
    }
    WorkerPool pool(std::max(1U, threads));
    const FlexibleErrors errors = predict_flexibly(sample, task, pool);
    if (errors.chosen_on_fewer)
        say(report, fmt::format("The flexible benchmark's length-scale and penalty were chosen on {} of each fold's "
                                "training rows, then fitted to all of them.",
                                limits.choice_rows));
    take_errors(errors, trial.unit, study.trial.loss, report);
    const RestrictivenessReport restricted = measure_restrictiveness(study, sample, trial, limits.draw_rows);
    if (restricted.rows < static_cast<std::size_t>(sample.n))
        say(report, fmt::format("Restrictiveness was measured on {} of the {} rows, drawn from the seed.",
                                restricted.rows, sample.n));
    report.antecedents = restricted.antecedents;
    for (std::size_t t = 0; t < trial.theories.size(); ++t) {
        report.theories.push_back(
            {t, kNaN, kNaN, kNaN, restricted.theories[t].value, restricted.theories[t].standard_error, {}});
    }
    fill_completeness(study, survey, trial, pool, report);
    report.computed = true;
    report.seconds = std::chrono::duration<double>(std::chrono::steady_clock::now() - begun).count();
    return report;
}

}  // namespace rivalfold
