#include "rivalfold/verdict/advice.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <map>
#include <set>

namespace rivalfold {
namespace {

using Advice = std::vector<std::string>;

std::string quoted_list(const std::vector<std::string>& names) {
    std::string text;
    for (std::size_t i = 0; i < names.size(); ++i)
        text += fmt::format("{}\"{}\"", i == 0 ? "" : i + 1 == names.size() ? " and " : ", ", names[i]);
    return text;
}

void advise_products(const Study& study, Advice& advice) {
    for (std::size_t t = 0; t < study.theories.size(); ++t)
        for (const Equation& equation : study.theories[t].equations)
            for (const Term& term : equation.terms) {
                if (term.kind != TermKind::product && term.kind != TermKind::square) continue;
                std::vector<std::string> absent;
                for (const Name& member : term.members) {
                    const auto plain = [&](const Term& other) {
                        return other.kind == TermKind::score && other.members.front().text == member.text;
                    };
                    const bool control = equation.outcome.text == study.target.text &&
                                         std::any_of(study.controls.begin(), study.controls.end(),
                                                     [&](const Name& c) { return c.text == member.text; });
                    if (!control && std::none_of(equation.terms.begin(), equation.terms.end(), plain))
                        absent.push_back(member.text);
                }
                if (absent.empty()) continue;
                advice.push_back(
                    fmt::format("Theory \"{}\": {} stands without {} as {} of its own, so the result depends on where "
                                "the scales have their zero "
                                "(Schmidt 1973; Evans 1991). Add {}{}, unless the scales have a true zero.",
                                study.theories[t].name.text, describe(term), quoted_list(absent),
                                absent.size() > 1 ? "terms" : "a term", quoted_list(absent),
                                term.kind == TermKind::product ? ", or use {crossed: [...]}" : ""));
            }
}

struct Scale {
    double low = 0, high = 0;
    bool declared = false;
};

/// The declared range, else the smallest and largest value seen.
Scale scale_of(const Study& study, const Survey& survey, const Sample& sample, std::size_t theory,
               const std::string& name) {
    const Construct* construct = study.construct(theory, name);
    if (construct && construct->range) return {construct->range->first, construct->range->second, true};
    Scale scale{std::numeric_limits<double>::infinity(), -std::numeric_limits<double>::infinity(), false};
    const Measurement* measurement = survey.measurement(theory, name);
    for (const int v : measurement->variables) {
        scale.low = std::min(scale.low, sample.values.col(v).minCoeff() + sample.centre(v));
        scale.high = std::max(scale.high, sample.values.col(v).maxCoeff() + sample.centre(v));
    }
    return scale;
}

void advise_extremes(const Study& study, const Survey& survey, const Sample& sample, Advice& advice) {
    for (std::size_t t = 0; t < study.theories.size(); ++t)
        for (const Equation& equation : study.theories[t].equations)
            for (const Term& term : equation.terms) {
                if (term.kind != TermKind::minimum && term.kind != TermKind::maximum) continue;
                std::string ranges;
                bool unlike = false, undeclared = false;
                const Scale first = scale_of(study, survey, sample, t, term.members.front().text);
                for (const Name& member : term.members) {
                    const Scale scale = scale_of(study, survey, sample, t, member.text);
                    // Undeclared scales are known by the answers seen, where an end may by chance be missing.
                    const double slack = scale.declared && first.declared ? 1e-9 : 0.25;
                    const double width = std::max(scale.high - scale.low, first.high - first.low);
                    undeclared = undeclared || !scale.declared;
                    unlike = unlike || std::max(std::fabs(scale.low - first.low), std::fabs(scale.high - first.high)) >
                                           slack * width;
                    ranges += fmt::format("{}{} {:g} to {:g}", ranges.empty() ? "" : ", ", member.text, scale.low,
                                          scale.high);
                }
                if (!unlike) continue;
                advice.push_back(
                    fmt::format("Theory \"{}\": {} compares scores on unlike scales ({}){}. Bring the members to one "
                                "scale before reading it as the {} of them{}.",
                                study.theories[t].name.text, describe(term), ranges,
                                study.metric == Metric::standard
                                    ? "; under metric: standard it compares standings within this sample, not amounts"
                                    : "; the smaller unit decides which one it picks",
                                term.kind == TermKind::minimum ? "scarcest" : "strongest",
                                undeclared ? ", or declare their range if it is the same" : ""));
            }
}

void advise_measurement(const Study& study, const Survey& survey, const Trial& trial, Advice& advice) {
    std::set<std::string> said;
    const auto say = [&](std::string text) {
        if (said.insert(text).second) advice.push_back(std::move(text));
    };
    for (std::size_t t = 0; t < trial.theories.size(); ++t) {
        const Blueprint& plan = trial.theories[t]->blueprint();
        for (std::size_t b = 0; b < plan.blocks.size(); ++b) {
            const Block& block = plan.blocks[b];
            if (block.is_level()) continue;
            const Construct* declared = study.construct(t, block.construct);
            if (block.columns.size() == 1 && declared && declared->weights_given &&
                (block.weights == Weights::mode_a || block.weights == Weights::mode_b))
                say(
                    fmt::format("Construct \"{}\" has one indicator, so weights: {} has nothing to weigh and its "
                                "measurement error counts in full. Add indicators if you have them.",
                                block.construct, word(block.weights)));
            if (trial.whole[t].failed || block.columns.size() == 1) continue;
            std::vector<std::string> negative;
            for (std::size_t h = 0; h < block.columns.size(); ++h)
                if (trial.whole[t].fit.loadings[b](static_cast<Eigen::Index>(h)) < 0)
                    negative.push_back(survey.variables[static_cast<std::size_t>(block.columns[h])].column);
            if (!negative.empty())
                say(
                    fmt::format("Construct \"{}\" has loadings of mixed sign: {} run{} against the others. List {} "
                                "under reversed if worded the other way round, else drop {}.",
                                block.construct, quoted_list(negative), negative.size() > 1 ? "" : "s",
                                negative.size() > 1 ? "them" : "it", negative.size() > 1 ? "them" : "it"));
        }
    }
}

// The commonest value is looked for among at most 20,000 evenly spaced rows, then counted among all.
void advise_constant(const Survey& survey, const Sample& sample, Advice& advice) {
    constexpr double kNearlyAll = 0.95;  // common practice, no source
    const Eigen::Index step = std::max<Eigen::Index>(1, sample.n / 20000);
    for (int v = 0; v < sample.n_variables; ++v) {
        std::map<double, std::size_t> counts;
        for (Eigen::Index i = 0; i < sample.n && counts.size() <= 100; i += step) ++counts[sample.values(i, v)];
        const auto commonest = std::max_element(counts.begin(), counts.end(),
                                                [](const auto& a, const auto& b) { return a.second < b.second; });
        const double share = static_cast<double>((sample.values.col(v).array() == commonest->first).count()) /
                             static_cast<double>(sample.n);
        if (share >= kNearlyAll)
            advice.push_back(
                fmt::format("Column \"{}\" is nearly constant: {:.0f}% of the rows used share one value. It carries "
                            "little information and can fail in a fold; consider dropping it.",
                            survey.variables[static_cast<std::size_t>(v)].column, std::floor(100 * share)));
    }
}

void advise_size(const Survey& survey, const FoldPlan& plan, const Trial& trial, Advice& advice) {
    const std::size_t training = plan.smallest_training();
    for (const auto& theory : trial.theories) {
        const std::size_t coefficients = theory->blueprint().target_plan().columns.size() + 1;
        if (training < 10 * coefficients)
            advice.push_back(fmt::format(
                "Theory \"{}\": {} training rows for {} coefficients of the target's equation; fewer than about 10 "
                "rows per coefficient make them unstable (common practice). Use more rows or fewer terms.",
                theory->name(), training, coefficients));
    }
    if (trial.benchmark_predictors.size() >= training)
        advice.push_back(fmt::format(
            "The linear benchmark has {} predictors but a fold trains on only {} rows: it fits its training rows "
            "exactly, and how well it then predicts is chance. Judge the theories by the training mean.",
            trial.benchmark_predictors.size(), training));
    if (survey.n() < 30)
        advice.push_back(
            fmt::format("Only {} rows: with fewer than about 30 no test or interval here can be trusted (common "
                        "practice). Collect more before claiming anything.",
                        survey.n()));
    if (!survey.clusters.empty() && survey.cluster_names.size() < 10)
        advice.push_back(fmt::format(
            "Only {} clusters: tests by cluster need about 10 or more to be trusted. Read the intervals as rough.",
            survey.cluster_names.size()));
}

/// Terms that the others determine, by name where all rows show them.
std::string dependent_terms(const Trial& trial, std::size_t theory) {
    const Blueprint& plan = trial.theories[theory]->blueprint();
    std::vector<std::string> names;
    if (!trial.whole[theory].failed)
        for (std::size_t e = 0; e < plan.equations.size(); ++e) {
            const EquationFit& fitted = trial.whole[theory].fit.equations[e];
            for (const Eigen::Index position : fitted.solution.dependent())
                names.push_back(
                    plan.equations[e]
                        .columns[static_cast<std::size_t>(fitted.active[static_cast<std::size_t>(position)])]
                        .label);
        }
    if (names.empty()) return "Some levels or answers are too rare for the folds: merge levels, or use more folds";
    return fmt::format("The other terms determine {}: leave {} out", quoted_list(names),
                       names.size() > 1 ? "them" : "it");
}

/// Products of raw scores whose origin lies far off lose their digits to it.
void advise_origin(const Trial& trial, Advice& advice) {
    constexpr double kFar = 1e4;
    std::set<std::string> said;
    for (std::size_t t = 0; t < trial.theories.size(); ++t) {
        const Blueprint& plan = trial.theories[t]->blueprint();
        if (plan.metric != Metric::response || trial.whole[t].failed) continue;
        for (const EquationPlan& equation : plan.equations)
            for (const DesignColumn& column : equation.columns)
                for (const int block : column.blocks) {
                    const ScoreMap& score = trial.whole[t].fit.scores[static_cast<std::size_t>(block)];
                    const std::string& name = plan.blocks[static_cast<std::size_t>(block)].construct;
                    if (column.kind == TermKind::score || std::fabs(score.mean) < kFar * score.sd ||
                        !said.insert(name).second)
                        continue;
                    advice.push_back(fmt::format(
                        "Construct \"{}\": its mean is {:.0e} times its spread, so products of it under metric: "
                        "response lose their digits. Subtract a constant from its columns, or use metric: standard.",
                        name, std::fabs(score.mean) / score.sd));
                }
    }
}

/// Cells that rows: mean will fill.
void advise_filled(const Survey& survey, const Sample& sample, Advice& advice) {
    for (std::size_t g = 0; g < sample.gappy.size(); ++g) {
        const double share = sample.gaps.col(static_cast<Eigen::Index>(g)).mean();
        if (share >= 0.05)
            advice.push_back(
                fmt::format("Column \"{}\": {:.0f}% of its cells are missing and are filled with the training mean, "
                            "which weakens what it can show. Compare with rows: drop.",
                            survey.variables[static_cast<std::size_t>(sample.gappy[g])].column, 100 * share));
    }
}

void advise_twins(const Trial& trial, Advice& advice) {
    const auto identity = [&](std::size_t t) {
        std::multiset<std::string> terms;
        for (const DesignColumn& column : trial.theories[t]->blueprint().target_plan().columns)
            terms.insert(column.identity);
        return terms;
    };
    for (std::size_t a = 0; a < trial.theories.size(); ++a)
        for (std::size_t b = a + 1; b < trial.theories.size(); ++b)
            if (identity(a) == identity(b))
                advice.push_back(
                    fmt::format("Theories \"{}\" and \"{}\" have the same equation for the target. They can differ "
                                "only through their other equations; drop one, or set trial: {{mediators: predicted}} "
                                "if their chains are meant to compete.",
                                trial.theories[a]->name(), trial.theories[b]->name()));
}

}  // namespace

std::vector<std::string> advise_on_study(const Study& study, const Survey& survey, const Sample& sample,
                                         const FoldPlan& plan, const Trial& trial) {
    Advice advice = survey.advice;
    advice.insert(advice.end(), plan.advice.begin(), plan.advice.end());
    advise_products(study, advice);
    advise_extremes(study, survey, sample, advice);
    advise_measurement(study, survey, trial, advice);
    advise_constant(survey, sample, advice);
    advise_size(survey, plan, trial, advice);
    advise_twins(trial, advice);
    advise_origin(trial, advice);
    advise_filled(survey, sample, advice);
    for (std::size_t t = 0; t < trial.whole.size(); ++t)
        if (trial.whole[t].failed)
            advice.push_back(fmt::format("Theory \"{}\" cannot be fitted to all rows used: {}.",
                                         trial.theories[t]->name(), trial.whole[t].reason));
    return advice;
}

std::vector<std::string> advise_on_outcome(const Study& study, const Survey&, const FoldPlan& plan, const Trial& trial,
                                           const Verdict& verdict) {
    Advice advice;
    const std::size_t training = plan.smallest_training();
    const std::size_t mean = trial.theories.size(), linear = mean + 1;
    const int splits = trial.repeats * trial.folds;
    if (study.trial.auto_repeats && plan.repeats >= 200)
        advice.push_back(
            "repeats: auto stopped at 200 before the splits' own error was a tenth of the sampling error for every "
            "pair; read monte_carlo_se in pairs.csv beside the standard errors.");
    for (const std::size_t c : verdict.order) {
        const ContestantLosses& losses = trial.contestants[c];
        if (losses.is_theory) {
            if (losses.loss >= trial.contestants[mean].loss)
                advice.push_back(
                    fmt::format("Theory \"{}\" predicts no better than the mean (q2 {:.3f}): knowing its antecedents "
                                "does not help to predict new rows.",
                                losses.name, losses.q2));
            else if (losses.loss > trial.contestants[linear].loss + 1e-9 * trial.loss_scale() &&
                     trial.benchmark_predictors.size() < training)
                advice.push_back(
                    fmt::format("Theory \"{}\" predicts no better than the plain linear benchmark (loss {:.4f} against "
                                "{:.4f}): its structure and weighting lose information that the indicators hold.",
                                losses.name, losses.loss, trial.contestants[linear].loss));
        }
        if (losses.rank_deficient_splits > 0 && losses.is_theory)
            advice.push_back(
                fmt::format("Theory \"{}\": the terms are linearly dependent in {} of {} splits; the smallest-norm "
                            "solution was used. {}.",
                            losses.name, losses.rank_deficient_splits, splits, dependent_terms(trial, c)));
        if (losses.unseen_level_splits > 0)
            advice.push_back(
                fmt::format("\"{}\": some category level had no training row in {} of {} splits; its held-out rows "
                            "were predicted as if at the first level. Merge rare levels.",
                            losses.name, losses.unseen_level_splits, splits));
    }
    return advice;
}

double cronbach_alpha(const Sample& sample, const std::vector<int>& variables) {
    const auto k = static_cast<double>(variables.size());
    if (variables.size() < 2) return std::numeric_limits<double>::quiet_NaN();
    std::vector<Eigen::Index> complete;
    for (Eigen::Index i = 0; i < sample.n; ++i) {
        const bool gap = std::any_of(variables.begin(), variables.end(), [&](int v) {
            const int g = sample.gap_of[static_cast<std::size_t>(v)];
            return g >= 0 && sample.gaps(i, g) > 0;
        });
        if (!gap) complete.push_back(i);
    }
    const auto variance = [&](const Eigen::VectorXd& x) { return (x.array() - x.mean()).square().sum(); };
    Eigen::VectorXd total = Eigen::VectorXd::Zero(static_cast<Eigen::Index>(complete.size()));
    double parts = 0;
    for (const int v : variables) {
        const Eigen::VectorXd x = sample.values.col(v)(complete);
        total += x;
        parts += variance(x);
    }
    return k / (k - 1) * (1 - parts / variance(total));
}

}  // namespace rivalfold
