#include "report/numbers.hpp"
#include "report/readings.hpp"

#include <fmt/format.h>

namespace rivalfold {

void write_table_md(const Outcome& outcome, const Sink& sink) {
    sink(
        "| Rank | Theory | Loss | RMSE | MAE | Q² | Fit (in sample) | R² (in sample) | ΔBIC | p (set) | Verdict |\n"
        "| ---: | :--- | ---: | ---: | ---: | ---: | ---: | ---: | ---: | ---: | :--- |\n");
    const auto line = [&](std::size_t c) {
        const ContestantLosses& losses = outcome.trial.contestants[c];
        const TheoryReport* theory = losses.is_theory ? &outcome.verdict.theories[c] : nullptr;
        const auto held = [&](double value, int decimals) {
            return losses.failed ? std::string("-") : fixed(value, decimals);
        };
        std::string in_sample = "| | | | | benchmark |";
        if (theory)
            in_sample = fmt::format("| {} | {} | {} | {} | {} |", held(theory->explained, 3),
                                    fixed(theory->fitted.r2, 3), fixed(theory->bic_difference, 1),
                                    losses.failed ? "-" : p_text(theory->p_set_max), markdown_cell(theory->verdict));
        sink(fmt::format(
            "| {} | {} | {} | {} | {} | {} {}\n", theory && theory->rank > 0 ? std::to_string(theory->rank) : "",
            theory ? markdown_cell(losses.name) : "*" + markdown_cell(losses.name) + "*", held(losses.loss, 4),
            held(losses.rmse, 4), held(losses.mae, 4), held(losses.q2, 3), in_sample));
    };
    for (const std::size_t c : outcome.verdict.order) line(c);
    for (std::size_t c = 0; c < outcome.trial.contestants.size(); ++c)
        if (outcome.trial.contestants[c].failed) line(c);
    sink(
        fmt::format("\n*Note.* {} rows used; {}. {} R²: share of the target score's variance in the fitted "
                    "sample.\n\n{}\n\n{}\n\n{}\n",
                    outcome.survey.n(), markdown_cell(splits_in_words(outcome)), markdown_cell(ranked_reading(outcome)),
                    markdown_cell(outcome.verdict.headline), markdown_cell(methods_text(outcome)), caution()));
}

}  // namespace rivalfold
