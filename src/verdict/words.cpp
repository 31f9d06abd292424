#include "verdict/words.hpp"
#include "verdict/p_words.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

namespace rivalfold {
namespace {

std::string list_names(const Trial& trial, const std::vector<std::size_t>& contestants) {
    std::string text;
    for (std::size_t i = 0; i < contestants.size(); ++i)
        text += fmt::format("{}\"{}\"",
                            i == 0                        ? ""
                            : i + 1 == contestants.size() ? " and "
                                                          : ", ",
                            trial.contestants[contestants[i]].name);
    return text;
}

const PairReport* pair_of(const Verdict& verdict, std::size_t a, std::size_t b) {
    for (const PairReport& pair : verdict.pairs)
        if (pair.a == a && pair.b == b) return &pair;
    return nullptr;
}

/// Mean over the target's indicators of the root mean square error, in the indicators' own units.
double typical_error(const ContestantLosses& losses) {
    double sum = 0;
    for (const IndicatorErrors& errors : losses.indicators) sum += errors.rmse;
    return sum / static_cast<double>(losses.indicators.size());
}

/// "its loss is 4.0% smaller than that of "additive" (95% interval 1.2 to 6.8%); a typical error of 1.21 instead
/// of 1.26 ..."
std::string size_words(const Study& study, const Trial& trial, const PairReport& pair) {
    const ContestantLosses& first = trial.contestants[pair.a];
    const ContestantLosses& second = trial.contestants[pair.b];
    if (std::max(first.loss, second.loss) <= 1e-12 * trial.loss_scale()) return "both predict every row exactly";
    const auto smaller = [](double share) { return std::fabs(share) < 0.0005 ? 0.0 : -100 * share; };  // never -0.0
    return fmt::format(
        "its loss is {:.1f}% smaller than that of \"{}\" ({:.4g}% interval {:.1f} to {:.1f}%), a typical error of "
        "{:.3f} instead of {:.3f} in the units of {}",
        smaller(pair.relative), second.name, 100 * (1 - study.verdict.level), smaller(pair.high / second.loss),
        smaller(pair.low / second.loss), typical_error(first), typical_error(second),
        first.indicators.size() == 1 ? fmt::format("\"{}\"", first.indicators.front().name)
                                     : "the target's indicators");
}

/// Rivals that could not be fitted must not vanish from a claim about "every rival".
std::string failed_words(const Trial& trial) {
    std::vector<std::size_t> failed;
    for (std::size_t t = 0; t < trial.theories.size(); ++t)
        if (trial.contestants[t].failed) failed.push_back(t);
    return failed.empty() ? ""
                          : fmt::format(" Not judged, because {} could not be fitted in every split: {}.",
                                        failed.size() > 1 ? "they" : "it", list_names(trial, failed));
}

std::string winner_words(const Study& study, const Trial& trial, const Verdict& verdict,
                         const std::vector<std::size_t>& ranked) {
    double largest = 0;
    for (const PairReport& pair : verdict.pairs)
        if (pair.theories && pair.a == ranked.front()) largest = std::max(largest, pair.p);
    return fmt::format("\"{}\" predicts new rows better than every rival{} (both tests against each, largest {}): {}.",
                       trial.contestants[ranked.front()].name,
                       failed_words(trial).empty() ? "" : " that could be fitted", p_words(largest),
                       size_words(study, trial, *pair_of(verdict, ranked[0], ranked[1])));
}

/// The rivals of the first by what was found about them.
struct Rivals {
    std::vector<std::size_t> same, equal, worse, open;
};

Rivals sort_rivals(const Verdict& verdict, std::size_t first) {
    Rivals rivals;
    for (const PairReport& pair : verdict.pairs) {
        if (!pair.theories || pair.a != first) continue;
        if (std::isnan(pair.rows.p) && pair.difference == 0)
            rivals.same.push_back(pair.b);
        else if (pair.outcome == PairOutcome::practically_equal)
            rivals.equal.push_back(pair.b);
        else if (pair.outcome == PairOutcome::first_better)
            rivals.worse.push_back(pair.b);
        else
            rivals.open.push_back(pair.b);
    }
    return rivals;
}

std::string shortlist_words(const Study& study, const Survey& survey, const Trial& trial, const Verdict& verdict,
                            const std::vector<std::size_t>& ranked) {
    const std::string& first = trial.contestants[ranked.front()].name;
    const Rivals rivals = sort_rivals(verdict, ranked.front());
    std::string text = fmt::format("No single winner: \"{}\" ranks first", first);
    if (!rivals.open.empty())
        text += fmt::format(", but these data cannot tell it from {}", list_names(trial, rivals.open));
    text += ".";
    if (!rivals.same.empty())
        text += fmt::format(" {} {} the same predictions as the first.", list_names(trial, rivals.same),
                            rivals.same.size() > 1 ? "make" : "makes");
    if (!rivals.equal.empty())
        text += fmt::format(" Practically equal to the first (surely within {:.4g}%): {}.", 100 * study.verdict.margin,
                            list_names(trial, rivals.equal));
    if (!rivals.worse.empty())
        text += fmt::format(" Shown to predict worse than the first: {}.", list_names(trial, rivals.worse));
    std::vector<std::size_t> kept, out;
    for (const std::size_t c : ranked) (verdict.theories[c].shortlisted ? kept : out).push_back(c);
    text += fmt::format(" Shortlist of theories that may be the best (model confidence set at {:g}): {}",
                        study.verdict.level, list_names(trial, kept));
    text += out.empty() ? "." : fmt::format("; not on it: {}.", list_names(trial, out));
    const PairReport& lead = *pair_of(verdict, ranked[0], ranked[1]);
    if (lead.difference != 0) text += fmt::format(" Against the second: {}.", size_words(study, trial, lead));
    if (survey.n() <= 100 && rivals.equal.empty() && rivals.same.empty())
        text += " With 100 rows or fewer, practical equality can almost never be shown.";
    return text + failed_words(trial);
}

std::string theory_words(const Trial& trial, const Verdict& verdict, std::size_t t,
                         const std::vector<std::size_t>& ranked) {
    if (trial.contestants[t].failed) return "failed " + trial.contestants[t].reason;
    if (verdict.winner == t) return "predicts better than every rival";
    if (t == ranked.front()) {
        const Rivals rivals = sort_rivals(verdict, t);
        if (ranked.size() == 1) return "has no rival that could be fitted";
        return rivals.open.empty() ? "ranks first, no better than one that is practically equal"
                                   : "ranks first, without a clear lead";
    }
    const PairReport* pair = pair_of(verdict, ranked.front(), t);
    const std::string& best = trial.contestants[ranked.front()].name;
    if (std::isnan(pair->rows.p) && pair->difference == 0)
        return fmt::format("makes the same predictions as \"{}\"", best);
    if (pair->outcome == PairOutcome::practically_equal) return fmt::format("practically equal to \"{}\"", best);
    if (pair->outcome == PairOutcome::first_better || verdict.winner)
        return fmt::format("predicts worse than \"{}\"", best);
    return fmt::format("cannot be told from \"{}\"", best);
}

}  // namespace

std::vector<std::size_t> ranked_theories(const Trial& trial, const Verdict& verdict) {
    std::vector<std::size_t> ranked;
    for (const std::size_t c : verdict.order)
        if (trial.contestants[c].is_theory) ranked.push_back(c);
    return ranked;
}

void put_into_words(const Study& study, const Survey& survey, const Trial& trial, Verdict& verdict) {
    const std::vector<std::size_t> ranked = ranked_theories(trial, verdict);
    for (std::size_t t = 0; t < verdict.theories.size(); ++t) {
        TheoryReport& theory = verdict.theories[t];
        theory.verdict = theory_words(trial, verdict, t, ranked);
        if (!trial.contestants[t].failed && !trial.whole[t].failed)
            theory.optimism =
                fmt::format("explains {:.0f}% of the indicators' variance in the sample it was fitted to, {}",
                            100 * theory.explained,
                            trial.contestants[t].q2 < 0
                                ? std::string("but predicts new rows worse than their mean does")
                                : fmt::format("predicts {:.0f}% of it in new rows", 100 * trial.contestants[t].q2));
    }
    for (const PairReport& pair : verdict.pairs)
        if (pair.theories && pair.a == ranked.front() && pair.b_knows_more.p < study.verdict.level && !pair.inner)
            verdict.encompassing_words.push_back(fmt::format(
                "\"{}\" does not contain all that \"{}\" knows of new rows (encompassing test, {}).",
                trial.contestants[pair.a].name, trial.contestants[pair.b].name, p_words(pair.b_knows_more.p)));
    if (ranked.empty())
        verdict.headline = "No theory could be fitted in every split, so there is nothing to compare.";
    else if (ranked.size() == 1)
        verdict.headline = fmt::format("Only \"{}\" could be fitted in every split, so it has no rival.",
                                       trial.contestants[ranked.front()].name);
    else if (verdict.winner)
        verdict.headline = winner_words(study, trial, verdict, ranked) + failed_words(trial);
    else
        verdict.headline = shortlist_words(study, survey, trial, verdict, ranked);
}

}  // namespace rivalfold
