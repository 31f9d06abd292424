#include "rivalfold/theory/contestant.hpp"
#include "rivalfold/theory/kernels.hpp"
#include "theory/terms/terms.hpp"
#include "theory/weighting/path_stage.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <span>
#include <vector>

namespace rivalfold {
namespace {

struct TheoryScratch final : FitScratch {
    explicit TheoryScratch(const Blueprint& plan) : stage(plan) {}
    PathStage stage;
    std::vector<Eigen::VectorXd> maps;  // per block, its score (measured or predicted) as a function of sample columns
    std::vector<double> constants;
};

void make_room(Eigen::MatrixXd& room, std::ptrdiff_t rows, Eigen::Index columns) {
    if (room.rows() < rows || room.cols() < columns)
        room.resize(std::max<Eigen::Index>(room.rows(), rows), std::max(room.cols(), columns));
}

}  // namespace

TheoryContestant::TheoryContestant(const Sample& sample, Blueprint blueprint, bool everything)
    : sample_(sample), plan_(std::move(blueprint)) {
    for (std::size_t e = 0; e < plan_.equations.size(); ++e) {
        EquationPlan& equation = plan_.equations[e];
        if (everything) equation.needed = true;
        if (!equation.needed || equation.linear) continue;
        direct_ = false;
        designs_.push_back(static_cast<int>(e));
        shifts_.push_back(Eigen::VectorXd::Zero(static_cast<Eigen::Index>(equation.columns.size()) + 1));
    }
    for (const EquationPlan& equation : plan_.equations)
        for (const int block : equation.predecessors)
            for (const int column : plan_.blocks[static_cast<std::size_t>(block)].columns)
                if (equation.needed &&
                    std::find(direct_columns_.begin(), direct_columns_.end(), column) == direct_columns_.end())
                    direct_columns_.push_back(column);
    std::sort(direct_columns_.begin(), direct_columns_.end());
}

std::unique_ptr<FitScratch> TheoryContestant::make_scratch() const { return std::make_unique<TheoryScratch>(plan_); }

int TheoryContestant::design_columns(int design) const {
    return static_cast<int>(
               plan_.equations[static_cast<std::size_t>(designs_[static_cast<std::size_t>(design)])].columns.size()) +
           1;
}

void TheoryContestant::set_shifts(const Fit& whole) {
    for (std::size_t d = 0; d < designs_.size(); ++d) {
        const auto equation = static_cast<std::size_t>(designs_[d]);
        const EquationFit& fitted = whole.equations[equation];
        for (std::size_t a = 0; a < fitted.active.size(); ++a)
            shifts_[d](fitted.active[a]) = fitted.sums.mean_x(static_cast<Eigen::Index>(a));
        shifts_[d](shifts_[d].size() - 1) = fitted.sums.mean_y(0);
    }
}

void TheoryContestant::fit_moments(const Moments& moments, FitScratch& scratch, Fit& fit) const {
    auto& room = static_cast<TheoryScratch&>(scratch);
    fit.status = FitStatus::not_run;
    fit.rank_deficient = false;
    fit.unseen_level = false;
    room.stage.run(moments, fit);
    if (fit.status == FitStatus::failed || !map_scores(moments, fit)) return;
    fit.gap_means = moments.mean;
    const std::vector<int>& target = plan_.target_columns();
    const Eigen::VectorXd& loadings = fit.loadings[static_cast<std::size_t>(plan_.target_block())];
    fit.offset.resize(static_cast<Eigen::Index>(target.size()));
    fit.factor.resize(fit.offset.size());
    for (std::size_t j = 0; j < target.size(); ++j) {
        fit.offset(static_cast<Eigen::Index>(j)) = moments.mean(target[j]);
        fit.factor(static_cast<Eigen::Index>(j)) = moments.sd(target[j]) * loadings(static_cast<Eigen::Index>(j));
    }
    fit.equations.resize(plan_.equations.size());
    for (std::size_t e = 0; e < plan_.equations.size(); ++e) {
        if (!plan_.equations[e].needed) continue;
        choose_active(plan_.equations[e], fit, fit.equations[e]);
        if (plan_.equations[e].linear) solve_linear(e, moments.n, fit);
    }
    fit.status = FitStatus::fitted;
}

bool TheoryContestant::map_scores(const Moments& moments, Fit& fit) const {
    for (std::size_t b = 0; b < plan_.blocks.size(); ++b) {
        const Block& block = plan_.blocks[b];
        ScoreMap& score = fit.scores[b];
        score.coefficients.resize(static_cast<Eigen::Index>(block.columns.size()));
        if (block.is_level()) {
            score.coefficients(0) = 1;
            score.constant = 0;
            score.mean = moments.mean(block.columns.front());
            score.sd = moments.sd(block.columns.front());
            continue;
        }
        double sum = 0, least = 0, most = 0;
        score.constant = 0;
        score.mean = 0;
        score.sd = 1;
        for (std::size_t h = 0; h < block.columns.size(); ++h) {
            const double coefficient = fit.weights[b](static_cast<Eigen::Index>(h)) / moments.sd(block.columns[h]);
            score.coefficients(static_cast<Eigen::Index>(h)) = coefficient;
            score.constant -= coefficient * moments.mean(block.columns[h]);
            sum += coefficient;
            least = std::min(least, coefficient);
            most = std::max(most, coefficient);
        }
        if (plan_.metric == Metric::standard) continue;
        if (least < 0 && most > 0) {
            fit.fail(
                fmt::format("metric: response needs indicator weights of one sign, but those of \"{}\" differ in sign; "
                            "reverse or drop an "
                            "indicator, or use weights: equal",
                            block.construct));
            return false;
        }
        score.coefficients /= sum;
        score.sd = 1 / std::fabs(sum);
        score.constant = 0;
        for (std::size_t h = 0; h < block.columns.size(); ++h) {
            const double coefficient = score.coefficients(static_cast<Eigen::Index>(h));
            score.constant += coefficient * sample_.centre(block.columns[h]);
            score.mean += coefficient * (sample_.centre(block.columns[h]) + moments.mean(block.columns[h]));
        }
    }
    return true;
}

void TheoryContestant::choose_active(const EquationPlan& equation, const Fit& fit, EquationFit& out) const {
    out.active.clear();
    for (std::size_t c = 0; c < equation.columns.size(); ++c) {
        const std::vector<int>& blocks = equation.columns[c].blocks;
        if (std::all_of(blocks.begin(), blocks.end(),
                        [&](int block) { return fit.scores[static_cast<std::size_t>(block)].active; }))
            out.active.push_back(static_cast<int>(c));
    }
}

void TheoryContestant::solve_linear(std::size_t equation, double n, Fit& fit) const {
    const EquationPlan& plan = plan_.equations[equation];
    EquationFit& out = fit.equations[equation];
    const auto c = static_cast<Eigen::Index>(out.active.size());
    CrossProducts& sums = out.sums;
    sums.n = n;
    sums.make_room(c, 1);
    const auto block_of = [&](Eigen::Index a) {
        return plan.columns[static_cast<std::size_t>(out.active[static_cast<std::size_t>(a)])].blocks.front();
    };
    const auto sd = [&](int block) { return fit.scores[static_cast<std::size_t>(block)].sd; };
    for (Eigen::Index a = 0; a < c; ++a) {
        const int block = block_of(a);
        sums.mean_x(a) = fit.scores[static_cast<std::size_t>(block)].mean;
        for (Eigen::Index b = 0; b < c; ++b)
            sums.xx(a, b) = fit.score_correlations(block, block_of(b)) * sd(block) * sd(block_of(b)) * (n - 1);
        sums.xy(a, 0) = fit.score_correlations(block, plan.outcome) * sd(block) * sd(plan.outcome) * (n - 1);
    }
    sums.scale = sums.xx.diagonal();
    sums.mean_y(0) = fit.scores[static_cast<std::size_t>(plan.outcome)].mean;
    sums.yy(0) = sd(plan.outcome) * sd(plan.outcome) * (n - 1);
    accept(equation, fit);
}

void TheoryContestant::fit_design(int design, const Eigen::MatrixXd& gram, Fit& fit) const {
    const auto equation = static_cast<std::size_t>(designs_[static_cast<std::size_t>(design)]);
    const Eigen::VectorXd& shift = shifts_[static_cast<std::size_t>(design)];
    EquationFit& out = fit.equations[equation];
    const Eigen::Index all = shift.size() - 1;  // position of the outcome; the ones stand behind it
    const double n = gram(all + 1, all + 1);
    const auto c = static_cast<Eigen::Index>(out.active.size());
    CrossProducts& sums = out.sums;
    sums.n = n;
    sums.make_room(c, 1);
    const double mean_y = gram(all + 1, all) / n;
    for (Eigen::Index a = 0; a < c; ++a) {
        const Eigen::Index i = out.active[static_cast<std::size_t>(a)];
        const double mean_i = gram(all + 1, i) / n;
        for (Eigen::Index b = 0; b <= a; ++b) {
            const Eigen::Index k = out.active[static_cast<std::size_t>(b)];
            sums.xx(a, b) = gram(i, k) - n * mean_i * (gram(all + 1, k) / n);
            sums.xx(b, a) = sums.xx(a, b);
        }
        sums.xy(a, 0) = gram(all, i) - n * mean_i * mean_y;
        sums.mean_x(a) = mean_i + shift(i);
        sums.scale(a) = gram(i, i);
    }
    sums.mean_y(0) = mean_y + shift(all);
    sums.yy(0) = gram(all, all) - n * mean_y * mean_y;
    if (!sums.xx.allFinite() || !sums.xy.allFinite()) {
        const EquationPlan& plan = plan_.equations[equation];
        std::string term = "a term";
        for (const DesignColumn& column : plan.columns)
            if (column.kind == TermKind::geometric_mean) term = column.label;
        return fit.fail(fmt::format(
            "{} has no value in some training row: a score there is zero or negative; use minimum or product, or items "
            "that start at 1",
            term));
    }
    accept(equation, fit);
}

void TheoryContestant::accept(std::size_t equation, Fit& fit) const {
    EquationFit& out = fit.equations[equation];
    out.solution.solve(out.sums);
    if (!out.solution.full_rank()) fit.rank_deficient = true;
    out.slopes.setZero(static_cast<Eigen::Index>(plan_.equations[equation].columns.size()));
    for (std::size_t a = 0; a < out.active.size(); ++a)
        out.slopes(out.active[a]) = out.solution.slopes()(static_cast<Eigen::Index>(a), 0);
    out.intercept = out.solution.intercept()(0);
}

void TheoryContestant::finish(FitScratch& scratch, Fit& fit) const {
    if (!direct_ || fit.status != FitStatus::fitted) return;
    auto& room = static_cast<TheoryScratch&>(scratch);
    room.maps.resize(plan_.blocks.size());
    room.constants.assign(plan_.blocks.size(), 0);
    for (std::size_t b = 0; b < plan_.blocks.size(); ++b) {
        room.maps[b].setZero(sample_.n_columns);
        for (std::size_t h = 0; h < plan_.blocks[b].columns.size(); ++h)
            room.maps[b](plan_.blocks[b].columns[h]) += fit.scores[b].coefficients(static_cast<Eigen::Index>(h));
        room.constants[b] = fit.scores[b].constant;
    }
    const EquationPlan& target = plan_.target_plan();
    fit.direct.setZero(sample_.n_columns);
    for (std::size_t e = 0; e < plan_.equations.size(); ++e) {
        const EquationPlan& equation = plan_.equations[e];
        if (!equation.needed) continue;
        const bool is_target = &equation == &target;
        if (!is_target && plan_.mediators == Mediators::measured) continue;
        double constant = fit.equations[e].intercept;
        fit.direct.setZero();
        for (std::size_t c = 0; c < equation.columns.size(); ++c) {
            const double slope = fit.equations[e].slopes(static_cast<Eigen::Index>(c));
            if (slope == 0) continue;
            const auto block = static_cast<std::size_t>(equation.columns[c].blocks.front());
            fit.direct += slope * room.maps[block];
            constant += slope * room.constants[block];
        }
        const auto outcome = static_cast<std::size_t>(equation.outcome);
        if (is_target) {
            const ScoreMap& score = fit.scores[outcome];
            fit.direct /= score.sd;
            fit.direct_constant = (constant - score.mean) / score.sd;
            return;
        }
        room.maps[outcome] = fit.direct;
        room.constants[outcome] = constant;
    }
}

/// out += sum over `columns` of factor(h) x column, gaps filled with the training mean.
template <class Factor>
void TheoryContestant::add_columns(const RowBlock& rows, const std::vector<int>& columns,
                                   const Eigen::VectorXd& gap_means, Factor factor, double* out) const {
    std::size_t h = 0;
    for (; h + 4 <= columns.size(); h += 4) {
        const double* x[4];
        double factors[4];
        for (std::size_t l = 0; l < 4; ++l) {
            x[l] = rows.values + columns[h + l] * rows.stride;
            factors[l] = factor(h + l);
        }
        add_scaled_4(out, x, rows.rows, factors);
    }
    for (; h < columns.size(); ++h) add_scaled(out, rows.values + columns[h] * rows.stride, rows.rows, factor(h));
    if (!rows.gaps) return;
    for (h = 0; h < columns.size(); ++h)
        if (const int gap = sample_.gap_of[static_cast<std::size_t>(columns[h])]; gap >= 0)
            add_scaled(out, rows.gaps + gap * rows.stride, rows.rows, factor(h) * gap_means(columns[h]));
}

void TheoryContestant::form_score(const Fit& fit, int block, const RowBlock& rows, double* out) const {
    const ScoreMap& score = fit.scores[static_cast<std::size_t>(block)];
    const std::vector<int>& columns = plan_.blocks[static_cast<std::size_t>(block)].columns;
    fill(out, rows.rows, score.constant);
    add_columns(
        rows, columns, fit.gap_means, [&](std::size_t h) { return score.coefficients(static_cast<Eigen::Index>(h)); },
        out);
}

void TheoryContestant::form_equation_column(const DesignColumn& column, std::ptrdiff_t rows,
                                            const Eigen::MatrixXd& scores, double* out) const {
    std::array<const double*, 16> few{};  // no allocation for any usual term
    std::vector<const double*> many;
    const std::size_t count = column.blocks.size();
    if (count > few.size()) many.resize(count);
    const std::span<const double*> members(count > few.size() ? many.data() : few.data(), count);
    for (std::size_t m = 0; m < count; ++m) members[m] = scores.col(column.blocks[m]).data();
    form_term(column.kind, Members(members.data(), members.size()), rows, out);
}

void TheoryContestant::form_column(const Fit& fit, const DesignColumn& column, const RowBlock& rows,
                                   RowScratch& scratch, double* out) const {
    make_room(scratch.scores, rows.rows, static_cast<Eigen::Index>(plan_.blocks.size()));
    for (const int block : column.blocks) form_score(fit, block, rows, scratch.scores.col(block).data());
    form_equation_column(column, rows.rows, scratch.scores, out);
}

void TheoryContestant::form_design(int design, const Fit& fit, const RowBlock& rows, RowScratch& scratch, double* out,
                                   std::ptrdiff_t stride) const {
    const EquationPlan& equation =
        plan_.equations[static_cast<std::size_t>(designs_[static_cast<std::size_t>(design)])];
    const Eigen::VectorXd& shift = shifts_[static_cast<std::size_t>(design)];
    make_room(scratch.scores, rows.rows, static_cast<Eigen::Index>(plan_.blocks.size()));
    for (const int block : equation.predecessors) form_score(fit, block, rows, scratch.scores.col(block).data());
    const auto n_columns = static_cast<std::ptrdiff_t>(equation.columns.size());
    for (std::ptrdiff_t c = 0; c <= n_columns; ++c) {
        double* column = out + c * stride;
        if (c < n_columns)
            form_equation_column(equation.columns[static_cast<std::size_t>(c)], rows.rows, scratch.scores, column);
        else
            form_score(fit, equation.outcome, rows, column);
        if (shift(c) != 0)
            for (std::ptrdiff_t i = 0; i < rows.rows; ++i) column[i] -= shift(c);
    }
}

void TheoryContestant::predict(const Fit& fit, const RowBlock& rows, RowScratch& scratch, double* out,
                               std::ptrdiff_t stride) const {
    const std::ptrdiff_t n = rows.rows;
    make_room(scratch.column, n, 2);
    double* predicted = scratch.column.col(0).data();
    if (direct_) {
        fill(predicted, n, fit.direct_constant);
        add_columns(
            rows, direct_columns_, fit.gap_means, [&](std::size_t h) { return fit.direct(direct_columns_[h]); },
            predicted);
    } else {
        make_room(scratch.scores, n, static_cast<Eigen::Index>(plan_.blocks.size()));
        double* term = scratch.column.col(1).data();
        for (std::size_t e = 0; e < plan_.equations.size(); ++e) {
            const EquationPlan& equation = plan_.equations[e];
            if (!equation.needed) continue;
            const bool is_target = static_cast<int>(e) == plan_.target_equation;
            if (!is_target && plan_.mediators == Mediators::measured) continue;
            for (const int block : equation.predecessors)
                if (plan_.mediators == Mediators::measured || plan_.equation_of(block) < 0)
                    form_score(fit, block, rows, scratch.scores.col(block).data());
            double* sum = is_target ? predicted : scratch.scores.col(equation.outcome).data();
            fill(sum, n, fit.equations[e].intercept);
            for (std::size_t c = 0; c < equation.columns.size(); ++c) {
                const double slope = fit.equations[e].slopes(static_cast<Eigen::Index>(c));
                if (slope == 0) continue;
                form_equation_column(equation.columns[c], n, scratch.scores, term);
                add_scaled(sum, term, n, slope);
            }
            if (is_target) break;
        }
        const ScoreMap& score = fit.scores[static_cast<std::size_t>(plan_.target_block())];
        for (std::ptrdiff_t i = 0; i < n; ++i) predicted[i] = (predicted[i] - score.mean) / score.sd;
    }
    for (Eigen::Index j = 0; j < fit.offset.size(); ++j) {
        fill(out + j * stride, n, fit.offset(j));
        add_scaled(out + j * stride, predicted, n, fit.factor(j));
    }
}

}  // namespace rivalfold
