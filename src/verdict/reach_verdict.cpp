#include "rivalfold/verdict/verdict.hpp"

#include "rivalfold/trial/standard_error.hpp"
#include "rivalfold/verdict/distributions.hpp"
#include "verdict/companions.hpp"
#include "verdict/disagreement.hpp"
#include "verdict/in_sample.hpp"
#include "verdict/words.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

namespace rivalfold {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

void rank_contestants(const Trial& trial, Verdict& verdict) {
    for (std::size_t c = 0; c < trial.contestants.size(); ++c)
        if (!trial.contestants[c].failed) verdict.order.push_back(c);
    // Losses that differ by rounding alone are equal: file order decides, benchmarks last.
    const double grain = 1e-12 * trial.loss_scale();
    const auto rounded = [&](std::size_t c) {
        return grain > 0 ? std::round(trial.contestants[c].loss / grain) : trial.contestants[c].loss;
    };
    std::stable_sort(verdict.order.begin(), verdict.order.end(),
                     [&](std::size_t a, std::size_t b) { return rounded(a) < rounded(b); });
    int rank = 0;
    for (const std::size_t c : verdict.order)
        if (trial.contestants[c].is_theory) verdict.theories[c].rank = ++rank;
}

PairReport compare(const Trial& trial, const Survey& survey, std::size_t a, std::size_t b, double level) {
    const ContestantLosses& first = trial.contestants[a];
    const ContestantLosses& second = trial.contestants[b];
    PairReport pair;
    pair.a = a;
    pair.b = b;
    pair.theories = first.is_theory && second.is_theory;
    const Eigen::VectorXd d = without_rounding(first.row_loss - second.row_loss, trial.loss_scale());
    pair.difference = d.mean();
    pair.relative = pair.difference / second.loss;
    pair.rows = survey.clusters.empty() ? row_test(d, level)
                                        : cluster_test(d, survey.clusters, survey.cluster_names.size(), level);
    pair.corrected = corrected_test(without_rounding(first.split_loss - second.split_loss, trial.loss_scale()),
                                    trial.folds, pair.difference, level);
    pair.p = std::isnan(pair.rows.p) || std::isnan(pair.corrected.p) ? kNaN : std::max(pair.rows.p, pair.corrected.p);
    pair.p_holm = kNaN;
    pair.low = std::min(pair.rows.low, pair.corrected.low);
    pair.high = std::max(pair.rows.high, pair.corrected.high);
    return pair;
}

void adjust(std::vector<PairReport>& pairs) {
    const auto adjust_one = [&](auto p_of, auto set) {
        std::vector<double> p;
        for (const PairReport& pair : pairs) p.push_back(pair.theories ? p_of(pair) : kNaN);
        const std::vector<double> adjusted = holm(p);
        for (std::size_t i = 0; i < pairs.size(); ++i) set(pairs[i], adjusted[i]);
    };
    adjust_one([](const PairReport& pair) { return pair.rows.p; },
               [](PairReport& pair, double p) { pair.rows.p_holm = p; });
    adjust_one([](const PairReport& pair) { return pair.corrected.p; },
               [](PairReport& pair, double p) { pair.corrected.p_holm = p; });
    adjust_one([](const PairReport& pair) { return pair.p; }, [](PairReport& pair, double p) { pair.p_holm = p; });
}

/// Two one-sided tests (Schuirmann 1987): the 1 - 2 level interval, the wider of the two tests', lies inside +-margin
/// of the smaller loss.
bool practically_equal(const Trial& trial, const PairReport& pair, const VerdictRules& rules) {
    const double allowed = rules.margin * std::min(trial.contestants[pair.a].loss, trial.contestants[pair.b].loss);
    double reach = 0;
    for (const PairedTest* test : {&pair.rows, &pair.corrected})
        if (test->se > 0) reach = std::max(reach, student_quantile(rules.level, test->df) * test->se);
    return std::fabs(pair.difference) + reach <= allowed;
}

void decide(const Trial& trial, const VerdictRules& rules, PairReport& pair) {
    const double p = pair.theories ? pair.p_holm : pair.p;
    if (practically_equal(trial, pair, rules))
        pair.outcome = PairOutcome::practically_equal;
    else if (p < rules.level)
        pair.outcome = pair.difference < 0 ? PairOutcome::first_better : PairOutcome::second_better;
}

/// The best-ranked theory, if it beats every rival with the unadjusted larger p (intersection-union test, Berger 1982).
void find_winner(const VerdictRules& rules, const Trial& trial, Verdict& verdict) {
    const std::vector<std::size_t> ranked = ranked_theories(trial, verdict);
    if (ranked.size() < 2) return;
    const bool beats_all = std::all_of(verdict.pairs.begin(), verdict.pairs.end(), [&](const PairReport& pair) {
        if (!pair.theories || pair.a != ranked.front()) return true;
        return pair.p < rules.level && pair.difference < 0 && pair.outcome != PairOutcome::practically_equal;
    });
    if (beats_all) verdict.winner = ranked.front();
}

/// Monte Carlo error of a pair's difference: the spread of the repeats' mean differences over sqrt R.
void add_repeat_spread(const Trial& trial, PairReport& pair) {
    pair.monte_carlo_se = kNaN;
    if (trial.repeats < 2) return;
    const Eigen::VectorXd& b = trial.contestants[pair.b].repeat_loss;
    pair.monte_carlo_se =
        standard_error(without_rounding(trial.contestants[pair.a].repeat_loss - b, trial.loss_scale()), {}, 0);
}

void share_first_places(const Trial& trial, Verdict& verdict) {
    const std::vector<std::size_t> ranked = ranked_theories(trial, verdict);
    for (int r = 0; r < trial.repeats; ++r) {
        double least = std::numeric_limits<double>::infinity();
        for (const std::size_t c : ranked) least = std::min(least, trial.contestants[c].repeat_loss(r));
        std::vector<std::size_t> first;
        for (const std::size_t c : ranked)
            if (trial.contestants[c].repeat_loss(r) <= least + 1e-12 * trial.loss_scale()) first.push_back(c);
        for (const std::size_t c : first)
            verdict.theories[c].first_share += 1.0 / (static_cast<double>(first.size()) * trial.repeats);
    }
}

/// The shortlist: theories that may still be the best.
void make_set(const Study& study, const Survey& survey, const Trial& trial, Verdict& verdict) {
    for (std::size_t t = 0; t < trial.theories.size(); ++t)
        if (!trial.contestants[t].failed) verdict.set_members.push_back(t);
    if (verdict.set_members.empty()) return;
    Eigen::MatrixXd losses(static_cast<Eigen::Index>(survey.n()),
                           static_cast<Eigen::Index>(verdict.set_members.size()));
    for (std::size_t k = 0; k < verdict.set_members.size(); ++k)
        losses.col(static_cast<Eigen::Index>(k)) = trial.contestants[verdict.set_members[k]].row_loss;
    verdict.set = confidence_set(losses, survey.clusters, survey.cluster_names.size(), study.trial.seed);
    for (std::size_t k = 0; k < verdict.set_members.size(); ++k) {
        TheoryReport& theory = verdict.theories[verdict.set_members[k]];
        theory.p_set_range = verdict.set.range.p[k];
        theory.p_set_max = verdict.set.maximum.p[k];
        theory.shortlisted = theory.p_set_max > study.verdict.level;
    }
}

}  // namespace

