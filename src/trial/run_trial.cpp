#include "rivalfold/trial/losses.hpp"
#include "trial/split_engine.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <map>

namespace rivalfold {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

/// Everything that one run needs, in the order in which it is made.
class Contest {
public:
    Contest(const Study& study, const Survey& survey, const Sample& sample, unsigned threads)
        : study_(study), survey_(survey), sample_(sample), pool_(std::max(1U, threads)), engine_(sample, pool_), whole_(engine_.whole_gram()) {}

    void fit_all_rows() {
        const std::vector<Blueprint> blueprints = build_blueprints(study_, survey_, sample_);
        target_columns_ = blueprints.front().target_columns();
        trial_.benchmark_predictors = benchmark_columns(blueprints, survey_);
        trial_.unit.resize(static_cast<Eigen::Index>(target_columns_.size()));
        for (std::size_t j = 0; j < target_columns_.size(); ++j) {
            const auto column = sample_.values.col(target_columns_[j]);
            const double mean = column.mean();
            trial_.unit(static_cast<Eigen::Index>(j)) = std::sqrt((column.array() - mean).square().sum() / static_cast<double>(sample_.n - 1));
        }
        for (const Blueprint& blueprint : blueprints) {
            auto whole = std::make_shared<TheoryContestant>(sample_, blueprint, true);
            settle_shifts(*whole);
            const std::vector<const Contestant*> alone{whole.get()};
            WholeFit fitted{std::move(engine_.fit_whole(whole_, alone).fits.front()), false, {}};
            fitted.failed = fitted.fit.status != FitStatus::fitted;
            fitted.reason = fitted.fit.reason;
            auto folded = std::make_unique<TheoryContestant>(sample_, blueprint, false);
            if (!fitted.failed) folded->set_shifts(fitted.fit);
            trial_.theories.push_back(std::move(whole));
            trial_.whole.push_back(std::move(fitted));
            contestants_.push_back(std::move(folded));
        }
        contestants_.push_back(std::make_unique<TrainingMean>(target_columns_));
        contestants_.push_back(std::make_unique<LinearBenchmark>(sample_, target_columns_, trial_.benchmark_predictors));
    }

    void fit_full_model();
    void run_splits(const FoldPlan& plan, const std::function<void(double)>& progress);
    Trial take() { return std::move(trial_); }

private:
    // Products of raw scores lie far from 0; a first fit tells where, the second loses no digits to it.
    void settle_shifts(TheoryContestant& theory) {
        if (theory.n_designs() == 0) return;
        const std::vector<const Contestant*> alone{&theory};
        const SplitFits first = engine_.fit_whole(whole_, alone);
        if (first.fits.front().status == FitStatus::fitted) theory.set_shifts(first.fits.front());
    }

    void open_results(const FoldPlan& plan);
    void take_wave(const FoldPlan& plan, const std::vector<FoldRange>& ranges, const std::vector<std::vector<SplitFits>>& fits,
                   const std::vector<std::vector<SplitErrors>>& errors);
    void throw_constant(int column, int repeat, std::size_t fold) const;
    void finish_results();

