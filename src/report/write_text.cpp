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
    return fmt::format("{} repeat{}{} of {} folds of {}, {}", outcome.plan.repeats, outcome.plan.repeats == 1 ? "" : "s", outcome.study.trial.auto_repeats ? " (auto)" : "", outcome.plan.folds, units, from);
}

std::string rows_in_words(const Survey& survey) {
    const std::size_t dropped = survey.rows_read - survey.n();
    return fmt::format("{} rows read, {} used{}", survey.rows_read, survey.n(), dropped > 0 ? fmt::format(", {} left out", dropped) : "");
}

std::string failures(const Outcome& outcome, const TerminalStyle& style) {
    std::string out;
    for (const ContestantLosses& losses : outcome.trial.contestants)
        if (losses.failed) out += wrap(fmt::format("\"{}\" failed {}.", plain(losses.name), plain(losses.reason)), static_cast<std::size_t>(style.width), 2) + "\n";
    return out;
}

std::string ranked_table(const Outcome& outcome, const TerminalStyle& style) {
    TextTable table({{"rank", false}, {"theory", true}, {"loss", false}, {"rmse", false}, {"mae", false}, {"q2", false}, {"fit", false}, {"dBIC", false}, {"p set", false}});
    bool flexible_due = outcome.completeness.computed;
    const auto add_flexible = [&] {
        const std::string name = outcome.completeness.subsample ? fmt::format("* flexible benchmark, {} rows", outcome.completeness.rows) : "* flexible benchmark";
        if (flexible_due) table.add({"", name, fixed(outcome.completeness.loss_flexible, 4), "", "", fixed(outcome.completeness.q2_flexible, 3), "", "", ""});
        flexible_due = false;
    };
    for (const std::size_t c : outcome.verdict.order) {
        const ContestantLosses& losses = outcome.trial.contestants[c];
        const TheoryReport* theory = losses.is_theory ? &outcome.verdict.theories[c] : nullptr;
        if (losses.loss > outcome.completeness.loss_flexible) add_flexible();
        table.add({theory ? std::to_string(theory->rank) : "", (theory ? "" : "* ") + plain(losses.name), fixed(losses.loss, 4), fixed(losses.rmse, 4), fixed(losses.mae, 4),
                   fixed(losses.q2, 3), theory ? fixed(theory->explained, 3) : "", theory ? fixed(theory->bic_difference, 1) : "", theory ? p_text(theory->p_set_max) : ""});
    }
    add_flexible();
    for (const TheoryReport& theory : outcome.verdict.theories)
        if (outcome.trial.contestants[theory.contestant].failed)
            table.add({"-", plain(outcome.trial.contestants[theory.contestant].name), "failed", "-", "-", "-", "-", fixed(theory.bic_difference, 1), "-"});
    return table.render(static_cast<std::size_t>(style.width)) + failures(outcome, style);
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
    // The rank tells names apart that had to be cut.
    const auto name = [&](std::size_t c) { return fmt::format("{} {}", outcome.verdict.theories[c].rank, plain(outcome.trial.contestants[c].name)); };
    for (const PairReport& pair : outcome.verdict.pairs) {
        if (!pair.theories) continue;
        const double b = outcome.trial.contestants[pair.b].loss;
        table.add({name(pair.a), name(pair.b), percent(pair.relative), fmt::format("{} .. {}", percent(pair.low / b), percent(pair.high / b)), p_text(pair.rows.p),
                   p_text(pair.corrected.p), p_text(pair.p_holm), pair_word(pair)});
    }
    return table.render(static_cast<std::size_t>(style.width));
}

std::string ranked_reading(const Outcome& outcome) {
    const bool squared = outcome.study.trial.loss == Loss::squared;
    std::string text = fmt::format(
        "Loss: mean {} error of held-out rows, each target indicator in units of its own standard deviation; smaller is better. rmse, mae: the same errors in those units. "
        "q2: share of the training mean's squared error that is avoided; 1 is perfect, 0 or less no better than the mean. fit: the same share for the rows that were fitted; dBIC: "
        "BIC above the smallest; both describe the sample, not new rows. p set: p in the model confidence set; above {:g} it may be the best. "
        "* marks a benchmark: beating the training mean shows that there is something to predict; a theory behind the linear benchmark wastes what the indicators hold.",
        squared ? "squared" : "absolute", outcome.study.verdict.level);
    if (outcome.study.trial.mediators == Mediators::predicted) text += " loss, q2 and fit use predicted mediators; BIC measured ones.";
    if (outcome.verdict.several_targets)
        text += " The theories weight the target's indicators differently, so their BIC describes slightly different target scores; held-out losses do not suffer from that.";
    return text;
}

