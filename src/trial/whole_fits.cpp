#include "trial/whole_fits.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

namespace rivalfold {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

Eigen::VectorXd standard_deviations(const Sample& sample, const std::vector<int>& columns) {
    Eigen::VectorXd out(static_cast<Eigen::Index>(columns.size()));
    for (std::size_t j = 0; j < columns.size(); ++j) {
        const auto column = sample.values.col(columns[j]);
        const double mean = column.mean();
        out(static_cast<Eigen::Index>(j)) =
            std::sqrt((column.array() - mean).square().sum() / static_cast<double>(sample.n - 1));
    }
    return out;
}

}  // namespace

std::vector<std::unique_ptr<Contestant>> WholeFits::fit_all_rows(Trial& trial) {
    const std::vector<Blueprint> blueprints = build_blueprints(study_, survey_, sample_);
    const std::vector<int> target_columns = blueprints.front().target_columns();
    trial.benchmark_predictors = benchmark_columns(blueprints, survey_);
    trial.unit = standard_deviations(sample_, target_columns);
    std::vector<std::unique_ptr<Contestant>> contestants;
    for (const Blueprint& blueprint : blueprints) {
        auto whole = std::make_shared<TheoryContestant>(sample_, blueprint, true);
        settle_shifts(*whole);
        WholeFit fitted;
        fitted.fit = std::move(engine_.fit_whole(whole_, {whole.get()}).fits.front());
        fitted.failed = fitted.fit.status != FitStatus::fitted;
        fitted.reason = fitted.fit.reason;
        auto folded = std::make_unique<TheoryContestant>(sample_, blueprint, false);
        if (!fitted.failed) {
            folded->set_shifts(fitted.fit);
            fitted.explained = explained_share(*whole, fitted.fit, trial.unit);
        }
        trial.theories.push_back(std::move(whole));
        trial.whole.push_back(std::move(fitted));
        contestants.push_back(std::move(folded));
    }
    contestants.push_back(std::make_unique<TrainingMean>(target_columns));
    contestants.push_back(std::make_unique<LinearBenchmark>(sample_, target_columns, trial.benchmark_predictors));
    return contestants;
}

double WholeFits::explained_share(const TheoryContestant& theory, const Fit& fit, const Eigen::VectorXd& unit) {
    const std::vector<std::uint32_t> one_fold(static_cast<std::size_t>(sample_.n), 0);
    std::vector<std::vector<SplitFits>> fits(1, std::vector<SplitFits>(1));
    fits.front().front().fits.push_back(fit);
    const LossRule rule{false, unit.cwiseInverse(), theory.blueprint().target_columns(), {-1}};
    Eigen::VectorXd row_loss = Eigen::VectorXd::Zero(sample_.n);
    std::vector<std::vector<SplitErrors>> errors;
    engine_.predict({{one_fold, 0, 1, 0}}, fits, {&theory}, rule, {{row_loss.data(), nullptr}}, errors);
    return 1 - row_loss.sum() / static_cast<double>(sample_.n - 1);
}

// Products of raw scores lie far from 0; a first fit tells where, the second loses no digits to it.
void WholeFits::settle_shifts(TheoryContestant& theory) {
    if (theory.n_designs() == 0) return;
    const SplitFits first = engine_.fit_whole(whole_, {&theory});
    if (first.fits.front().status == FitStatus::fitted) theory.set_shifts(first.fits.front());
}

void WholeFits::fit_full_model(Trial& trial) {
    struct Column {
        std::size_t theory;
        const DesignColumn* column;
        double shift;
    };
    std::vector<Column> columns;
    std::vector<std::string> seen;
    const std::size_t n_theories = trial.theories.size();
    for (std::size_t t = 0; t < n_theories; ++t) {
        if (trial.whole[t].failed) continue;
        const Blueprint& plan = trial.theories[t]->blueprint();
        const EquationFit& fitted = trial.whole[t].fit.equations[static_cast<std::size_t>(plan.target_equation)];
        for (std::size_t a = 0; a < fitted.active.size(); ++a) {
            const DesignColumn& column = plan.target_plan().columns[static_cast<std::size_t>(fitted.active[a])];
            if (std::find(seen.begin(), seen.end(), column.identity) != seen.end()) continue;
            seen.push_back(column.identity);
            columns.push_back({t, &column, fitted.sums.mean_x(static_cast<Eigen::Index>(a))});
            trial.full_model.terms.push_back(column.label);
        }
    }
    const int c = static_cast<int>(columns.size());
    const int q = static_cast<int>(n_theories);
    const Eigen::MatrixXd gram =
        engine_.gram_of(c + q, [&](const RowBlock& rows, RowScratch& scratch, double* out, std::ptrdiff_t stride) {
            for (int k = 0; k < c; ++k) {
                const Column& column = columns[static_cast<std::size_t>(k)];
                double* to = out + k * stride;
                trial.theories[column.theory]->form_column(trial.whole[column.theory].fit, *column.column, rows,
                                                           scratch, to);
                for (std::ptrdiff_t i = 0; i < rows.rows; ++i) to[i] -= column.shift;
            }
            for (int t = 0; t < q; ++t) {
                const auto theory = static_cast<std::size_t>(t);
                double* to = out + (c + t) * stride;
                if (trial.whole[theory].failed) {
                    fill(to, rows.rows, 0);
                    continue;
                }
                const int target = trial.theories[theory]->blueprint().target_block();
                const ScoreMap& score = trial.whole[theory].fit.scores[static_cast<std::size_t>(target)];
                trial.theories[theory]->form_score(trial.whole[theory].fit, target, rows, to);
                for (std::ptrdiff_t i = 0; i < rows.rows; ++i) to[i] = (to[i] - score.mean) / score.sd;
            }
        });
    CrossProducts sums;
    const Eigen::Index ones = c + q;
    sums.n = gram(ones, ones);
    const Eigen::VectorXd mean = gram.row(ones).head(c + q).transpose() / sums.n;
    const auto about = [&](Eigen::Index i, Eigen::Index k) {
        return gram(std::max(i, k), std::min(i, k)) - sums.n * mean(i) * mean(k);
    };
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
    trial.full_model.rank = full.rank();
    trial.full_model.sse.resize(q);
    for (int t = 0; t < q; ++t)
        trial.full_model.sse(t) = trial.whole[static_cast<std::size_t>(t)].failed ? kNaN : full.sse(sums, t);
}

}  // namespace rivalfold
