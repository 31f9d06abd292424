#include "verdict/companions.hpp"

#include "rivalfold/trial/standard_error.hpp"
#include "rivalfold/verdict/distributions.hpp"
#include "verdict/p_words.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <set>

namespace rivalfold {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

OneSidedTest mean_above_zero(const Eigen::VectorXd& d, const Survey& survey, bool normal) {
    OneSidedTest test;
    const double se = standard_error(d, survey.clusters, survey.cluster_names.size());
    const double units =
        survey.clusters.empty() ? static_cast<double>(d.size()) : static_cast<double>(survey.cluster_names.size());
    test.df = normal ? 0 : units - 1;
    if (!(se > 0)) {
        test.t = test.p = kNaN;
        test.reason = "the two theories make the same predictions";
        return test;
    }
    test.t = d.mean() / se;
    if (normal) {
        test.p = normal_upper(test.t);
    } else {
        const double two_sided = student_two_sided(test.t, test.df);
        test.p = test.t > 0 ? two_sided / 2 : 1 - two_sided / 2;
    }
    return test;
}

std::multiset<std::string> identities(const Blueprint& plan) {
    std::multiset<std::string> terms;
    for (const DesignColumn& column : plan.target_plan().columns) terms.insert(column.identity);
    return terms;
}

bool has_predicted_mediator(const Blueprint& plan) {
    if (plan.mediators == Mediators::measured) return false;
    const std::vector<int>& blocks = plan.target_plan().predecessors;
    return std::any_of(blocks.begin(), blocks.end(), [&](int block) { return plan.equation_of(block) >= 0; });
}

}  // namespace

bool nested(const Blueprint& inner, const Blueprint& outer) {
    if (has_predicted_mediator(inner) || has_predicted_mediator(outer)) return false;
    const auto small = identities(inner), large = identities(outer);
    return small.size() < large.size() && std::includes(large.begin(), large.end(), small.begin(), small.end());
}

void add_companions(const Study& study, const Survey& survey, const Trial& trial, PairReport& pair) {
    const auto& members = trial.errors.members;
    const auto place = [&](std::size_t contestant) {
        return static_cast<std::size_t>(std::find(members.begin(), members.end(), contestant) - members.begin());
    };
    const std::size_t a = place(pair.a), b = place(pair.b);
    if (!pair.theories || a == members.size() || b == members.size()) return;
    const auto own_minus_shared = [&](std::size_t own) -> Eigen::VectorXd {
        const auto shared = trial.errors.products.col(ErrorProducts::column(a, b));
        const Eigen::VectorXd squares = trial.errors.squares.size() == 0
                                            ? trial.contestants[members[own]].row_loss
                                            : Eigen::VectorXd(trial.errors.squares.col(static_cast<Eigen::Index>(own)));
        return without_rounding(squares - shared, trial.loss_scale());
    };
    pair.b_knows_more = mean_above_zero(own_minus_shared(a), survey, false);
    pair.a_knows_more = mean_above_zero(own_minus_shared(b), survey, false);
    const Blueprint& first = trial.theories[pair.a]->blueprint();
    const Blueprint& second = trial.theories[pair.b]->blueprint();
    if (nested(first, second))
        pair.inner = pair.a;
    else if (nested(second, first))
        pair.inner = pair.b;
    else
        return;
    // e1^2 - e2^2 + (p1 - p2)^2 = 2 (e1^2 - e1 e2), because p1 - p2 = e2 - e1.
    const bool first_is_inner = *pair.inner == pair.a;
    pair.extra_terms = mean_above_zero(2 * own_minus_shared(first_is_inner ? a : b), survey, true);
    const std::string& outer = first_is_inner ? second.name : first.name;
    const bool real = pair.extra_terms.p < study.verdict.level;
    const bool better = pair.outcome == (first_is_inner ? PairOutcome::second_better : PairOutcome::first_better);
    const std::string finding =
        fmt::format("\"{}\" is \"{}\" with extra terms. ", outer, first_is_inner ? first.name : second.name);
    const std::size_t units = survey.clusters.empty() ? survey.n() : survey.cluster_names.size();
    if (!std::isnan(pair.extra_terms.p) && units < (survey.clusters.empty() ? 30U : 10U))
        pair.nested_words = finding + fmt::format("With {} {} the Clark-West test cannot be relied on.", units,
                                                  survey.clusters.empty() ? "rows" : "clusters");
    else if (std::isnan(pair.extra_terms.p))
        pair.nested_words = finding + "Both make the same predictions.";
    else if (real && better)
        pair.nested_words =
            finding + fmt::format("They carry information (Clark-West {}), enough to predict better with {} rows.",
                                  p_words(pair.extra_terms.p), survey.n());
    else if (real && pair.outcome == PairOutcome::practically_equal)
        pair.nested_words =
            finding +
            fmt::format("They carry information (Clark-West {}), but change the loss by less than the margin.",
                        p_words(pair.extra_terms.p));
    else if (real)
        pair.nested_words =
            finding +
            fmt::format(
                "They carry information (Clark-West {}), but too little to show better prediction with {} rows.",
                p_words(pair.extra_terms.p), survey.n());
    else
        pair.nested_words =
            finding + fmt::format("No sign that they carry information (Clark-West {}).", p_words(pair.extra_terms.p));
}

StackReport judge_stack(const Study& study, const Survey& survey, const Trial& trial, std::size_t best) {
    StackReport out;
    const StackLosses& stack = trial.errors.stack;
    if (trial.errors.members.size() < 2) return out;
    const ContestantLosses& leader = trial.contestants[best];
    out.present = true;
    out.loss = stack.loss;
    out.weights.assign(trial.theories.size(), 0);
    for (std::size_t k = 0; k < trial.errors.members.size(); ++k)
        out.weights[trial.errors.members[k]] = stack.weights(static_cast<Eigen::Index>(k));
    const Eigen::VectorXd d = without_rounding(stack.row_loss - leader.row_loss, trial.loss_scale());
    out.difference = d.mean();
    out.relative = out.difference / leader.loss;
    const double level = study.verdict.level;
    out.rows = survey.clusters.empty() ? row_test(d, level)
                                       : cluster_test(d, survey.clusters, survey.cluster_names.size(), level);
    out.corrected = corrected_test(without_rounding(stack.split_loss - leader.split_loss, trial.loss_scale()),
                                   trial.folds, out.difference, level);
    out.p = std::isnan(out.rows.p) || std::isnan(out.corrected.p) ? kNaN : std::max(out.rows.p, out.corrected.p);
    out.low = std::min(out.rows.low, out.corrected.low);
    out.high = std::max(out.rows.high, out.corrected.high);
    out.complementary = out.p < level && out.relative < -study.verdict.margin;
    const auto percent = [](double share) {
        return std::fabs(share) < 0.0005 ? std::string("0.0") : fmt::format("{:+.1f}", 100 * share);
    };
    const std::string size = fmt::format("{}% ({:.4g}% interval {} to {}%{})", percent(out.relative), 100 * (1 - level),
                                         percent(out.low / leader.loss), percent(out.high / leader.loss),
                                         study.trial.loss == Loss::absolute ? "; weights from squared errors" : "");
    if (out.complementary)
        out.words = fmt::format(
            "The theories are complementary: their stacked mixture changes the loss of \"{}\" by {}. Each holds "
            "something that the others lack.",
            leader.name, size);
    else
        out.words = fmt::format(
            "A stacked mixture of the theories changes the loss of \"{}\" by {}: no proof that the others add to it.",
            leader.name, size);
    return out;
}

}  // namespace rivalfold
