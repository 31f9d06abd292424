#include "verdict/in_sample.hpp"

#include "rivalfold/verdict/distributions.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

namespace rivalfold {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

/// Residual sum of squares without design column `left_out` (a position among the active columns).
double sse_without(const CrossProducts& sums, Eigen::Index left_out) {
    CrossProducts fewer;
    const Eigen::Index c = sums.xx.rows();
    std::vector<Eigen::Index> kept;
    for (Eigen::Index j = 0; j < c; ++j)
        if (j != left_out) kept.push_back(j);
    fewer.n = sums.n;
    fewer.mean_x = sums.mean_x(kept);
    fewer.mean_y = sums.mean_y;
    fewer.xx = sums.xx(kept, kept);
    fewer.xy = sums.xy(kept, Eigen::indexing::all);
    fewer.yy = sums.yy;
    fewer.scale = sums.scale(kept);
    LeastSquares solution;
    solution.solve(fewer);
    return solution.sse(fewer);
}

void add_term(EquationReport& out, const std::string& label, double coefficient, double variance_factor, double sse,
              double df, double f2) {
    TermReport term{label, coefficient, kNaN, kNaN, kNaN, f2, {}};
    if (std::isnan(variance_factor))
        term.reason = "the terms are linearly dependent, so single coefficients have no standard errors";
    else if (df <= 0)
        term.reason = "no residual degrees of freedom";
    else
        term.se = std::sqrt(variance_factor * sse / df);
    if (term.se > 0) {
        term.t = coefficient / term.se;
        term.p = student_two_sided(term.t, df);
    } else if (term.reason.empty()) {
        term.reason = "the equation fits every row exactly";
    }
    out.terms.push_back(std::move(term));
}

EquationReport report_equation(const EquationPlan& plan, const EquationFit& fitted) {
    EquationReport out;
    out.outcome = plan.outcome_name;
    const CrossProducts& sums = fitted.sums;
    const double sse = fitted.solution.sse(sums);
    const double syy = sums.yy(0);
    out.r2 = 1 - sse / syy;
    const double df = sums.n - fitted.solution.rank();
    const bool identified = fitted.solution.full_rank();
    Eigen::MatrixXd inverse;
    double intercept_factor = kNaN;
    if (identified) {
        inverse = fitted.solution.inverse();
        intercept_factor = 1 / sums.n + sums.mean_x.dot(inverse * sums.mean_x);
    }
    add_term(out, "1", fitted.intercept, intercept_factor, sse, df, kNaN);
    for (std::size_t a = 0; a < fitted.active.size(); ++a) {
        const auto position = static_cast<Eigen::Index>(a);
        const double f2 = sse > 0 ? std::max(0.0, sse_without(sums, position) - sse) / sse : kNaN;
        add_term(out, plan.columns[static_cast<std::size_t>(fitted.active[a])].label, fitted.slopes(fitted.active[a]),
                 identified ? inverse(position, position) : kNaN, sse, df, f2);
    }
    return out;
}

std::vector<ConstructWeights> report_weights(const Survey& survey, const Blueprint& plan, const Fit& fit) {
    std::vector<ConstructWeights> out;
    for (std::size_t b = 0; b < plan.blocks.size(); ++b) {
        const Block& block = plan.blocks[b];
        if (block.is_level()) continue;
        ConstructWeights weights{block.construct, {}};
        for (std::size_t h = 0; h < block.columns.size(); ++h)
            weights.indicators.push_back({survey.variables[static_cast<std::size_t>(block.columns[h])].column,
                                          fit.weights[b](static_cast<Eigen::Index>(h)),
                                          fit.loadings[b](static_cast<Eigen::Index>(h))});
        out.push_back(std::move(weights));
    }
    return out;
}

}  // namespace

Criteria criteria_of(double sse, double n, double p, double mse_full) {
    Criteria out;
    // Below this the sum is rounding: target scores have a total sum of squares of n - 1.
    if (!(sse > 1e-13 * n)) {
        out.aic = out.aicc = out.bic = out.hq = out.gm = out.bic_weight = kNaN;
        out.reason = "the equation fits every row exactly, so ln(SSE) does not exist";
        return out;
    }
    const double fit = n * std::log(sse / n);
    out.aic = fit + 2 * p;
    out.aicc = n - p - 1 > 0 ? out.aic + 2 * p * (p + 1) / (n - p - 1) : kNaN;
    out.bic = fit + p * std::log(n);
    out.hq = fit + 2 * p * std::log(std::log(n));
    out.gm = mse_full > 0 ? sse / mse_full + p * std::log(n) : kNaN;
    out.bic_weight = kNaN;
    if (std::isnan(out.aicc)) out.reason = "AICc needs more rows than coefficients + 1";
    if (std::isnan(out.gm))
        out.reason +=
            std::string(out.reason.empty() ? "" : "; ") + "GM needs a full model with residual degrees of freedom";
    return out;
}

void report_in_sample(const Survey& survey, const Trial& trial, std::size_t theory, TheoryReport& out) {
    const Blueprint& plan = trial.theories[theory]->blueprint();
    const Fit& fit = trial.whole[theory].fit;
    for (const int e : plan.file_order)
        out.equations.push_back(
            report_equation(plan.equations[static_cast<std::size_t>(e)], fit.equations[static_cast<std::size_t>(e)]));
    out.weights = report_weights(survey, plan, fit);
    const EquationFit& target = fit.equations[static_cast<std::size_t>(plan.target_equation)];
    const double n = target.sums.n;
    const double sd = fit.scores[static_cast<std::size_t>(plan.target_block())].sd;
    InSample& in = out.fitted;
    in.sse = target.solution.sse(target.sums) / (sd * sd);
    in.r2 = 1 - in.sse / (n - 1);
    in.coefficients = static_cast<int>(target.active.size()) + 1;
    // Linearly dependent terms cost degrees of freedom only once.
    in.f_df1 = target.solution.rank() - 1;
    in.f_df2 = n - target.solution.rank();
    in.adjusted_r2 = in.f_df2 > 0 ? 1 - (1 - in.r2) * (n - 1) / in.f_df2 : kNaN;
    in.f = in.f_df2 > 0 && in.f_df1 > 0 && in.r2 < 1 ? in.r2 / in.f_df1 / ((1 - in.r2) / in.f_df2) : kNaN;
    in.f_p = std::isnan(in.f) ? kNaN : f_upper(std::max(0.0, in.f), in.f_df1, in.f_df2);
    const double full_df = n - trial.full_model.rank;
    const double mse_full = full_df > 0 ? trial.full_model.sse(static_cast<Eigen::Index>(theory)) / full_df : kNaN;
    out.criteria = criteria_of(in.sse, n, in.coefficients, mse_full);
}

void weigh_by_bic(std::vector<TheoryReport>& theories) {
    double least = std::numeric_limits<double>::infinity(), sum = 0;
    for (const TheoryReport& theory : theories)
        if (!std::isnan(theory.criteria.bic)) least = std::min(least, theory.criteria.bic);
    for (const TheoryReport& theory : theories)
        if (!std::isnan(theory.criteria.bic)) sum += std::exp(-(theory.criteria.bic - least) / 2);
    for (TheoryReport& theory : theories) theory.bic_difference = theory.criteria.bic - least;  // NaN stays NaN
    for (TheoryReport& theory : theories)
        theory.criteria.bic_weight =
            std::isnan(theory.criteria.bic) ? kNaN : std::exp(-(theory.criteria.bic - least) / 2) / sum;
}

}  // namespace rivalfold