std::string pairs_reading(const Outcome& outcome) {
    return fmt::format(
        "diff: loss of the first minus loss of the second, as % of the second's loss (negative: the first predicts better), with the wider of the two tests' {:.4g}% intervals. "
        "p rows: paired test over {}; p folds: corrected repeated k-fold test; p Holm: the larger of both, adjusted for the number of pairs. One is called better only if p Holm is "
        "below {:g}; equal means: surely within {:.4g}% of each other.",
        100 * (1 - outcome.study.verdict.level), outcome.survey.clusters.empty() ? "rows" : "clusters", outcome.study.verdict.level, 100 * outcome.study.verdict.margin);
}

const Theory& theory_of(const Study& study, const std::string& name) {
    return *std::find_if(study.theories.begin(), study.theories.end(), [&](const Theory& theory) { return theory.name.text == name; });
}

std::string fit_and_prediction(const Outcome& outcome, const TerminalStyle& style) {
    std::string out;
    for (const std::size_t c : outcome.verdict.order) {
        if (!outcome.trial.contestants[c].is_theory) continue;
        const TheoryReport& theory = outcome.verdict.theories[c];
        out += wrap(fmt::format("{} {}: {}; first in {:.0f}% of the repeats.", theory.rank, plain(outcome.trial.contestants[c].name), theory.optimism, 100 * theory.first_share),
                    static_cast<std::size_t>(style.width), 2) + "\n";
    }
    return out;
}

std::string parting(const Outcome& outcome, const TerminalStyle& style) {
    const Disagreement& d = outcome.verdict.disagreement;
    const std::string first = plain(outcome.trial.contestants[d.first].name), second = plain(outcome.trial.contestants[d.second].name);
    TextTable rows({{"row", false}, {"actual", false}, {"first says", false}, {"second says", false}, {"first's loss", false}, {"second's loss", false}});
    for (std::size_t k = 0; k < std::min<std::size_t>(5, d.rows.size()); ++k) {
        const auto i = static_cast<Eigen::Index>(k), row = static_cast<Eigen::Index>(d.rows[k]);
        rows.add({std::to_string(outcome.survey.rows[d.rows[k]]), fixed(d.actual(i), 2), fixed(d.predicted_first(i), 2), fixed(d.predicted_second(i), 2),
                  fixed(outcome.trial.contestants[d.first].row_loss(row), 3), fixed(outcome.trial.contestants[d.second].row_loss(row), 3)});
    }
    std::string out = rows.render(static_cast<std::size_t>(style.width)) + "\n";
    TextTable thirds({{"mean loss difference", true}, {"lowest third", false}, {"middle third", false}, {"highest third", false}});
    for (std::size_t k = 0; k + 2 < d.thirds.size(); k += 3) {
        std::vector<std::string> cells{plain(d.thirds[k].along)};
        for (std::size_t third = 0; third < 3; ++third) cells.push_back(fmt::format("{} ({})", fixed(d.thirds[k + third].difference, 3), fixed(d.thirds[k + third].se, 3)));
        thirds.add(std::move(cells));
    }
    if (!d.thirds.empty()) out += thirds.render(static_cast<std::size_t>(style.width)) + "\n";
    return out + paragraph(fmt::format("First: \"{}\"; second: \"{}\". Above: the rows whose losses differ most, means of the target's indicators in their own units. Below: loss of the first minus "
                                       "loss of the second (standard error) by thirds of each antecedent; negative: the first predicts those rows better. A description, not a test.", first, second), style);
}

