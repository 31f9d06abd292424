#include "report/numbers.hpp"
#include "report/readings.hpp"
#include "report/text_table.hpp"
#include "rivalfold/report/writers.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

namespace rivalfold {
namespace {

std::string failures(const Outcome& outcome, const TerminalStyle& style) {
    std::string out;
    for (const ContestantLosses& losses : outcome.trial.contestants)
        if (losses.failed)
            out += wrap(fmt::format("\"{}\" failed {}.", plain(losses.name), plain(losses.reason)),
                        static_cast<std::size_t>(style.width), 2) +
                   "\n";
    return out;
}

std::string ranked_table(const Outcome& outcome, const TerminalStyle& style) {
    TextTable table({{"rank", false},
                     {"theory", true},
                     {"loss", false},
                     {"rmse", false},
                     {"mae", false},
                     {"q2", false},
                     {"fit", false},
                     {"dBIC", false},
                     {"p set", false}});
    bool flexible_due = outcome.completeness.computed;
    const auto add_flexible = [&] {
        const std::string name = outcome.completeness.subsample
                                     ? fmt::format("* flexible benchmark, {} rows", outcome.completeness.rows)
                                     : "* flexible benchmark";
        if (flexible_due)
            table.add({"", name, fixed(outcome.completeness.loss_flexible, 4), "", "",
                       fixed(outcome.completeness.q2_flexible, 3), "", "", ""});
        flexible_due = false;
    };
    for (const std::size_t c : outcome.verdict.order) {
        const ContestantLosses& losses = outcome.trial.contestants[c];
        const TheoryReport* theory = losses.is_theory ? &outcome.verdict.theories[c] : nullptr;
        if (losses.loss > outcome.completeness.loss_flexible) add_flexible();
        table.add({theory ? std::to_string(theory->rank) : "", (theory ? "" : "* ") + plain(losses.name),
                   fixed(losses.loss, 4), fixed(losses.rmse, 4), fixed(losses.mae, 4), fixed(losses.q2, 3),
                   theory ? fixed(theory->explained, 3) : "", theory ? fixed(theory->bic_difference, 1) : "",
                   theory ? p_text(theory->p_set_max) : ""});
    }
    add_flexible();
    for (const TheoryReport& theory : outcome.verdict.theories)
        if (outcome.trial.contestants[theory.contestant].failed)
            table.add({"-", plain(outcome.trial.contestants[theory.contestant].name), "failed", "-", "-", "-", "-",
                       fixed(theory.bic_difference, 1), "-"});
    return table.render(static_cast<std::size_t>(style.width)) + failures(outcome, style);
}

std::string pair_word(const PairReport& pair) {
    switch (pair.outcome) {
        case PairOutcome::first_better:
            return "first";
        case PairOutcome::second_better:
            return "second";
        case PairOutcome::practically_equal:
            return "equal";
        case PairOutcome::unresolved:
            return "unclear";
    }
    return "";
}

std::string percent(double share) { return std::isfinite(share) ? fmt::format("{:+.1f}", 100 * share) : "-"; }

std::string pairs_table(const Outcome& outcome, const TerminalStyle& style) {
    TextTable table({{"first", true},
                     {"second", true},
                     {"diff %", false},
                     {"interval %", false},
                     {"p rows", false},
                     {"p folds", false},
                     {"p Holm", false},
                     {"better", true}});
    // The rank tells names apart that had to be cut.
    const auto name = [&](std::size_t c) {
        return fmt::format("{} {}", outcome.verdict.theories[c].rank, plain(outcome.trial.contestants[c].name));
    };
    for (const PairReport& pair : outcome.verdict.pairs) {
        if (!pair.theories) continue;
        const double b = outcome.trial.contestants[pair.b].loss;
        table.add({name(pair.a), name(pair.b), percent(pair.relative),
                   fmt::format("{} .. {}", percent(pair.low / b), percent(pair.high / b)), p_text(pair.rows.p),
                   p_text(pair.corrected.p), p_text(pair.p_holm), pair_word(pair)});
    }
    return table.render(static_cast<std::size_t>(style.width));
}

std::string fit_and_prediction(const Outcome& outcome, const TerminalStyle& style) {
    std::string out;
    for (const std::size_t c : outcome.verdict.order) {
        if (!outcome.trial.contestants[c].is_theory) continue;
        const TheoryReport& theory = outcome.verdict.theories[c];
        out += wrap(fmt::format("{} {}: {}; first in {:.0f}% of the repeats.", theory.rank,
                                plain(outcome.trial.contestants[c].name), theory.optimism, 100 * theory.first_share),
                    static_cast<std::size_t>(style.width), 2) +
               "\n";
    }
    return out;
}

std::string parting(const Outcome& outcome, const TerminalStyle& style) {
    const Disagreement& d = outcome.verdict.disagreement;
    const std::string first = plain(outcome.trial.contestants[d.first].name),
                      second = plain(outcome.trial.contestants[d.second].name);
    TextTable rows({{"row", false},
                    {"actual", false},
                    {"first says", false},
                    {"second says", false},
                    {"first's loss", false},
                    {"second's loss", false}});
    for (std::size_t k = 0; k < std::min<std::size_t>(5, d.rows.size()); ++k) {
        const auto i = static_cast<Eigen::Index>(k), row = static_cast<Eigen::Index>(d.rows[k]);
        rows.add({std::to_string(outcome.survey.rows[d.rows[k]]), fixed(d.actual(i), 2), fixed(d.predicted_first(i), 2),
                  fixed(d.predicted_second(i), 2), fixed(outcome.trial.contestants[d.first].row_loss(row), 3),
                  fixed(outcome.trial.contestants[d.second].row_loss(row), 3)});
    }
    std::string out = rows.render(static_cast<std::size_t>(style.width)) + "\n";
    TextTable thirds(
        {{"mean loss difference", true}, {"lowest third", false}, {"middle third", false}, {"highest third", false}});
    for (std::size_t k = 0; k + 2 < d.thirds.size(); k += 3) {
        std::vector<std::string> cells{plain(d.thirds[k].along)};
        for (std::size_t third = 0; third < 3; ++third)
            cells.push_back(
                fmt::format("{} ({})", fixed(d.thirds[k + third].difference, 3), fixed(d.thirds[k + third].se, 3)));
        thirds.add(std::move(cells));
    }
    if (!d.thirds.empty()) out += thirds.render(static_cast<std::size_t>(style.width)) + "\n";
    return out + paragraph(fmt::format("First: \"{}\"; second: \"{}\". Above: the rows whose losses differ most, means "
                                       "of the target's indicators in their own units. Below: loss of the first minus "
                                       "loss of the second (standard error) by thirds of each antecedent; negative: "
                                       "the first predicts those rows better. A description, not a test.",
                                       first, second),
                           style);
}

std::string completeness_table(const Outcome& outcome, const TerminalStyle& style) {
    const CompletenessReport& report = outcome.completeness;
    if (!report.computed) return paragraph(plain(report.note), style);
    TextTable table({{"theory", true}, {"completeness", false}, {"interval", false}, {"restrictiveness", false}});
    std::string reasons;
    for (const TheoryCompleteness& theory : report.theories) {
        const std::string name = plain(outcome.trial.contestants[theory.contestant].name);
        table.add({name, fixed(theory.completeness, 3),
                   fmt::format("{} .. {}", fixed(theory.low, 3), fixed(theory.high, 3)),
                   fixed(theory.restrictiveness, 3)});
        if (!theory.reason.empty())
            reasons +=
                wrap(fmt::format("{}: {}", name, plain(theory.reason)), static_cast<std::size_t>(style.width), 2) +
                "\n";
    }
    return table.render(static_cast<std::size_t>(style.width)) + reasons + "\n" +
           paragraph(fmt::format(
                         "The flexible benchmark (kernel ridge regression, no form assumed) has loss {} and q2 {} on "
                         "{} rows. completeness: the share of what it gains over the training mean "
                         "that a theory gains too. restrictiveness: mean squared error of the theory's equation on "
                         "random smooth outcomes, 1 for a theory that could fit none of them, near 0 for "
                         "one that could fit anything and so earns little by fitting this. {}",
                         fixed(report.loss_flexible, 4), fixed(report.q2_flexible, 3), report.rows, plain(report.note)),
                     style);
}

std::string segments_table(const Outcome& outcome, const TerminalStyle& style) {
    std::vector<TextTable::Column> columns{{"theory", true}};
    for (const Outcome& segment : outcome.segments)
        columns.push_back(
            {fmt::format("{} (n {})", cut_to(plain(segment.segment_name), 24), segment.survey.n()), false});
    TextTable table(columns);
    for (std::size_t t = 0; t < outcome.verdict.theories.size(); ++t) {
        std::vector<std::string> cells{plain(outcome.trial.contestants[t].name)};
        for (const Outcome& segment : outcome.segments)
            cells.push_back(segment.trial.contestants[t].failed
                                ? "failed"
                                : fmt::format("{}: {} (q2 {})", segment.verdict.theories[t].rank,
                                              fixed(segment.trial.contestants[t].loss, 4),
                                              fixed(segment.trial.contestants[t].q2, 3)));
        table.add(std::move(cells));
    }
    std::string out = table.render(static_cast<std::size_t>(style.width)) + "\n" +
                      paragraph("rank: loss (q2) within each segment, fitted and judged there alone.", style);
    for (const Outcome& segment : outcome.segments)
        out += wrap(fmt::format("{}: {}", plain(segment.segment_name), plain(segment.verdict.headline)),
                    static_cast<std::size_t>(style.width), 2) +
               "\n";
    double smallest = std::numeric_limits<double>::infinity();
    bool found = false;
    for (const Reversal& reversal : outcome.reversals) {
        if (!reversal.words.empty())
            out += wrap(plain(reversal.words), static_cast<std::size_t>(style.width), 2) + "\n";
        found = found || !reversal.words.empty();
        if (std::isfinite(reversal.p_holm)) smallest = std::min(smallest, reversal.p_holm);
    }
    if (!found && std::isfinite(smallest))
        out += paragraph(fmt::format("No pair's loss difference differs between segments (smallest Holm-adjusted p "
                                     "{}); that is no proof of sameness.",
                                     p_text(smallest)),
                         style);
    return out;
}

std::string verdict_in_words(const Outcome& outcome, const TerminalStyle& style) {
    std::string out = paragraph(plain(outcome.verdict.headline), style);
    for (const PairReport& pair : outcome.verdict.pairs) {
        if (!pair.theories || !std::isfinite(pair.monte_carlo_se) || !(pair.rows.se > 0)) continue;
        const double loss = outcome.trial.contestants[pair.b].loss;
        out += paragraph(
            fmt::format("Other splits of the same rows would move the difference between the first two by about "
                        "{:.2f}% of the loss (one standard error of the splits); "
                        "other rows by about {:.2f}%.",
                        100 * pair.monte_carlo_se / loss, 100 * std::max(pair.rows.se, pair.corrected.se) / loss),
            style);
        break;  // pairs stand in table order: the first pair of theories is that of the two best
    }
    for (const PairReport& pair : outcome.verdict.pairs)
        if (!pair.nested_words.empty()) out += paragraph(plain(pair.nested_words), style);
    for (const std::string& words : outcome.verdict.encompassing_words) out += paragraph(plain(words), style);
    if (outcome.verdict.stack.present) out += paragraph(plain(outcome.verdict.stack.words), style);
    if (!outcome.study.verdict.completeness)
        out += paragraph(
            "How much there is to predict at all: verdict: {completeness: true} adds a flexible benchmark.", style);
    return out;
}

}  // namespace

std::string write_tables(const Outcome& outcome, const TerminalStyle& style) {
    const Study& study = outcome.study;
    std::string out;
    if (outcome.segment_name.empty()) {
        out = bold(plain(study.title), style) + "\n";
        out += paragraph(
            fmt::format("{}; target {} ({} indicator{}); {}.", rows_in_words(outcome.survey), plain(study.target.text),
                        outcome.trial.unit.size(), outcome.trial.unit.size() == 1 ? "" : "s", splits_in_words(outcome)),
            style);
    }
    out += "\n" + bold("Ranking by held-out loss", style) + "\n" + ranked_table(outcome, style) + "\n" +
           paragraph(ranked_reading(outcome), style);
    if (outcome.verdict.pairs.end() != std::find_if(outcome.verdict.pairs.begin(), outcome.verdict.pairs.end(),
                                                    [](const PairReport& p) { return p.theories; }))
        out += "\n" + bold("Pairs of theories", style) + "\n" + pairs_table(outcome, style) + "\n" +
               paragraph(pairs_reading(outcome), style);
    out += "\n" + bold("Fit and prediction", style) + "\n" + fit_and_prediction(outcome, style);
    if (outcome.verdict.disagreement.present)
        out += "\n" + bold("Where the first two part", style) + "\n" + parting(outcome, style);
    if (study.verdict.completeness)
        out += "\n" + bold("How much there is to predict", style) + "\n" + completeness_table(outcome, style);
    if (!outcome.segments.empty()) out += "\n" + bold("Segments", style) + "\n" + segments_table(outcome, style);
    out += "\n" + bold("Verdict", style) + "\n" + verdict_in_words(outcome, style);
    out += paragraph(caution(), style);
    return out;
}

std::string write_advice(const std::vector<std::string>& advice, const TerminalStyle& style) {
    std::string out;
    for (const std::string& item : advice)
        out += wrap("advice: " + plain(item), static_cast<std::size_t>(style.width), 2) + "\n";
    return out;
}

}  // namespace rivalfold
