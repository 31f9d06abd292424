#include "rivalfold/trial/losses.hpp"
#include "rivalfold/trial/standard_error.hpp"
#include "trial/error_book.hpp"
#include "trial/split_engine.hpp"
#include "trial/whole_fits.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

namespace rivalfold {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr int kMostAutoRepeats = 200;
constexpr int kAutoStep = 10;
constexpr Eigen::Index kWaveBytes = Eigen::Index{1} << 26;

/// Everything that one run needs, in the order in which it is made.
class Contest {
public:
    Contest(const Study& study, const Survey& survey, const Sample& sample, unsigned threads)
        : study_(study),
          survey_(survey),
          sample_(sample),
          pool_(std::max(1U, threads)),
          engine_(sample, pool_),
          whole_(engine_.whole_gram()),
          fits_(study, survey, sample, engine_, whole_) {}

    void fit_all_rows() { contestants_ = fits_.fit_all_rows(trial_); }
    void fit_full_model() { fits_.fit_full_model(trial_); }
    void run_splits(FoldPlan& plan, const std::function<void(double)>& progress);
    Trial take() { return std::move(trial_); }

private:
    void open_results(const FoldPlan& plan);
    void run_repeats(const FoldPlan& plan, int first, int last, const std::function<void(double)>& progress);
    void run_wave(const FoldPlan& plan, int first, int last);
    void take_splits(const std::vector<FoldRange>& ranges, const std::vector<std::vector<SplitFits>>& fits,
                     const std::vector<std::vector<SplitErrors>>& errors);
    void throw_constant(int column, int repeat, std::size_t fold) const;
    bool needs_more_repeats(int repeats) const;
    Eigen::Index bytes_per_split() const;
    void finish_results();