std::string completeness_table(const Outcome& outcome, const TerminalStyle& style) {
    const CompletenessReport& report = outcome.completeness;
    if (!report.computed) return paragraph(plain(report.note), style);
    TextTable table({{"theory", true}, {"completeness", false}, {"interval", false}, {"restrictiveness", false}});
    std::string reasons;
    for (const TheoryCompleteness& theory : report.theories) {
        const std::string name = plain(outcome.trial.contestants[theory.contestant].name);
        table.add({name, fixed(theory.completeness, 3), fmt::format("{} .. {}", fixed(theory.low, 3), fixed(theory.high, 3)), fixed(theory.restrictiveness, 3)});
        if (!theory.reason.empty()) reasons += wrap(fmt::format("{}: {}", name, plain(theory.reason)), static_cast<std::size_t>(style.width), 2) + "\n";
    }
    return table.render(static_cast<std::size_t>(style.width)) + reasons + "\n" +
           paragraph(fmt::format("The flexible benchmark (kernel ridge regression, no form assumed) has loss {} and q2 {} on {} rows. completeness: the share of what it gains over the training mean "
                                 "that a theory gains too. restrictiveness: mean squared error of the theory's equation on random smooth outcomes, 1 for a theory that could fit none of them, near 0 for "
                                 "one that could fit anything and so earns little by fitting this. {}", fixed(report.loss_flexible, 4), fixed(report.q2_flexible, 3), report.rows, plain(report.note)), style);
}

std::string segments_table(const Outcome& outcome, const TerminalStyle& style) {
    std::vector<TextTable::Column> columns{{"theory", true}};
    for (const Outcome& segment : outcome.segments) columns.push_back({fmt::format("{} (n {})", cut_to(plain(segment.segment_name), 24), segment.survey.n()), false});
    TextTable table(columns);
    for (std::size_t t = 0; t < outcome.verdict.theories.size(); ++t) {
        std::vector<std::string> cells{plain(outcome.trial.contestants[t].name)};
        for (const Outcome& segment : outcome.segments)
            cells.push_back(segment.trial.contestants[t].failed ? "failed" : fmt::format("{}: {} (q2 {})", segment.verdict.theories[t].rank, fixed(segment.trial.contestants[t].loss, 4), fixed(segment.trial.contestants[t].q2, 3)));
        table.add(std::move(cells));
    }
    std::string out = table.render(static_cast<std::size_t>(style.width)) + "\n" + paragraph("rank: loss (q2) within each segment, fitted and judged there alone.", style);
    for (const Outcome& segment : outcome.segments) out += wrap(fmt::format("{}: {}", plain(segment.segment_name), plain(segment.verdict.headline)), static_cast<std::size_t>(style.width), 2) + "\n";
    double smallest = 1;
    bool found = false;
    for (const Reversal& reversal : outcome.reversals) {
        if (!reversal.words.empty()) out += wrap(plain(reversal.words), static_cast<std::size_t>(style.width), 2) + "\n";
        found = found || !reversal.words.empty();
        if (std::isfinite(reversal.p_holm)) smallest = std::min(smallest, reversal.p_holm);
    }
    if (!found) out += paragraph(fmt::format("No pair's loss difference differs between segments (smallest Holm-adjusted p {}); that is no proof of sameness.", p_text(smallest)), style);
    return out;
}

std::string verdict_in_words(const Outcome& outcome, const TerminalStyle& style) {
    std::string out = paragraph(plain(outcome.verdict.headline), style);
    for (const PairReport& pair : outcome.verdict.pairs) {
        if (!pair.theories || !std::isfinite(pair.monte_carlo_se) || !(pair.rows.se > 0)) continue;
        const double loss = outcome.trial.contestants[pair.b].loss;
        out += paragraph(fmt::format("Other splits of the same rows would move the difference between the first two by about {:.2f}% of the loss (one standard error of the splits); "
                                     "other rows by about {:.2f}%.", 100 * pair.monte_carlo_se / loss, 100 * std::max(pair.rows.se, pair.corrected.se) / loss), style);
        break;  // pairs stand in table order: the first pair of theories is that of the two best
    }
    for (const PairReport& pair : outcome.verdict.pairs)
        if (!pair.nested_words.empty()) out += paragraph(plain(pair.nested_words), style);
    for (const std::string& words : outcome.verdict.encompassing_words) out += paragraph(plain(words), style);
    if (outcome.verdict.stack.present) out += paragraph(plain(outcome.verdict.stack.words), style);
    if (!outcome.study.verdict.completeness) out += paragraph("How much there is to predict at all: verdict: {completeness: true} adds a flexible benchmark.", style);
    return out;
}

}  // namespace

std::string_view caution() {
    return "What this cannot show: a survey is not an experiment and prediction is not causation, so none of this says that changing an antecedent would change the outcome. "
           "Decisions about individual people need qualified review and local rules.";
}

