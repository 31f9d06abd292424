#include "rivalfold/report/writers.hpp"

#include <nlohmann/json.hpp>

#include <cmath>

namespace rivalfold {
namespace {

using Json = nlohmann::ordered_json;

/// Numbers that do not exist become null; the reason stands beside them.
Json number(double value) { return std::isfinite(value) ? Json(value) : Json(nullptr); }

Json heldout(const ContestantLosses& losses) {
    if (losses.failed) return nullptr;
    Json indicators = Json::array();
    for (const IndicatorErrors& errors : losses.indicators) {
        Json one = {{"name", errors.name},
                    {"rmse", number(errors.rmse)},
                    {"mae", number(errors.mae)},
                    {"mape", number(errors.mape)},
                    {"q2", number(errors.q2)}};
        if (std::isnan(errors.mape)) one["reason"] = "mape: an actual value is 0";
        indicators.push_back(std::move(one));
    }
    return {{"loss", number(losses.loss)},
            {"rmse", number(losses.rmse)},
            {"mae", number(losses.mae)},
            {"q2", number(losses.q2)},
            {"indicators", std::move(indicators)}};
}

Json equations(const TheoryReport& theory) {
    Json list = Json::array();
    for (const EquationReport& equation : theory.equations) {
        Json terms = Json::array();
        for (const TermReport& term : equation.terms) {
            Json one = {{"term", term.term},     {"coefficient", number(term.coefficient)},
                        {"se", number(term.se)}, {"t", number(term.t)},
                        {"p", number(term.p)},   {"f2", number(term.f2)}};
            if (!term.reason.empty()) one["reason"] = term.reason;
            terms.push_back(std::move(one));
        }
        list.push_back({{"outcome", equation.outcome}, {"r2", number(equation.r2)}, {"terms", std::move(terms)}});
    }
    return list;
}

Json weights(const TheoryReport& theory) {
    Json list = Json::array();
    for (const ConstructWeights& construct : theory.weights) {
        Json indicators = Json::array();
        for (const IndicatorWeight& indicator : construct.indicators)
            indicators.push_back({{"name", indicator.name},
                                  {"weight", number(indicator.weight)},
                                  {"loading", number(indicator.loading)}});
        list.push_back({{"construct", construct.construct}, {"indicators", std::move(indicators)}});
    }
    return list;
}

std::string why_not(const TheoryReport& theory) {
    const InSample& in = theory.fitted;
    if (!std::isfinite(in.r2)) return theory.criteria.reason;
    if (std::isfinite(in.f) && std::isfinite(in.adjusted_r2)) return {};
    if (in.f_df2 <= 0) return "no residual degrees of freedom";
    return in.f_df1 <= 0 ? "the equation has no terms that vary" : "the equation fits every row exactly";
}

Json fitted(const TheoryReport& theory) {
    const InSample& in = theory.fitted;
    Json out = {{"r2", number(in.r2)},   {"adjusted_r2", number(in.adjusted_r2)},
                {"sse", number(in.sse)}, {"coefficients_count", in.coefficients},
                {"f", number(in.f)},     {"f_df", {number(in.f_df1), number(in.f_df2)}},
                {"f_p", number(in.f_p)}};
    if (const std::string reason = why_not(theory); !reason.empty()) out["reason"] = reason;
    return out;
}

Json criteria(const Criteria& c) {
    Json out = {{"aic", number(c.aic)}, {"aicc", number(c.aicc)}, {"bic", number(c.bic)},
                {"hq", number(c.hq)},   {"gm", number(c.gm)},     {"bic_weight", number(c.bic_weight)}};
    if (!c.reason.empty()) out["reason"] = c.reason;
    return out;
}

Json paired_test(const PairedTest& test, double loss_b) {
    Json out = {{"se", number(test.se)},
                {"t", number(test.t)},
                {"df", number(test.df)},
                {"p", number(test.p)},
                {"p_holm", number(test.p_holm)},
                {"low", number(test.low)},
                {"high", number(test.high)},
                {"relative_low", number(test.low / loss_b)},
                {"relative_high", number(test.high / loss_b)}};
    if (!test.reason.empty()) out["reason"] = test.reason;
    return out;
}

Json data(const Outcome& outcome) {
    Json dropped = Json::array();
    for (const Dropped& drop : outcome.survey.dropped)
        dropped.push_back({{"reason", drop.reason}, {"rows", drop.rows}});
    Json out = {{"file", outcome.study.data.file.text},
                {"sha256", outcome.survey.sha256},
                {"rows_read", outcome.survey.rows_read},
                {"rows_used", outcome.survey.n()},
                {"dropped", std::move(dropped)}};
    for (std::size_t g = 0; g < outcome.sample->gappy.size(); ++g)
        out["filled"].push_back(
            {{"name", outcome.survey.variables[static_cast<std::size_t>(outcome.sample->gappy[g])].column},
             {"cells", static_cast<std::size_t>(outcome.sample->gaps.col(static_cast<Eigen::Index>(g)).sum())}});
    return out;
}

Json theory(const Outcome& outcome, const TheoryReport& report) {
    const ContestantLosses& losses = outcome.trial.contestants[report.contestant];
    Json out = {{"name", losses.name},
                {"claim", outcome.trial.theories[report.contestant]->blueprint().claim},
                {"rank", report.rank > 0 ? Json(report.rank) : Json(nullptr)}};
    if (losses.failed) out["failed"] = losses.reason;
    out["heldout"] = heldout(losses);
    out["fitted"] = fitted(report);
    out["criteria"] = criteria(report.criteria);
    out["equations"] = equations(report);
    out["weights"] = weights(report);
    out["explained"] = number(report.explained);
    out["first_share"] = losses.failed ? Json(nullptr) : number(report.first_share);
    out["confidence_set"] =
        losses.failed
            ? Json(nullptr)
            : Json({{"p_range", report.p_set_range}, {"p_max", report.p_set_max}, {"shortlisted", report.shortlisted}});
    out["optimism"] = report.optimism;
    out["verdict"] = report.verdict;
    return out;
}

Json one_sided(const OneSidedTest& test) {
    Json out = {{"t", number(test.t)}, {"df", test.df > 0 ? Json(test.df) : Json("normal")}, {"p", number(test.p)}};
    if (!test.reason.empty()) out["reason"] = test.reason;
    return out;
}

Json pair_of(const Outcome& outcome, const PairReport& pair) {
    const ContestantLosses& b = outcome.trial.contestants[pair.b];
    Json out = {{"a", outcome.trial.contestants[pair.a].name}, {"b", b.name},
                {"difference", number(pair.difference)},       {"relative", number(pair.relative)},
                {"rows", paired_test(pair.rows, b.loss)},      {"corrected", paired_test(pair.corrected, b.loss)}};
    out["both"] = {
        {"p", number(pair.p)}, {"p_holm", number(pair.p_holm)}, {"low", number(pair.low)}, {"high", number(pair.high)}};
    if (const std::string& reason = pair.rows.reason.empty() ? pair.corrected.reason : pair.rows.reason;
        !reason.empty())
        out["both"]["reason"] = reason;
    out["monte_carlo_se"] = number(pair.monte_carlo_se);
    if (std::isnan(pair.monte_carlo_se)) out["reason"] = "monte_carlo_se: one repeat has no spread";
    if (pair.theories)
        out["encompassing"] = {{"a_knows_more", one_sided(pair.a_knows_more)},
                               {"b_knows_more", one_sided(pair.b_knows_more)}};
    if (pair.inner)
        out["nested"] = {{"inner", outcome.trial.contestants[*pair.inner].name},
                         {"extra_terms", one_sided(pair.extra_terms)},
                         {"words", pair.nested_words}};
    out["verdict"] = word(pair.outcome);
    return out;
}

Json stack(const Outcome& outcome) {
    const StackReport& report = outcome.verdict.stack;
    if (!report.present) return nullptr;
    Json weights = Json::array();
    for (std::size_t t = 0; t < report.weights.size(); ++t)
        weights.push_back({{"name", outcome.trial.contestants[t].name}, {"weight", report.weights[t]}});
    const double best = report.loss - report.difference;
    Json rows = paired_test(report.rows, best), corrected = paired_test(report.corrected, best);
    rows.erase("p_holm");  // one comparison: nothing to adjust for
    corrected.erase("p_holm");
    return {{"loss", report.loss},
            {"weights", std::move(weights)},
            {"difference", report.difference},
            {"relative", report.relative},
            {"rows", std::move(rows)},
            {"corrected", std::move(corrected)},
            {"complementary", report.complementary},
            {"words", report.words}};
}

Json disagreement(const Outcome& outcome) {
    const Disagreement& d = outcome.verdict.disagreement;
    if (!d.present)
        return {{"reason", "fewer than two theories were judged, or the two best make the same predictions"}};
    Json thirds = Json::array();
    for (const Disagreement::Third& third : d.thirds) {
        Json one = {{"along", third.along}, {"third", third.third},           {"from", third.from},    {"to", third.to},
                    {"rows", third.rows},   {"difference", third.difference}, {"se", number(third.se)}};
        if (std::isnan(third.se)) one["reason"] = "all rows of this third lie in one cluster";
        thirds.push_back(std::move(one));
    }
    return {{"first", outcome.trial.contestants[d.first].name},
            {"second", outcome.trial.contestants[d.second].name},
            {"thirds", std::move(thirds)}};
}

Json completeness(const Outcome& outcome) {
    const CompletenessReport& report = outcome.completeness;
    Json theories = Json::array();
    for (const TheoryCompleteness& theory : report.theories) {
        Json one = {{"name", outcome.trial.contestants[theory.contestant].name},
                    {"completeness", number(theory.completeness)},
                    {"low", number(theory.low)},
                    {"high", number(theory.high)},
                    {"restrictiveness", number(theory.restrictiveness)},
                    {"restrictiveness_se", number(theory.restrictiveness_se)}};
        if (!theory.reason.empty()) one["reason"] = theory.reason;
        theories.push_back(std::move(one));
    }
    Json out = {{"rows", report.rows},
                {"subsample", report.subsample},
                {"loss_mean", number(report.loss_mean)},
                {"loss_flexible", number(report.loss_flexible)},
                {"q2_flexible", number(report.q2_flexible)},
                {"antecedents", report.antecedents},
                {"theories", std::move(theories)}};
    if (!report.note.empty()) out["reason"] = report.note;
    return out;
}

Json reversals(const Outcome& outcome) {
    Json list = Json::array();
    for (const Reversal& r : outcome.reversals) {
        Json one = {{"a", outcome.trial.contestants[r.a].name},
                    {"b", outcome.trial.contestants[r.b].name},
                    {"first", outcome.segments[r.first].segment_name},
                    {"second", outcome.segments[r.second].segment_name},
                    {"difference_first", number(r.difference_first)},
                    {"difference_second", number(r.difference_second)},
                    {"difference", number(r.difference)},
                    {"se", number(r.se)},
                    {"t", number(r.t)},
                    {"df", number(r.df)},
                    {"p", number(r.p)},
                    {"p_holm", number(r.p_holm)},
                    {"low", number(r.low)},
                    {"high", number(r.high)}};
        if (!r.reason.empty()) one["reason"] = r.reason;
        list.push_back(std::move(one));
    }
    return list;
}

Json whole_object(const Outcome& outcome) {
    const Study& study = outcome.study;
    const Trial& trial = outcome.trial;
    Json json = {{"rivalfold", outcome.run.version}, {"schema", 1}, {"study", study.title}};
    if (!outcome.segment_name.empty()) json["segment"] = outcome.segment_name;
    json["data"] = data(outcome);
    json["trial"] = {{"folds", trial.folds},
                     {"repeats", trial.repeats},
                     {"seed", study.trial.folds_file ? Json(nullptr) : Json(study.trial.seed)},
                     {"loss", word(study.trial.loss)},
                     {"mediators", word(study.trial.mediators)},
                     {"metric", word(study.metric)}};
    if (study.trial.auto_repeats) json["trial"]["auto_repeats"] = true;
    if (study.trial.folds_file) json["trial"]["folds_file"] = study.trial.folds_file->text;
    json["theories"] = Json::array();
    for (const TheoryReport& report : outcome.verdict.theories) json["theories"].push_back(theory(outcome, report));
    json["benchmarks"] = Json::array();
    for (const ContestantLosses& losses : trial.contestants)
        if (!losses.is_theory) json["benchmarks"].push_back({{"name", losses.name}, {"heldout", heldout(losses)}});
    json["pairs"] = Json::array();
    for (const PairReport& pair : outcome.verdict.pairs) json["pairs"].push_back(pair_of(outcome, pair));
    json["confidence_set"] = {{"resamples", outcome.verdict.set.resamples}, {"grouped", outcome.verdict.set.grouped}};
    json["stack"] = stack(outcome);
    json["disagreement"] = disagreement(outcome);
    if (study.verdict.completeness) json["completeness"] = completeness(outcome);
    json["winner"] = outcome.verdict.winner ? Json(trial.contestants[*outcome.verdict.winner].name) : Json(nullptr);
    json["verdict"] = outcome.verdict.headline;
    if (!outcome.segments.empty()) {
        json["segments"] = Json::array();
        for (const Outcome& segment : outcome.segments) json["segments"].push_back(whole_object(segment));
        json["reversals"] = reversals(outcome);
    }
    json["methods"] = methods_text(outcome);
    json["advice"] = outcome.advice;
    if (outcome.segment_name.empty()) json["caution"] = caution();
    return json;
}

void emit(const Json& json, const Sink& sink) {
    sink(json.dump(1, ' ', false, Json::error_handler_t::replace));
    sink("\n");
}

}  // namespace

void write_results_json(const Outcome& outcome, const Sink& sink) { emit(whole_object(outcome), sink); }

void write_manifest_json(const Outcome& outcome, const Sink& sink) {
    Json json = {{"rivalfold", outcome.run.version},
                 {"schema", 1},
                 {"study", {{"file", outcome.study.path}, {"sha256", outcome.run.study_sha256}}},
                 {"data", {{"file", outcome.study.data.file.text}, {"sha256", outcome.survey.sha256}}},
                 {"seed", outcome.study.trial.folds_file ? Json(nullptr) : Json(outcome.study.trial.seed)},
                 {"started", outcome.run.started},
                 {"seconds", outcome.run.seconds},
                 {"threads", outcome.run.threads}};
    if (outcome.study.verdict.completeness) json["completeness_seconds"] = outcome.completeness.seconds;
    emit(json, sink);
}

}  // namespace rivalfold