const char* word(PairOutcome outcome) {
    switch (outcome) {
        case PairOutcome::first_better:
            return "first predicts better";
        case PairOutcome::second_better:
            return "second predicts better";
        case PairOutcome::practically_equal:
            return "practically equal";
        case PairOutcome::unresolved:
            return "unresolved";
    }
    return "";
}

Verdict reach_verdict(const Study& study, const Survey& survey, const Sample& sample, const Trial& trial) {
    Verdict verdict;
    verdict.theories.resize(trial.theories.size());
    for (std::size_t t = 0; t < trial.theories.size(); ++t) {
        verdict.theories[t].contestant = t;
        if (trial.whole[t].failed) {
            const double none = kNaN;
            verdict.theories[t].fitted = {none, none, none, 0, none, none, none, none};
            verdict.theories[t].criteria = {none, none, none, none, none, none, trial.whole[t].reason};
        } else {
            report_in_sample(survey, trial, t, verdict.theories[t]);
            verdict.theories[t].explained = trial.whole[t].explained;
        }
    }
    weigh_by_bic(verdict.theories);
    rank_contestants(trial, verdict);
    for (std::size_t i = 0; i < verdict.order.size(); ++i)
        for (std::size_t j = i + 1; j < verdict.order.size(); ++j)
            verdict.pairs.push_back(compare(trial, survey, verdict.order[i], verdict.order[j], study.verdict.level));
    adjust(verdict.pairs);
    for (PairReport& pair : verdict.pairs) {
        decide(trial, study.verdict, pair);
        add_repeat_spread(trial, pair);
        add_companions(study, survey, trial, pair);
    }
    const Eigen::VectorXd* first_weights = nullptr;
    for (std::size_t t = 0; t < trial.theories.size(); ++t) {
        if (trial.whole[t].failed) continue;
        const Eigen::VectorXd& weights =
            trial.whole[t].fit.weights[static_cast<std::size_t>(trial.theories[t]->blueprint().target_block())];
        if (!first_weights) first_weights = &weights;
        if ((weights - *first_weights).cwiseAbs().maxCoeff() > 1e-8) verdict.several_targets = true;
    }
    find_winner(study.verdict, trial, verdict);
    share_first_places(trial, verdict);
    make_set(study, survey, trial, verdict);
    const std::vector<std::size_t> ranked = ranked_theories(trial, verdict);
    if (!ranked.empty()) verdict.stack = judge_stack(study, survey, trial, ranked.front());
    if (ranked.size() > 1) verdict.disagreement = find_disagreement(study, survey, sample, trial, ranked[0], ranked[1]);
    put_into_words(study, survey, trial, verdict);
    return verdict;
}

}  // namespace rivalfold
