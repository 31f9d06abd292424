#include "report/numbers.hpp"
#include "report/readings.hpp"
#include "report/text_table.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <limits>

namespace rivalfold {
namespace {

const Theory& theory_of(const Study& study, const std::string& name) {
    return *std::find_if(study.theories.begin(), study.theories.end(),
                         [&](const Theory& theory) { return theory.name.text == name; });
}

}  // namespace

std::string write_plan(const Outcome& outcome, const TerminalStyle& style) {
    const Study& study = outcome.study;
    const auto width = static_cast<std::size_t>(style.width);
    std::string out =
        bold(plain(study.title), style) + "\n" +
        wrap(fmt::format("data: {}, {}", plain(study.data.file.text), rows_in_words(outcome.survey)), width, 2) + "\n";
    for (const Dropped& dropped : outcome.survey.dropped) {
        std::string rows;
        for (std::size_t i = 0; i < std::min<std::size_t>(8, dropped.rows.size()); ++i)
            rows += fmt::format("{}{}", i > 0 ? ", " : "", dropped.rows[i]);
        if (dropped.rows.size() > 8) rows += ", ...";
        out += "  " +
               wrap(fmt::format("left out: {} row{}, {} (row{} {})", dropped.rows.size(),
                                dropped.rows.size() == 1 ? "" : "s", plain(dropped.reason),
                                dropped.rows.size() == 1 ? "" : "s", rows),
                    width - 2, 4) +
               "\n";
    }
    out += wrap("splits: " + splits_in_words(outcome), width, 2) +
           fmt::format("\n  trains on at least {} rows a split\n", outcome.plan.smallest_training());
    out += "\n" + bold("Constructs", style) + "\n";
    TextTable constructs(
        {{"construct", true}, {"as measured by", true}, {"indicators", false}, {"weights", true}, {"alpha", false}});
    for (const Measurement& m : outcome.survey.measurements) {
        if (!m.used) continue;
        const std::string by =
            m.theory == Measurement::kEveryTheory ? "every theory" : plain(study.theories[m.theory].name.text);
        if (m.category >= 0) {
            const Category& category = outcome.survey.categories[static_cast<std::size_t>(m.category)];
            constructs.add({plain(m.construct), by, fmt::format("{} levels", category.levels.size()), "category", ""});
            continue;
        }
        double alpha = std::numeric_limits<double>::quiet_NaN();
        for (const Reliability& r : outcome.reliabilities)
            if (r.construct == m.construct && (r.theory.empty() ? m.theory == Measurement::kEveryTheory
                                                                : m.theory != Measurement::kEveryTheory &&
                                                                      r.theory == study.theories[m.theory].name.text))
                alpha = r.alpha;
        constructs.add({plain(m.construct), by, std::to_string(m.variables.size()),
                        m.variables.size() == 1 ? "single" : word(m.weights), fixed(alpha, 3)});
    }
    out += constructs.render(width);
    out += wrap(
               "alpha: Cronbach's reliability of the indicators as keyed; above .7 is common practice (Nunnally 1978). "
               "A single indicator has none.",
               width, 0) +
           "\n";
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

}  // namespace rivalfold