std::string write_tables(const Outcome& outcome, const TerminalStyle& style) {
    const Study& study = outcome.study;
    std::string out;
    if (outcome.segment_name.empty()) {
        out = bold(plain(study.title), style) + "\n";
        out += paragraph(fmt::format("{}; target {} ({} indicator{}); {}.", rows_in_words(outcome.survey), plain(study.target.text), outcome.trial.unit.size(),
                                     outcome.trial.unit.size() == 1 ? "" : "s", splits_in_words(outcome)), style);
    }
    out += "\n" + bold("Ranking by held-out loss", style) + "\n" + ranked_table(outcome, style) + "\n" + paragraph(ranked_reading(outcome), style);
    if (outcome.verdict.pairs.end() != std::find_if(outcome.verdict.pairs.begin(), outcome.verdict.pairs.end(), [](const PairReport& p) { return p.theories; }))
        out += "\n" + bold("Pairs of theories", style) + "\n" + pairs_table(outcome, style) + "\n" + paragraph(pairs_reading(outcome), style);
    out += "\n" + bold("Fit and prediction", style) + "\n" + fit_and_prediction(outcome, style);
    if (outcome.verdict.disagreement.present) out += "\n" + bold("Where the first two part", style) + "\n" + parting(outcome, style);
    if (study.verdict.completeness) out += "\n" + bold("How much there is to predict", style) + "\n" + completeness_table(outcome, style);
    if (!outcome.segments.empty()) out += "\n" + bold("Segments", style) + "\n" + segments_table(outcome, style);
    out += "\n" + bold("Verdict", style) + "\n" + verdict_in_words(outcome, style);
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
        for (const Equation& equation : theory_of(study, plan.name).equations) {
            std::string terms;
            for (const Term& term : equation.terms) terms += (terms.empty() ? "" : " + ") + plain(describe(term));
            for (const Name& control : study.controls)
                if (equation.outcome.text == study.target.text) terms += " + " + plain(control.text);
            out += "  " + wrap(fmt::format("{} = {}", plain(equation.outcome.text), terms), width - 2, 6) + "\n";
        }
    }
    return out;
}

void write_table_md(const Outcome& outcome, const Sink& sink) {
    sink("| Rank | Theory | Loss | RMSE | MAE | Q² | Fit (in sample) | R² (in sample) | ΔBIC | p (set) | Verdict |\n"
         "| ---: | :--- | ---: | ---: | ---: | ---: | ---: | ---: | ---: | ---: | :--- |\n");
    const auto line = [&](std::size_t c) {
        const ContestantLosses& losses = outcome.trial.contestants[c];
        const TheoryReport* theory = losses.is_theory ? &outcome.verdict.theories[c] : nullptr;
        const auto held = [&](double value, int decimals) { return losses.failed ? std::string("-") : fixed(value, decimals); };
        std::string in_sample = "| | | | | benchmark |";
        if (theory)
            in_sample = fmt::format("| {} | {} | {} | {} | {} |", held(theory->explained, 3), fixed(theory->fitted.r2, 3), fixed(theory->bic_difference, 1),
                                    losses.failed ? "-" : p_text(theory->p_set_max), markdown_cell(theory->verdict));
        sink(fmt::format("| {} | {} | {} | {} | {} | {} {}\n", theory && theory->rank > 0 ? std::to_string(theory->rank) : "",
                         theory ? markdown_cell(losses.name) : "*" + markdown_cell(losses.name) + "*", held(losses.loss, 4), held(losses.rmse, 4), held(losses.mae, 4), held(losses.q2, 3), in_sample));
    };
    for (const std::size_t c : outcome.verdict.order) line(c);
    for (std::size_t c = 0; c < outcome.trial.contestants.size(); ++c)
        if (outcome.trial.contestants[c].failed) line(c);
    sink(fmt::format("\n*Note.* {} rows used; {}. {} R²: share of the target score's variance in the fitted sample.\n\n{}\n\n{}\n\n{}\n", outcome.survey.n(),
                     markdown_cell(splits_in_words(outcome)), markdown_cell(ranked_reading(outcome)), markdown_cell(outcome.verdict.headline), markdown_cell(methods_text(outcome)), caution()));
}

}  // namespace rivalfold
