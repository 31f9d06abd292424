#include "rivalfold/theory/contestant.hpp"
#include "rivalfold/theory/kernels.hpp"

namespace rivalfold {

void TrainingMean::fit_moments(const Moments& moments, FitScratch&, Fit& fit) const {
    fit.offset.resize(static_cast<Eigen::Index>(target_columns_.size()));
    for (std::size_t j = 0; j < target_columns_.size(); ++j)
        fit.offset(static_cast<Eigen::Index>(j)) = moments.mean(target_columns_[j]);
    fit.status = FitStatus::fitted;
}

void TrainingMean::predict(const Fit& fit, const RowBlock& rows, RowScratch&, double* out,
                           std::ptrdiff_t stride) const {
    for (Eigen::Index j = 0; j < fit.offset.size(); ++j) fill(out + j * stride, rows.rows, fit.offset(j));
}

LinearBenchmark::LinearBenchmark(const Sample& sample, std::vector<int> target_columns,
                                 std::vector<int> predictor_columns)
    : sample_(sample), target_columns_(std::move(target_columns)), predictors_(std::move(predictor_columns)) {}

void LinearBenchmark::fit_moments(const Moments& moments, FitScratch&, Fit& fit) const {
    fit.equations.resize(1);
    EquationFit& out = fit.equations.front();
    out.active.clear();
    for (const int column : predictors_)
        if (moments.in_force[static_cast<std::size_t>(column)] != 0) out.active.push_back(column);
    const auto c = static_cast<Eigen::Index>(out.active.size());
    const auto q = static_cast<Eigen::Index>(target_columns_.size());
    // Variables are standardised, levels enter as they stand; this matters only to the minimum-norm solution.
    const auto unit = [&](int column) { return column < sample_.n_variables ? moments.sd(column) : 1.0; };
    CrossProducts& sums = out.sums;
    sums.n = moments.n;
    sums.make_room(c, q);
    for (Eigen::Index a = 0; a < c; ++a) {
        const int column = out.active[static_cast<std::size_t>(a)];
        sums.mean_x(a) = column < sample_.n_variables ? 0 : moments.mean(column);
        for (Eigen::Index b = 0; b < c; ++b) {
            const int other = out.active[static_cast<std::size_t>(b)];
            sums.xx(a, b) = moments.ss(column, other) / (unit(column) * unit(other));
        }
        for (Eigen::Index j = 0; j < q; ++j)
            sums.xy(a, j) = moments.ss(column, target_columns_[static_cast<std::size_t>(j)]) / unit(column);
    }
    for (Eigen::Index j = 0; j < q; ++j) {
        const int column = target_columns_[static_cast<std::size_t>(j)];
        sums.mean_y(j) = moments.mean(column);
        sums.yy(j) = moments.ss(column, column);
    }
    sums.scale = sums.xx.diagonal();
    out.solution.solve(sums);
    fit.rank_deficient = !out.solution.full_rank();
    fit.gap_means = moments.mean;
    fit.offset = out.solution.intercept();
    fit.per_indicator = out.solution.slopes();
    for (Eigen::Index a = 0; a < c; ++a) {
        const int column = out.active[static_cast<std::size_t>(a)];
        fit.per_indicator.row(a) /= unit(column);
        if (column < sample_.n_variables) fit.offset -= fit.per_indicator.row(a).transpose() * moments.mean(column);
    }
    fit.status = FitStatus::fitted;
}

void LinearBenchmark::predict(const Fit& fit, const RowBlock& rows, RowScratch&, double* out,
                              std::ptrdiff_t stride) const {
    const std::vector<int>& active = fit.equations.front().active;
    for (Eigen::Index j = 0; j < fit.offset.size(); ++j) {
        double* predicted = out + j * stride;
        fill(predicted, rows.rows, fit.offset(j));
        for (std::size_t a = 0; a < active.size(); ++a) {
            const double slope = fit.per_indicator(static_cast<Eigen::Index>(a), j);
            add_scaled(predicted, rows.values + active[a] * rows.stride, rows.rows, slope);
            const int gap = sample_.gap_of[static_cast<std::size_t>(active[a])];
            if (gap >= 0)
                add_scaled(predicted, rows.gaps + gap * rows.stride, rows.rows, slope * fit.gap_means(active[a]));
        }
    }
}

}  // namespace rivalfold
