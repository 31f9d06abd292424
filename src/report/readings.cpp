#include "report/readings.hpp"

#include "report/numbers.hpp"
#include "report/text_table.hpp"

#include <fmt/format.h>

namespace rivalfold {

std::string bold(const std::string& text, const TerminalStyle& style) {
    return style.colour ? "\x1b[1m" + text + "\x1b[0m" : text;
}

std::string paragraph(std::string_view text, const TerminalStyle& style) {
    return wrap(text, static_cast<std::size_t>(style.width), 0) + "\n";
}

std::string splits_in_words(const Outcome& outcome) {
    const bool alone = static_cast<std::size_t>(outcome.plan.folds) ==
                       (outcome.survey.clusters.empty() ? outcome.survey.n() : outcome.survey.cluster_names.size());
    const std::string units = outcome.survey.clusters.empty() ? "rows"
                                                              : fmt::format("whole clusters (\"{}\", {} of them)",
                                                                            plain(outcome.study.data.cluster->text),
                                                                            outcome.survey.cluster_names.size());
    const std::string from = outcome.study.trial.folds_file
                                 ? fmt::format("from {}", plain(outcome.study.trial.folds_file->text))
                                 : fmt::format("seed {}", outcome.study.trial.seed);
    if (alone)
        return fmt::format("leave one {} out ({} splits), {}", outcome.survey.clusters.empty() ? "row" : "cluster",
                           outcome.plan.folds, from);
    return fmt::format("{} repeat{}{} of {} folds of {}, {}", outcome.plan.repeats,
                       outcome.plan.repeats == 1 ? "" : "s", outcome.study.trial.auto_repeats ? " (auto)" : "",
                       outcome.plan.folds, units, from);
}

std::string rows_in_words(const Survey& survey) {
    const std::size_t dropped = survey.rows_read - survey.n();
    return fmt::format("{} rows read, {} used{}", survey.rows_read, survey.n(),
                       dropped > 0 ? fmt::format(", {} left out", dropped) : "");
}

std::string ranked_reading(const Outcome& outcome) {
    const bool squared = outcome.study.trial.loss == Loss::squared;
    std::string text = fmt::format(
        "Loss: mean {} error of held-out rows, each target indicator in units of its own standard deviation; smaller "
        "is better. rmse, mae: the same errors in those units. "
        "q2: share of the training mean's squared error that is avoided; 1 is perfect, 0 or less no better than the "
        "mean. fit: the same share for the rows that were fitted; dBIC: "
        "BIC above the smallest; both describe the sample, not new rows. p set: p in the model confidence set; above "
        "{:g} it may be the best. "
        "* marks a benchmark: beating the training mean shows that there is something to predict; a theory behind the "
        "linear benchmark wastes what the indicators hold.",
        squared ? "squared" : "absolute", outcome.study.verdict.level);
    if (outcome.study.trial.mediators == Mediators::predicted)
        text += " loss, q2 and fit use predicted mediators; BIC measured ones.";
    if (outcome.verdict.several_targets)
        text +=
            " The theories weight the target's indicators differently, so their BIC describes slightly different "
            "target scores; held-out losses do not suffer from that.";
    return text;
}

std::string pairs_reading(const Outcome& outcome) {
    return fmt::format(
        "diff: loss of the first minus loss of the second, as % of the second's loss (negative: the first predicts "
        "better), with the wider of the two tests' {:.4g}% intervals. "
        "p rows: paired test over {}; p folds: corrected repeated k-fold test; p Holm: the larger of both, adjusted "
        "for the number of pairs. One is called better only if p Holm is "
        "below {:g}; equal means: surely within {:.4g}% of each other.",
        100 * (1 - outcome.study.verdict.level), outcome.survey.clusters.empty() ? "rows" : "clusters",
        outcome.study.verdict.level, 100 * outcome.study.verdict.margin);
}

std::string_view caution() {
    return "What this cannot show: a survey is not an experiment and prediction is not causation, so none of this says "
           "that changing an antecedent would change the outcome. "
           "Decisions about individual people need qualified review and local rules.";
}

}  // namespace rivalfold