    const Study& study_;
    const Survey& survey_;
    const Sample& sample_;
    WorkerPool pool_;
    SplitEngine engine_;
    Gram whole_;
    WholeFits fits_;
    std::vector<std::unique_ptr<Contestant>> contestants_;
    std::vector<const Contestant*> view_;
    LossRule rule_;
    std::unique_ptr<ErrorBook> book_;
    Eigen::MatrixXd row_loss_;                                   // n x contestants, sums over repeats
    std::vector<std::vector<ErrorSums>> sums_;                   // per contestant and indicator
    std::vector<std::vector<double>> split_loss_, repeat_loss_;  // per contestant
    std::vector<bool> unfit_;                                    // contestants whose errors must not enter the book
    std::vector<double> slots_, error_slots_;
    Trial trial_;
};

void Contest::open_results(const FoldPlan& plan) {
    trial_.folds = plan.folds;
    trial_.contestants.clear();
    view_.clear();
    rule_.absolute = study_.trial.loss == Loss::absolute;
    rule_.one_over_unit = trial_.unit.cwiseInverse();
    rule_.target_columns = trial_.theories.front()->blueprint().target_columns();
    rule_.error_slot.assign(contestants_.size(), -1);
    unfit_.resize(contestants_.size(), false);
    std::vector<std::size_t> members;
    for (std::size_t c = 0; c < contestants_.size(); ++c) {
        view_.push_back(contestants_[c].get());
        ContestantLosses losses;
        losses.name = contestants_[c]->name();
        losses.is_theory = contestants_[c]->is_theory();
        if (losses.is_theory && !unfit_[c] && !trial_.whole[c].failed) {
            rule_.error_slot[c] = static_cast<std::ptrdiff_t>(members.size());
            members.push_back(c);
        }
        trial_.contestants.push_back(std::move(losses));
    }
    book_ = members.size() > 1 ? std::make_unique<ErrorBook>(members, sample_.n, trial_.unit, rule_.absolute, pool_)
                               : nullptr;
    row_loss_ = Eigen::MatrixXd::Zero(sample_.n, static_cast<Eigen::Index>(contestants_.size()));
    sums_.assign(contestants_.size(), std::vector<ErrorSums>(rule_.target_columns.size()));
    split_loss_.assign(contestants_.size(), {});
    repeat_loss_.assign(contestants_.size(), {});
}

void Contest::throw_constant(int column, int repeat, std::size_t fold) const {
    Fault fault;
    fault.file = study_.data.file.text;
    fault.position = fmt::format("column \"{}\"", survey_.variables[static_cast<std::size_t>(column)].column);
    fault.message = fmt::format(
        "has one and the same value in all training rows of repeat {}, fold {}; it cannot be standardised there",
        repeat + 1, fold + 1);
    fault.hint = "drop the indicator, or use more folds, so that each trains on more rows";
    throw FaultError(std::move(fault));
}

void Contest::run_splits(FoldPlan& plan, const std::function<void(double)>& progress) {
    const bool may_grow = study_.trial.auto_repeats && plan.repeats > 1;
    for (;;) {
        open_results(plan);
        run_repeats(plan, 0, plan.repeats, progress);
        while (may_grow && plan.repeats < kMostAutoRepeats && needs_more_repeats(plan.repeats)) {
            const int done = plan.repeats;
            extend_folds(plan, survey_.clusters, std::min(kMostAutoRepeats, done + kAutoStep), study_.trial.seed);
            run_repeats(plan, done, plan.repeats, progress);
        }
        // A theory that failed on the way has left holes in the book of errors: once more without it there.
        bool again = false;
        for (std::size_t c = 0; c < contestants_.size(); ++c)
            if (trial_.contestants[c].failed && rule_.error_slot[c] >= 0) again = unfit_[c] = true;
        if (!again) break;
    }
    trial_.repeats = plan.repeats;
    slots_ = {};
    error_slots_ = {};
    finish_results();
    row_loss_.resize(0, 0);
}

// Roughly what one split's Gram matrices and fits take: a wide design must not multiply with the number of repeats.
Eigen::Index Contest::bytes_per_split() const {
    Eigen::Index numbers = 2 * static_cast<Eigen::Index>(gram_size(sample_)) * gram_size(sample_);
    for (const auto& theory : trial_.theories)
        for (const EquationPlan& equation : theory->blueprint().equations) {
            const auto width = static_cast<Eigen::Index>(equation.columns.size()) + 2;
            numbers += 3 * width * width;
        }
    return 8 * numbers;
}

void Contest::run_repeats(const FoldPlan& plan, int first, int last, const std::function<void(double)>& progress) {
    // A wave holds as many repeats as keep its buffers small.
    const Eigen::Index splits = std::clamp<Eigen::Index>(kWaveBytes / bytes_per_split(), 1, 1024);
    const int wave = static_cast<int>(
        std::max<Eigen::Index>(1, std::min<Eigen::Index>(200000 / sample_.n, splits / std::min(plan.folds, 1024))));
    for (int r = first; r < last; r += wave) {
        run_wave(plan, r, std::min(last, r + wave));
        if (progress) progress(static_cast<double>(std::min(last, r + wave)) / plan.repeats);
    }
}

void Contest::run_wave(const FoldPlan& plan, int first, int last) {
    const auto count = static_cast<std::size_t>(last - first);
    const std::size_t cells = static_cast<std::size_t>(sample_.n) * contestants_.size();
    if (count > 1) slots_.assign(count * cells, 0);
    if (book_) error_slots_.resize(count * book_->cells());
    // A repeat with very many folds is taken in groups of folds, so that their Gram matrices fit in memory.
    constexpr std::uint32_t kMostFolds = 256;
    const auto folds = static_cast<std::uint32_t>(plan.folds);
    std::vector<std::vector<double>> loss_sum(count, std::vector<double>(contestants_.size(), 0));
    for (std::uint32_t low = 0; low < folds; low += kMostFolds) {
        std::vector<FoldRange> ranges;
        std::vector<PredictionSlots> slots;
        for (std::size_t r = 0; r < count; ++r) {
            ranges.push_back({plan.repeat(first + static_cast<int>(r)), low, std::min(folds, low + kMostFolds),
                              first + static_cast<int>(r)});
            slots.push_back({count > 1 ? slots_.data() + r * cells : row_loss_.data(),
                             book_ ? error_slots_.data() + r * book_->cells() : nullptr});
        }
        std::vector<std::vector<SplitFits>> fits;
        std::vector<std::vector<SplitErrors>> errors;
        engine_.fit(ranges, whole_, view_, fits);
        for (std::size_t r = 0; r < count; ++r)
            for (std::size_t k = 0; k < ranges[r].folds(); ++k)
                if (fits[r][k].constant >= 0)
                    throw_constant(fits[r][k].constant, ranges[r].repeat, ranges[r].first + k);
        engine_.predict(ranges, fits, view_, rule_, slots, errors);
        take_splits(ranges, fits, errors);
        for (std::size_t r = 0; r < count; ++r)
            for (const SplitErrors& split : errors[r])
                for (std::size_t c = 0; c < contestants_.size(); ++c) loss_sum[r][c] += split.loss[c];
    }
    for (std::size_t r = 0; r < count; ++r) {
        if (count > 1)
            row_loss_.reshaped() +=
                Eigen::Map<const Eigen::VectorXd>(slots_.data() + r * cells, static_cast<Eigen::Index>(cells));
        for (std::size_t c = 0; c < contestants_.size(); ++c)
            repeat_loss_[c].push_back(loss_sum[r][c] / static_cast<double>(sample_.n));
        if (book_)
            book_->add_repeat(plan.repeat(first + static_cast<int>(r)), plan.folds,
                              error_slots_.data() + r * book_->cells());
    }
}

// Fold groups of a wave arrive range by range; split losses are put into their place by repeat and fold.
void Contest::take_splits(const std::vector<FoldRange>& ranges, const std::vector<std::vector<SplitFits>>& fits,
                          const std::vector<std::vector<SplitErrors>>& errors) {
    for (std::size_t r = 0; r < ranges.size(); ++r)
        for (std::size_t k = 0; k < ranges[r].folds(); ++k)
            for (std::size_t c = 0; c < contestants_.size(); ++c) {
                ContestantLosses& losses = trial_.contestants[c];
                const Fit& fit = fits[r][k].fits[c];
                const SplitErrors& split = errors[r][k];
                const auto where = [&] {
                    return fmt::format("in repeat {}, fold {}", ranges[r].repeat + 1, ranges[r].first + k + 1);
                };
                if (fit.status != FitStatus::fitted && !losses.failed) {
                    losses.failed = true;
                    losses.reason = fmt::format("{}: {}", where(), fit.reason);
                }
                if (!losses.failed && !std::isfinite(split.loss[c])) {
                    losses.failed = true;
                    losses.reason = fmt::format(
                        "{}: a held-out row has no finite prediction: a score there is zero, negative or far outside "
                        "the training rows",
                        where());
                }
                const std::size_t at =
                    static_cast<std::size_t>(ranges[r].repeat) * static_cast<std::size_t>(trial_.folds) +
                    ranges[r].first + k;
                if (split_loss_[c].size() <= at) split_loss_[c].resize(at + 1);
                split_loss_[c][at] = split.loss[c] / split.rows;
                losses.rank_deficient_splits += fit.rank_deficient ? 1 : 0;
                losses.unseen_level_splits += fit.unseen_level ? 1 : 0;
                losses.most_rounds = std::max(losses.most_rounds, fit.rounds);
                for (std::size_t j = 0; j < rule_.target_columns.size(); ++j) {
                    sums_[c][j].squared += split.sums[c][j].squared;
                    sums_[c][j].absolute += split.sums[c][j].absolute;
                    sums_[c][j].proportional += split.sums[c][j].proportional;
                }
            }
}

bool Contest::needs_more_repeats(int repeats) const {
    const double scale = repeat_loss_[trial_.theories.size()].front();  // the training mean's
    for (std::size_t a = 0; a < trial_.theories.size(); ++a)
        for (std::size_t b = a + 1; b < trial_.theories.size(); ++b) {
            if (trial_.contestants[a].failed || trial_.contestants[b].failed) continue;
            const auto col_a = row_loss_.col(static_cast<Eigen::Index>(a)),
                       col_b = row_loss_.col(static_cast<Eigen::Index>(b));
            const Eigen::VectorXd d = without_rounding((col_a - col_b) / static_cast<double>(repeats), scale);
            Eigen::VectorXd by_repeat(repeats);
            for (int r = 0; r < repeats; ++r)
                by_repeat(r) =
                    repeat_loss_[a][static_cast<std::size_t>(r)] - repeat_loss_[b][static_cast<std::size_t>(r)];
            by_repeat = without_rounding(std::move(by_repeat), scale);
            if (standard_error(by_repeat, {}, 0) >
                0.1 * standard_error(d, survey_.clusters, survey_.cluster_names.size()))
                return true;
        }
    return false;
}

void Contest::finish_results() {
    const double cells = static_cast<double>(sample_.n) * trial_.repeats;
    const auto q = static_cast<double>(rule_.target_columns.size());
    const std::size_t mean = trial_.theories.size();  // the training mean stands behind the theories
    for (std::size_t c = 0; c < contestants_.size(); ++c) {
        ContestantLosses& losses = trial_.contestants[c];
        losses.row_loss = row_loss_.col(static_cast<Eigen::Index>(c)) / static_cast<double>(trial_.repeats);
        losses.split_loss =
            Eigen::Map<const Eigen::VectorXd>(split_loss_[c].data(), static_cast<Eigen::Index>(split_loss_[c].size()));
        losses.repeat_loss = Eigen::Map<const Eigen::VectorXd>(repeat_loss_[c].data(),
                                                               static_cast<Eigen::Index>(repeat_loss_[c].size()));
        losses.loss = losses.row_loss.mean();
        double pooled = 0, pooled_mean = 0;
        for (std::size_t j = 0; j < rule_.target_columns.size(); ++j) {
            const ErrorSums& sums = sums_[c][j];
            const double unit = trial_.unit(static_cast<Eigen::Index>(j));
            const int column = rule_.target_columns[j];
            const bool zero = ((sample_.values.col(column).array() + sample_.centre(column)) == 0).any();
            losses.indicators.push_back({survey_.variables[static_cast<std::size_t>(column)].column,
                                         std::sqrt(sums.squared / cells), sums.absolute / cells,
                                         zero ? kNaN : 100 * sums.proportional / cells,
                                         1 - sums.squared / sums_[mean][j].squared});
            losses.mae += sums.absolute / (unit * cells * q);
            pooled += sums.squared / (unit * unit);
            pooled_mean += sums_[mean][j].squared / (unit * unit);
        }
        losses.rmse = std::sqrt(pooled / (cells * q));
        losses.q2 = 1 - pooled / pooled_mean;
    }
    if (book_) trial_.errors = book_->take();
}

}  // namespace

Trial run_trial(const Study& study, const Survey& survey, const Sample& sample, FoldPlan& plan, unsigned threads,
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
