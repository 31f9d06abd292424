#include "rivalfold/report/writers.hpp"
#include "report/numbers.hpp"
#include "report/text_table.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

namespace rivalfold {
namespace {

std::string bold(const std::string& text, const TerminalStyle& style) { return style.colour ? "\x1b[1m" + text + "\x1b[0m" : text; }

std::string paragraph(std::string_view text, const TerminalStyle& style) { return wrap(text, static_cast<std::size_t>(style.width), 0) + "\n"; }

std::string splits_in_words(const Outcome& outcome) {
    const bool alone = static_cast<std::size_t>(outcome.plan.folds) == (outcome.survey.clusters.empty() ? outcome.survey.n() : outcome.survey.cluster_names.size());
    const std::string units = outcome.survey.clusters.empty() ? "rows" : fmt::format("whole clusters (\"{}\", {} of them)", plain(outcome.study.data.cluster->text), outcome.survey.cluster_names.size());
    const std::string from = outcome.study.trial.folds_file ? fmt::format("from {}", plain(outcome.study.trial.folds_file->text)) : fmt::format("seed {}", outcome.study.trial.seed);
    if (alone) return fmt::format("leave one {} out ({} splits), {}", outcome.survey.clusters.empty() ? "row" : "cluster", outcome.plan.folds, from);
    return fmt::format("{} repeat{} of {} folds of {}, {}", outcome.plan.repeats, outcome.plan.repeats == 1 ? "" : "s", outcome.plan.folds, units, from);
}

std::string rows_in_words(const Survey& survey) {
    const std::size_t dropped = survey.rows_read - survey.n();
    return fmt::format("{} rows read, {} used{}", survey.rows_read, survey.n(), dropped > 0 ? fmt::format(", {} left out", dropped) : "");
}

std::string ranked_table(const Outcome& outcome, const TerminalStyle& style) {
    double least_bic = std::numeric_limits<double>::infinity();
    for (const TheoryReport& theory : outcome.verdict.theories)
        if (!std::isnan(theory.criteria.bic)) least_bic = std::min(least_bic, theory.criteria.bic);
    TextTable table({{"rank", false}, {"theory", true}, {"loss", false}, {"rmse", false}, {"mae", false}, {"q2", false}, {"R2 in", false}, {"dBIC in", false}});
    for (const std::size_t c : outcome.verdict.order) {
        const ContestantLosses& losses = outcome.trial.contestants[c];
        const TheoryReport* theory = losses.is_theory ? &outcome.verdict.theories[c] : nullptr;
        table.add({theory ? std::to_string(theory->rank) : "", (theory ? "" : "~ ") + plain(losses.name), fixed(losses.loss, 4), fixed(losses.rmse, 4), fixed(losses.mae, 4),
                   fixed(losses.q2, 4), theory ? fixed(theory->fitted.r2, 4) : "", theory ? fixed(theory->criteria.bic - least_bic, 1) : ""});
    }
    for (const TheoryReport& theory : outcome.verdict.theories)
        if (outcome.trial.contestants[theory.contestant].failed)
            table.add({"-", plain(outcome.trial.contestants[theory.contestant].name), "failed", "-", "-", "-", fixed(theory.fitted.r2, 4), fixed(theory.criteria.bic - least_bic, 1)});
    std::string out = table.render(static_cast<std::size_t>(style.width));
    for (const TheoryReport& theory : outcome.verdict.theories)
        if (outcome.trial.contestants[theory.contestant].failed)
            out += wrap(fmt::format("\"{}\" failed {}.", plain(outcome.trial.contestants[theory.contestant].name), plain(outcome.trial.contestants[theory.contestant].reason)),
                        static_cast<std::size_t>(style.width), 2) + "\n";
    return out;
}

std::string pair_word(const PairReport& pair) {
    switch (pair.outcome) {
        case PairOutcome::first_better: return "first";
        case PairOutcome::second_better: return "second";
        case PairOutcome::practically_equal: return "equal";
        case PairOutcome::unresolved: return "unclear";
    }
    return "";
}

std::string percent(double share) { return std::isfinite(share) ? fmt::format("{:+.1f}", 100 * share) : "-"; }

std::string pairs_table(const Outcome& outcome, const TerminalStyle& style) {
    TextTable table({{"first", true}, {"second", true}, {"diff %", false}, {"interval %", false}, {"p rows", false}, {"p folds", false}, {"p Holm", false}, {"better", true}});
    for (const PairReport& pair : outcome.verdict.pairs) {
        if (!pair.theories) continue;
        const ContestantLosses& b = outcome.trial.contestants[pair.b];
        table.add({plain(outcome.trial.contestants[pair.a].name), plain(b.name), percent(pair.relative),
                   fmt::format("{} .. {}", percent(pair.low / b.loss), percent(pair.high / b.loss)), p_text(pair.rows.p), p_text(pair.corrected.p), p_text(pair.p_holm),
                   pair_word(pair)});
    }
    return table.render(static_cast<std::size_t>(style.width));
}

std::string ranked_reading(const Outcome& outcome) {
    const bool squared = outcome.study.trial.loss == Loss::squared;
    std::string text = fmt::format(
        "Loss: mean {} error of held-out rows, each target indicator in units of its own standard deviation; smaller is better. rmse, mae: the same errors in those units. "
        "q2: share of the training mean's squared error that is avoided; 1 is perfect, 0 or less no better than the mean. R2 in, dBIC in: the fit to all rows used, not prediction. "
        "~ marks a benchmark: beating the training mean shows that there is something to predict; a theory behind the linear benchmark wastes what the indicators hold.",
        squared ? "squared" : "absolute");
    if (outcome.verdict.several_targets)
        text += " The theories weight the target's indicators differently, so their R2 and BIC describe slightly different target scores; held-out losses do not suffer from that.";
    return text;
}

std::string pairs_reading(const Outcome& outcome) {
    return fmt::format(
        "diff: loss of the first minus loss of the second, as % of the second's loss (negative: the first predicts better), with the wider of the two tests' {:.4g}% intervals. "
        "p rows: paired test over {}; p folds: corrected repeated k-fold test; p Holm: the larger of both, adjusted for the number of pairs. One is called better only if p Holm is "
        "below {:g}; equal means: surely within {:.4g}% of each other.",
        100 * (1 - outcome.study.verdict.level), outcome.survey.clusters.empty() ? "rows" : "clusters", outcome.study.verdict.level, 100 * outcome.study.verdict.margin);
}

}  // namespace

std::string_view caution() {
    return "What this cannot show: a survey is not an experiment and prediction is not causation, so none of this says that changing an antecedent would change the outcome. "
           "Decisions about individual people need qualified review and local rules.";
}

std::string write_tables(const Outcome& outcome, const TerminalStyle& style) {
    const Study& study = outcome.study;
    std::string out = bold(plain(study.title), style) + "\n";
    out += paragraph(fmt::format("{}; target {} ({} indicator{}); {}.", rows_in_words(outcome.survey), plain(study.target.text), outcome.trial.unit.size(),
                                 outcome.trial.unit.size() == 1 ? "" : "s", splits_in_words(outcome)), style);
    out += "\n" + bold("Ranking by held-out loss", style) + "\n" + ranked_table(outcome, style) + "\n" + paragraph(ranked_reading(outcome), style);
    if (outcome.verdict.pairs.end() != std::find_if(outcome.verdict.pairs.begin(), outcome.verdict.pairs.end(), [](const PairReport& p) { return p.theories; }))
        out += "\n" + bold("Pairs of theories", style) + "\n" + pairs_table(outcome, style) + "\n" + paragraph(pairs_reading(outcome), style);
    out += "\n" + bold("Verdict", style) + "\n" + paragraph(plain(outcome.verdict.headline), style);
    out += paragraph(caution(), style);
    return out;
}

std::string write_advice(const std::vector<std::string>& advice, const TerminalStyle& style) {
    std::string out;
    for (const std::string& item : advice) out += wrap("advice: " + plain(item), static_cast<std::size_t>(style.width), 2) + "\n";
    return out;
}

std::string write_plan(const Outcome& outcome, const TerminalStyle& style) {
    const Study& study = outcome.study;
    const auto width = static_cast<std::size_t>(style.width);
    std::string out = bold(plain(study.title), style) + "\n" + wrap(fmt::format("data: {}, {}", plain(study.data.file.text), rows_in_words(outcome.survey)), width, 2) + "\n";
    for (const Dropped& dropped : outcome.survey.dropped) {
        std::string rows;
        for (std::size_t i = 0; i < std::min<std::size_t>(8, dropped.rows.size()); ++i) rows += fmt::format("{}{}", i > 0 ? ", " : "", dropped.rows[i]);
        if (dropped.rows.size() > 8) rows += ", ...";
        out += "  " + wrap(fmt::format("left out: {} row{}, {} (row{} {})", dropped.rows.size(), dropped.rows.size() == 1 ? "" : "s", plain(dropped.reason), dropped.rows.size() == 1 ? "" : "s", rows), width - 2, 4) + "\n";
    }
    out += wrap("splits: " + splits_in_words(outcome), width, 2) + fmt::format("\n  trains on at least {} rows a split\n", outcome.plan.smallest_training());
    out += "\n" + bold("Constructs", style) + "\n";
    TextTable constructs({{"construct", true}, {"as measured by", true}, {"indicators", false}, {"weights", true}, {"alpha", false}});
    for (const Measurement& m : outcome.survey.measurements) {
        if (!m.used) continue;
        const std::string by = m.theory == Measurement::kEveryTheory ? "every theory" : plain(study.theories[m.theory].name.text);
        if (m.category >= 0) {
            const Category& category = outcome.survey.categories[static_cast<std::size_t>(m.category)];
            constructs.add({plain(m.construct), by, fmt::format("{} levels", category.levels.size()), "category", ""});
            continue;
        }
        double alpha = std::numeric_limits<double>::quiet_NaN();
        for (const Reliability& r : outcome.reliabilities)
            if (r.construct == m.construct && (r.theory.empty() ? m.theory == Measurement::kEveryTheory : m.theory != Measurement::kEveryTheory && r.theory == study.theories[m.theory].name.text)) alpha = r.alpha;
        constructs.add({plain(m.construct), by, std::to_string(m.variables.size()), m.variables.size() == 1 ? "single" : word(m.weights), fixed(alpha, 3)});
    }
    out += constructs.render(width);
    out += wrap("alpha: Cronbach's reliability of the indicators as keyed; above .7 is common practice (Nunnally 1978). A single indicator has none.", width, 0) + "\n";
    out += "\n" + bold("Theories", style) + "\n";
    for (const auto& theory : outcome.trial.theories) {
        const Blueprint& plan = theory->blueprint();
        out += wrap(plain(plan.name) + (plan.claim.empty() ? "" : ": " + plain(plan.claim)), width, 2) + "\n";
        for (const int e : plan.file_order) {
            const EquationPlan& equation = plan.equations[static_cast<std::size_t>(e)];
            std::string terms;
            for (const DesignColumn& column : equation.columns) terms += (terms.empty() ? "" : " + ") + plain(column.label);
            out += "  " + wrap(fmt::format("{} = {}", plain(equation.outcome_name), terms), width - 2, 6) + "\n";
        }
    }
    return out;
}

void write_table_md(const Outcome& outcome, const Sink& sink) {
    sink("| Rank | Theory | Loss | RMSE | MAE | Q² | R² (in sample) | ΔBIC | Verdict |\n| ---: | :--- | ---: | ---: | ---: | ---: | ---: | ---: | :--- |\n");
    double least_bic = std::numeric_limits<double>::infinity();
    for (const TheoryReport& theory : outcome.verdict.theories)
        if (!std::isnan(theory.criteria.bic)) least_bic = std::min(least_bic, theory.criteria.bic);
    const auto line = [&](std::size_t c) {
        const ContestantLosses& losses = outcome.trial.contestants[c];
        const TheoryReport* theory = losses.is_theory ? &outcome.verdict.theories[c] : nullptr;
        const auto held = [&](double value, int decimals) { return losses.failed ? std::string("-") : fixed(value, decimals); };
        sink(fmt::format("| {} | {} | {} | {} | {} | {} | {} | {} | {} |\n", theory && theory->rank > 0 ? std::to_string(theory->rank) : "",
                         theory ? markdown_cell(losses.name) : "*" + markdown_cell(losses.name) + "*", held(losses.loss, 4), held(losses.rmse, 4), held(losses.mae, 4), held(losses.q2, 4),
                         theory ? fixed(theory->fitted.r2, 4) : "", theory ? fixed(theory->criteria.bic - least_bic, 1) : "", theory ? markdown_cell(theory->verdict) : "benchmark"));
    };
    for (const std::size_t c : outcome.verdict.order) line(c);
    for (std::size_t c = 0; c < outcome.trial.contestants.size(); ++c)
        if (outcome.trial.contestants[c].failed) line(c);
    sink(fmt::format("\n*Note.* {} rows used; {}. {}\n\n{} {}\n", outcome.survey.n(), markdown_cell(splits_in_words(outcome)),
                     markdown_cell(ranked_reading(outcome)), markdown_cell(outcome.verdict.headline), caution()));
}

}  // namespace rivalfold