    const Study& study_;
    const Survey& survey_;
    const Sample& sample_;
    WorkerPool pool_;
    SplitEngine engine_;
    Gram whole_;
    std::vector<int> target_columns_;
    std::vector<std::unique_ptr<Contestant>> contestants_;
    std::vector<std::vector<ErrorSums>> sums_;  // per contestant and indicator
    Trial trial_;
};

void Contest::fit_full_model() {
    struct Column {
        std::size_t theory;
        const DesignColumn* column;
        double shift;
    };
    std::vector<Column> columns;
    std::vector<std::string> seen;
    const std::size_t n_theories = trial_.theories.size();
    for (std::size_t t = 0; t < n_theories; ++t) {
        if (trial_.whole[t].failed) continue;
        const Blueprint& plan = trial_.theories[t]->blueprint();
        const EquationFit& fitted = trial_.whole[t].fit.equations[static_cast<std::size_t>(plan.target_equation)];
        for (std::size_t a = 0; a < fitted.active.size(); ++a) {
            const DesignColumn& column = plan.target_plan().columns[static_cast<std::size_t>(fitted.active[a])];
            if (std::find(seen.begin(), seen.end(), column.identity) != seen.end()) continue;
            seen.push_back(column.identity);
            columns.push_back({t, &column, fitted.sums.mean_x(static_cast<Eigen::Index>(a))});
            trial_.full_model.terms.push_back(column.label);
        }
    }
    const int c = static_cast<int>(columns.size());
    const int q = static_cast<int>(n_theories);
    const Eigen::MatrixXd gram = engine_.gram_of(c + q, [&](const RowBlock& rows, RowScratch& scratch, double* out, std::ptrdiff_t stride) {
        for (int k = 0; k < c; ++k) {
            const Column& column = columns[static_cast<std::size_t>(k)];
            double* to = out + k * stride;
            trial_.theories[column.theory]->form_column(trial_.whole[column.theory].fit, *column.column, rows, scratch, to);
            for (std::ptrdiff_t i = 0; i < rows.rows; ++i) to[i] -= column.shift;
        }
        for (int t = 0; t < q; ++t) {
            const auto theory = static_cast<std::size_t>(t);
            double* to = out + (c + t) * stride;
            if (trial_.whole[theory].failed) {
                fill(to, rows.rows, 0);
                continue;
            }
            const int target = trial_.theories[theory]->blueprint().target_block();
            const ScoreMap& score = trial_.whole[theory].fit.scores[static_cast<std::size_t>(target)];
            trial_.theories[theory]->form_score(trial_.whole[theory].fit, target, rows, to);
            for (std::ptrdiff_t i = 0; i < rows.rows; ++i) to[i] = (to[i] - score.mean) / score.sd;
        }
    });
    CrossProducts sums;
    const Eigen::Index ones = c + q;
    sums.n = gram(ones, ones);
    const Eigen::VectorXd mean = gram.row(ones).head(c + q).transpose() / sums.n;
    const auto about = [&](Eigen::Index i, Eigen::Index k) { return gram(std::max(i, k), std::min(i, k)) - sums.n * mean(i) * mean(k); };
    sums.mean_x = mean.head(c);
    sums.mean_y = mean.tail(q);
    sums.xx.resize(c, c);
    sums.xy.resize(c, q);
    sums.yy.resize(q);
    for (Eigen::Index i = 0; i < c; ++i) {
        for (Eigen::Index k = 0; k < c; ++k) sums.xx(i, k) = about(i, k);
        for (Eigen::Index t = 0; t < q; ++t) sums.xy(i, t) = about(c + t, i);
    }
    for (Eigen::Index t = 0; t < q; ++t) sums.yy(t) = about(c + t, c + t);
    sums.scale = gram.diagonal().head(c);
    LeastSquares full;
    full.solve(sums);
    trial_.full_model.rank = full.rank();
    trial_.full_model.sse.resize(q);
    for (int t = 0; t < q; ++t) trial_.full_model.sse(t) = trial_.whole[static_cast<std::size_t>(t)].failed ? kNaN : full.sse(sums, t);
}

void Contest::open_results(const FoldPlan& plan) {
    trial_.repeats = plan.repeats;
    trial_.folds = plan.folds;
    const auto splits = static_cast<Eigen::Index>(plan.repeats) * plan.folds;
    sums_.assign(contestants_.size(), std::vector<ErrorSums>(target_columns_.size()));
    for (const auto& contestant : contestants_) {
        ContestantLosses losses;
        losses.name = contestant->name();
        losses.is_theory = contestant->is_theory();
        losses.split_loss.setZero(splits);
        trial_.contestants.push_back(std::move(losses));
    }
}

void Contest::throw_constant(int column, int repeat, std::size_t fold) const {
    Fault fault;
    fault.file = study_.data.file.text;
    fault.position = fmt::format("column \"{}\"", survey_.variables[static_cast<std::size_t>(column)].column);
    fault.message = fmt::format("has one and the same value in all training rows of repeat {}, fold {}; it cannot be standardised there", repeat + 1, fold + 1);
    fault.hint = "drop the indicator, or use fewer folds";
    throw FaultError(std::move(fault));
}

void Contest::run_splits(const FoldPlan& plan, const std::function<void(double)>& progress) {
    open_results(plan);
    std::vector<const Contestant*> view;
    for (const auto& contestant : contestants_) view.push_back(contestant.get());
    LossRule rule{study_.trial.loss == Loss::absolute, trial_.unit.cwiseInverse(), target_columns_};
    const Eigen::Index n = sample_.n;
    const auto cells = static_cast<std::size_t>(n) * contestants_.size();
    Eigen::MatrixXd row_loss = Eigen::MatrixXd::Zero(n, static_cast<Eigen::Index>(contestants_.size()));
    // A wave holds as many repeats as keep its buffers small; a repeat with very many folds takes several waves.
    constexpr std::uint32_t kMostFolds = 256;
    const std::size_t most_ranges = std::max<std::size_t>(1, std::min<std::size_t>(200000 / static_cast<std::size_t>(n), 1024 / static_cast<std::size_t>(std::min<int>(plan.folds, kMostFolds))));
    std::vector<FoldRange> ranges;
    std::vector<std::vector<SplitFits>> fits;
    std::vector<std::vector<SplitErrors>> errors;
    std::vector<double> slots;
    const auto run_wave = [&] {
        engine_.fit(ranges, whole_, view, fits);
        for (std::size_t r = 0; r < ranges.size(); ++r)
            for (std::size_t k = 0; k < ranges[r].folds(); ++k)
                if (fits[r][k].constant >= 0) throw_constant(fits[r][k].constant, ranges[r].repeat, ranges[r].first + k);
        std::vector<double*> targets(ranges.size(), row_loss.data());
        if (ranges.size() > 1) slots.assign(ranges.size() * cells, 0);
        for (std::size_t r = 0; r < ranges.size() && ranges.size() > 1; ++r) targets[r] = slots.data() + r * cells;
        engine_.predict(ranges, fits, view, rule, targets, errors);
        for (std::size_t r = 0; r < ranges.size() && ranges.size() > 1; ++r)
            row_loss.reshaped() += Eigen::Map<const Eigen::VectorXd>(targets[r], static_cast<Eigen::Index>(cells));
        take_wave(plan, ranges, fits, errors);
        ranges.clear();
    };
    for (int r = 0; r < plan.repeats; ++r)
        for (std::uint32_t first = 0; first < static_cast<std::uint32_t>(plan.folds); first += kMostFolds) {
            ranges.push_back({plan.repeat(r), first, std::min(static_cast<std::uint32_t>(plan.folds), first + kMostFolds), r});
            if (ranges.size() == most_ranges) {
                run_wave();
                if (progress) progress(static_cast<double>(r + 1) / plan.repeats);
            }
        }
    if (!ranges.empty()) run_wave();
    for (std::size_t c = 0; c < contestants_.size(); ++c)
        trial_.contestants[c].row_loss = row_loss.col(static_cast<Eigen::Index>(c)) / static_cast<double>(plan.repeats);
    finish_results();
}

void Contest::take_wave(const FoldPlan& plan, const std::vector<FoldRange>& ranges, const std::vector<std::vector<SplitFits>>& fits,
                        const std::vector<std::vector<SplitErrors>>& errors) {
    for (std::size_t r = 0; r < ranges.size(); ++r)
        for (std::size_t k = 0; k < ranges[r].folds(); ++k)
            for (std::size_t c = 0; c < contestants_.size(); ++c) {
                ContestantLosses& losses = trial_.contestants[c];
                const Fit& fit = fits[r][k].fits[c];
                const auto where = [&] { return fmt::format("in repeat {}, fold {}", ranges[r].repeat + 1, ranges[r].first + k + 1); };
                if (fit.status != FitStatus::fitted && !losses.failed) {
                    losses.failed = true;
                    losses.reason = fmt::format("{}: {}", where(), fit.reason);
                }
                const SplitErrors& split = errors[r][k];
                if (!losses.failed && !std::isfinite(split.loss[c])) {
                    losses.failed = true;
                    losses.reason = fmt::format("{}: a held-out row has no finite prediction: a score there is zero, negative or far outside the training rows", where());
                }
                losses.split_loss(static_cast<Eigen::Index>(ranges[r].repeat) * plan.folds + static_cast<Eigen::Index>(ranges[r].first + k)) = split.loss[c] / split.rows;
                losses.rank_deficient_splits += fit.rank_deficient ? 1 : 0;
                losses.unseen_level_splits += fit.unseen_level ? 1 : 0;
                losses.most_rounds = std::max(losses.most_rounds, fit.rounds);
                for (std::size_t j = 0; j < target_columns_.size(); ++j) {
                    sums_[c][j].squared += split.sums[c][j].squared;
                    sums_[c][j].absolute += split.sums[c][j].absolute;
                    sums_[c][j].proportional += split.sums[c][j].proportional;
                }
            }
}

void Contest::finish_results() {
    const double cells = static_cast<double>(sample_.n) * trial_.repeats;
    const auto q = static_cast<double>(target_columns_.size());
    const std::size_t mean = trial_.theories.size();  // the training mean stands behind the theories
    for (std::size_t c = 0; c < contestants_.size(); ++c) {
        ContestantLosses& losses = trial_.contestants[c];
        double pooled = 0, pooled_mean = 0;
        losses.loss = losses.row_loss.mean();
        for (std::size_t j = 0; j < target_columns_.size(); ++j) {
            const ErrorSums& sums = sums_[c][j];
            const double unit = trial_.unit(static_cast<Eigen::Index>(j));
            const auto column = static_cast<std::size_t>(target_columns_[j]);
            const bool zero = ((sample_.values.col(target_columns_[j]).array() + sample_.centre(target_columns_[j])) == 0).any();
            losses.indicators.push_back({survey_.variables[column].column, std::sqrt(sums.squared / cells), sums.absolute / cells,
                                         zero ? kNaN : 100 * sums.proportional / cells, 1 - sums.squared / sums_[mean][j].squared});
            losses.mae += sums.absolute / (unit * cells * q);
            pooled += sums.squared / (unit * unit);
            pooled_mean += sums_[mean][j].squared / (unit * unit);
        }
        losses.rmse = std::sqrt(pooled / (cells * q));
        losses.q2 = 1 - pooled / pooled_mean;
    }
}

}  // namespace

Trial run_trial(const Study& study, const Survey& survey, const Sample& sample, const FoldPlan& plan, unsigned threads,
                const std::function<void(double)>& progress) {
    Contest contest(study, survey, sample, threads);
    contest.fit_all_rows();
    contest.fit_full_model();
    contest.run_splits(plan, progress);
    return contest.take();
}

Trial fit_all_rows(const Study& study, const Survey& survey, const Sample& sample, unsigned threads) {
    Contest contest(study, survey, sample, threads);
    contest.fit_all_rows();
    return contest.take();
}

}  // namespace rivalfold
