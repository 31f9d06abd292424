#include "rivalfold/report/writers.hpp"

#include <fmt/format.h>

namespace rivalfold {

std::string methods_text(const Outcome& outcome) {
    const Study& study = outcome.study;
    const bool clusters = !outcome.survey.clusters.empty();
    std::string text = fmt::format(
        "Held-out prediction of \"{}\" over {} repeats of {} folds of {} ({}), {} rows; {} loss in units of each "
        "indicator's standard deviation; mediators {}; metric {}. ",
        study.target.text, outcome.plan.repeats, outcome.plan.folds, clusters ? "whole clusters" : "rows",
        study.trial.folds_file ? "splits from a file" : fmt::format("seed {}", study.trial.seed), outcome.survey.n(),
        word(study.trial.loss), word(study.trial.mediators), word(study.metric));
    text +=
        "Composite scores by the weights of the study file (path weighting: Wold 1982; Lohmöller 1989), equations by "
        "least squares, everything from the training rows. ";
    if (study.data.rows == RowRule::mean) text += "Missing predictor answers were filled with the training mean. ";
    text += fmt::format(
        "Pairs: paired test over {} and corrected repeated k-fold test (Nadeau & Bengio 2003; Bouckaert & Frank 2004); "
        "one theory is called better only if both reject at {:g} "
        "after Holm's (1979) adjustment, practically equal if the {:g}% interval lies within {:g}% of the smaller loss "
        "(Schuirmann 1987); a winner must beat every rival (Berger 1982); "
        "otherwise the model confidence set (Hansen, Lunde & Nason 2011; {} bootstrap resamples of {}). ",
        clusters ? "clusters (Liang & Zeger 1986)" : "rows", study.verdict.level, 100 * (1 - 2 * study.verdict.level),
        100 * study.verdict.margin, outcome.verdict.set.resamples, clusters ? "clusters" : "rows");
    text +=
        "Nested pairs: Clark & West (2007). Encompassing: Harvey, Leybourne & Newbold (1998). Stack: Breiman (1996); "
        "both from squared errors. ";
    if (!outcome.segments.empty())
        text += "Segments: differences of differences with Welch's (1947) degrees of freedom, Holm over all. ";
    if (study.verdict.completeness)
        text +=
            "Completeness: Fudenberg, Kleinberg, Liang & Mullainathan (2022); restrictiveness: Fudenberg, Gao & Liang "
            "(2023). ";
    return text + fmt::format("Computed with rivalfold {}.", outcome.run.version);
}

}  // namespace rivalfold
