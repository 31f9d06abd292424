#include "verdict/restrictiveness.hpp"

#include "rivalfold/folds/random.hpp"
#include "verdict/kernel_ridge.hpp"

#include <Eigen/Cholesky>

#include <algorithm>
#include <cmath>
#include <limits>
#include <numbers>
#include <numeric>

namespace rivalfold {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr std::uint32_t kRowStream = 0x52000000U;
constexpr std::uint32_t kDrawStream = 0x52000001U;  // + draw
// Added to the kernel's diagonal of 1 so that it can be factorised: a share of 1e-9 of each draw's variance is noise.
constexpr double kNugget = 1e-9;

/// The rows of the draws, gathered.
struct Rows {
    Eigen::MatrixXd values, gaps;
    RowBlock block() const {
        return {values.data(), gaps.cols() > 0 ? gaps.data() : nullptr, values.rows(), values.rows()};
    }
};

Rows gather_rows(const Sample& sample, std::size_t most, std::uint64_t seed) {
    const auto n = static_cast<std::size_t>(sample.n);
    if (n <= most) return {sample.values, sample.gaps};
    RandomStream stream(seed, Purpose::simulation, kRowStream);
    std::vector<std::uint32_t> chosen = shuffled(n, stream);
    chosen.resize(most);
    std::sort(chosen.begin(), chosen.end());
    return {sample.values(chosen, Eigen::indexing::all), sample.gaps(chosen, Eigen::indexing::all)};
}

bool is_control(const Study& study, const Blueprint& plan, const DesignColumn& column) {
    if (column.kind != TermKind::score) return false;
    const std::string& construct = plan.blocks[static_cast<std::size_t>(column.blocks.front())].construct;
    return std::any_of(study.controls.begin(), study.controls.end(),
                       [&](const Name& control) { return control.text == construct; });
}

/// Mean 0, mean square 1; zeros if nothing varies.
void standardise(Eigen::Ref<Eigen::VectorXd> x) {
    x.array() -= x.mean();
    const double size = std::sqrt(x.squaredNorm() / static_cast<double>(x.size()));
    if (size > 0) x /= size;
}

Eigen::MatrixXd antecedent_scores(const Study& study, const Trial& trial, const Rows& rows,
                                  std::vector<std::string>& names) {
    std::vector<std::string> seen;
    Eigen::MatrixXd out(rows.values.rows(), 0);
    for (std::size_t t = 0; t < trial.theories.size(); ++t) {
        if (trial.whole[t].failed) continue;
        const Blueprint& plan = trial.theories[t]->blueprint();
        for (const int active : trial.whole[t].fit.equations[static_cast<std::size_t>(plan.target_equation)].active) {
            const DesignColumn& column = plan.target_plan().columns[static_cast<std::size_t>(active)];
            if (is_control(study, plan, column)) continue;
            for (const int number : column.blocks) {
                const Block& block = plan.blocks[static_cast<std::size_t>(number)];
                if (std::find(seen.begin(), seen.end(), block.measurement) != seen.end()) continue;
                seen.push_back(block.measurement);
                Eigen::VectorXd score(out.rows());
                trial.theories[t]->form_score(trial.whole[t].fit, number, rows.block(), score.data());
                standardise(score);
                out.conservativeResize(Eigen::NoChange, out.cols() + 1);
                out.rightCols(1) = score;
                names.push_back(block.name);
            }
        }
    }
    return out;
}

/// Standard normal numbers by the transformation of Box & Muller (1958, Annals of Mathematical Statistics 29(2),
/// 610-611).
void fill_normal(RandomStream& stream, Eigen::Ref<Eigen::VectorXd> out) {
    for (Eigen::Index i = 0; i < out.size(); i += 2) {
        const double radius = std::sqrt(-2 * std::log(1 - stream.unit()));
        const double angle = 2 * std::numbers::pi * stream.unit();
        out(i) = radius * std::cos(angle);
        if (i + 1 < out.size()) out(i + 1) = radius * std::sin(angle);
    }
}

/// rows x draws, each draw standardised.
Eigen::MatrixXd draw_outcomes(const Eigen::MatrixXd& scores, std::uint64_t seed) {
    Eigen::MatrixXd kernel = gaussian_kernel(scores, scores, median_distance(scores));
    kernel.diagonal().array() += kNugget;
    const Eigen::LLT<Eigen::Ref<Eigen::MatrixXd>> factor(kernel);
    Eigen::MatrixXd out(scores.rows(), kOutcomeDraws);
    for (int d = 0; d < kOutcomeDraws; ++d) {
        RandomStream stream(seed, Purpose::simulation, kDrawStream + static_cast<std::uint32_t>(d));
        fill_normal(stream, out.col(d));
    }
    out = factor.matrixL() * out;
    for (int d = 0; d < kOutcomeDraws; ++d) standardise(out.col(d));
    return out;
}

Restrictiveness restrict(const TheoryContestant& theory, const Fit& fit, const Rows& rows,
                         const Eigen::MatrixXd& outcomes) {
    const Blueprint& plan = theory.blueprint();
    const EquationFit& fitted = fit.equations[static_cast<std::size_t>(plan.target_equation)];
    const auto c = static_cast<Eigen::Index>(fitted.active.size());
    const Eigen::Index n = outcomes.rows();
    Eigen::MatrixXd design(n, c);
    RowScratch scratch;
    CrossProducts sums;
    sums.n = static_cast<double>(n);
    sums.scale.resize(c);
    for (Eigen::Index a = 0; a < c; ++a) {
        const DesignColumn& column =
            plan.target_plan().columns[static_cast<std::size_t>(fitted.active[static_cast<std::size_t>(a)])];
        theory.form_column(fit, column, rows.block(), scratch, design.col(a).data());
        design.col(a).array() -= fitted.sums.mean_x(a);
        sums.scale(a) = design.col(a).squaredNorm();
        design.col(a).array() -= design.col(a).mean();
    }
    sums.mean_x = Eigen::VectorXd::Zero(c);
    sums.mean_y = Eigen::VectorXd::Zero(outcomes.cols());
    sums.xx = design.transpose() * design;
    sums.xy = design.transpose() * outcomes;
    sums.yy = outcomes.colwise().squaredNorm().transpose();
    LeastSquares best;
    best.solve(sums);
    Eigen::VectorXd share(outcomes.cols());
    for (int d = 0; d < kOutcomeDraws; ++d) share(d) = best.sse(sums, d) / sums.yy(d);
    const double mean = share.mean();
    return {mean, std::sqrt((share.array() - mean).square().sum() / (kOutcomeDraws - 1) / kOutcomeDraws)};
}

}  // namespace

RestrictivenessReport measure_restrictiveness(const Study& study, const Sample& sample, const Trial& trial,
                                              std::size_t most_rows) {
    RestrictivenessReport out;
    out.theories.assign(trial.theories.size(), {kNaN, kNaN});
    const Rows rows = gather_rows(sample, most_rows, study.trial.seed);
    out.rows = static_cast<std::size_t>(rows.values.rows());
    const Eigen::MatrixXd scores = antecedent_scores(study, trial, rows, out.antecedents);
    if (scores.cols() == 0) return out;  // no theory could be fitted
    const Eigen::MatrixXd outcomes = draw_outcomes(scores, study.trial.seed);
    for (std::size_t t = 0; t < trial.theories.size(); ++t)
        if (!trial.whole[t].failed) out.theories[t] = restrict(*trial.theories[t], trial.whole[t].fit, rows, outcomes);
    return out;
}

}  // namespace rivalfold
