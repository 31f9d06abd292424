#include "report/numbers.hpp"
#include "rivalfold/report/writers.hpp"

#include <charconv>
#include <numeric>

namespace rivalfold {
namespace {

using Cells = std::vector<std::string>;

void put(const Cells& cells, const Sink& sink) {
    std::string line;
    for (std::size_t i = 0; i < cells.size(); ++i) line += (i > 0 ? "," : "") + cells[i];
    sink(line + "\n");
}

/// Contestants in table order, failed theories last.
std::vector<std::size_t> table_order(const Outcome& outcome) {
    std::vector<std::size_t> order = outcome.verdict.order;
    for (std::size_t c = 0; c < outcome.trial.contestants.size(); ++c)
        if (outcome.trial.contestants[c].failed) order.push_back(c);
    return order;
}

void append(std::string& line, double value) {
    char text[32];
    line.append(text, std::to_chars(text, text + sizeof text, value).ptr);
}

void append(std::string& line, std::size_t value) {
    char text[24];
    line.append(text, std::to_chars(text, text + sizeof text, value).ptr);
}

void put_losses(const Outcome& outcome, const std::vector<std::size_t>& contestants, const std::string& lead,
                const Sink& sink) {
    std::string text;
    for (std::size_t i = 0; i < outcome.survey.n(); ++i) {
        text += lead;
        append(text, outcome.survey.rows[i]);
        for (const std::size_t c : contestants) {
            text += ',';
            if (!outcome.trial.contestants[c].failed)
                append(text, outcome.trial.contestants[c].row_loss(static_cast<Eigen::Index>(i)));
        }
        text += '\n';
        if (text.size() < 60000) continue;
        sink(text);
        text.clear();
    }
    sink(text);
}

void put_folds(const Outcome& outcome, const std::string& lead, const Sink& sink) {
    std::string text;
    for (int r = 0; r < outcome.plan.repeats; ++r)
        for (std::size_t i = 0; i < outcome.plan.n_rows; ++i) {
            text += lead;
            append(text, outcome.survey.rows[i]);
            text += ',';
            append(text, static_cast<std::size_t>(r) + 1);
            text += ',';
            append(text, static_cast<std::size_t>(outcome.plan.fold(r, i)) + 1);
            text += '\n';
            if (text.size() < 60000) continue;
            sink(text);
            text.clear();
        }
    sink(text);
}

}  // namespace

void write_ranking_csv(const Outcome& outcome, const Sink& sink) {
    put({"rank",
         "name",
         "kind",
         "loss",
         "rmse",
         "mae",
         "q2",
         "r2",
         "adjusted_r2",
         "sse",
         "coefficients_count",
         "aic",
         "aicc",
         "bic",
         "hq",
         "gm",
         "bic_weight",
         "explained",
         "first_share",
         "p_set_range",
         "p_set_max",
         "verdict"},
        sink);
    for (const std::size_t c : table_order(outcome)) {
        const ContestantLosses& losses = outcome.trial.contestants[c];
        Cells cells;
        const auto held = [&](double value) { return losses.failed ? std::string() : exact(value); };
        const TheoryReport* theory = losses.is_theory ? &outcome.verdict.theories[c] : nullptr;
        cells.push_back(theory && theory->rank > 0 ? std::to_string(theory->rank) : "");
        cells.push_back(csv_field(losses.name));
        cells.push_back(theory ? "theory" : "benchmark");
        for (const double value : {losses.loss, losses.rmse, losses.mae, losses.q2}) cells.push_back(held(value));
        if (theory) {
            for (const double value : {theory->fitted.r2, theory->fitted.adjusted_r2, theory->fitted.sse})
                cells.push_back(exact(value));
            cells.push_back(std::to_string(theory->fitted.coefficients));
            const Criteria& k = theory->criteria;
            for (const double value : {k.aic, k.aicc, k.bic, k.hq, k.gm, k.bic_weight}) cells.push_back(exact(value));
            cells.push_back(exact(theory->explained));
            for (const double value : {theory->first_share, theory->p_set_range, theory->p_set_max})
                cells.push_back(held(value));
            cells.push_back(csv_field(theory->verdict));
        } else {
            cells.resize(22);
        }
        put(cells, sink);
    }
}

void write_pairs_csv(const Outcome& outcome, const Sink& sink) {
    Cells header{"a", "b", "difference", "relative"};
    for (const char* test : {"rows", "corrected"})
        for (const char* field : {"se", "t", "df", "p", "p_holm", "low", "high"})
            header.push_back(std::string(test) + "_" + field);
    header.insert(header.end(), {"p", "p_holm", "low", "high", "monte_carlo_se", "a_knows_more_p", "b_knows_more_p",
                                 "inner", "extra_terms_p", "verdict", "reason"});
    put(header, sink);
    for (const PairReport& pair : outcome.verdict.pairs) {
        Cells cells{csv_field(outcome.trial.contestants[pair.a].name),
                    csv_field(outcome.trial.contestants[pair.b].name), exact(pair.difference), exact(pair.relative)};
        for (const PairedTest* test : {&pair.rows, &pair.corrected})
            for (const double value : {test->se, test->t, test->df, test->p, test->p_holm, test->low, test->high})
                cells.push_back(exact(value));
        for (const double value : {pair.p, pair.p_holm, pair.low, pair.high, pair.monte_carlo_se})
            cells.push_back(exact(value));
        cells.push_back(pair.theories ? exact(pair.a_knows_more.p) : "");
        cells.push_back(pair.theories ? exact(pair.b_knows_more.p) : "");
        cells.push_back(pair.inner ? csv_field(outcome.trial.contestants[*pair.inner].name) : "");
        cells.push_back(pair.inner ? exact(pair.extra_terms.p) : "");
        cells.push_back(word(pair.outcome));
        cells.push_back(csv_field(pair.rows.reason.empty() ? pair.corrected.reason : pair.rows.reason));
        put(cells, sink);
    }
}

void write_indicators_csv(const Outcome& outcome, const Sink& sink) {
    put({"contestant", "name", "rmse", "mae", "mape", "q2"}, sink);
    for (const std::size_t c : outcome.verdict.order)
        for (const IndicatorErrors& errors : outcome.trial.contestants[c].indicators)
            put({csv_field(outcome.trial.contestants[c].name), csv_field(errors.name), exact(errors.rmse),
                 exact(errors.mae), exact(errors.mape), exact(errors.q2)},
                sink);
}

void write_losses_csv(const Outcome& outcome, const Sink& sink) {
    std::string text = "row";
    for (const std::size_t c : outcome.verdict.order) text += "," + csv_field(outcome.trial.contestants[c].name);
    sink(text + "\n");
    put_losses(outcome, outcome.verdict.order, "", sink);
}

void write_segment_losses_csv(const Outcome& outcome, const Sink& sink) {
    // One set of columns for all segments: contestants in the study's order; a theory that failed in a segment has
    // empty cells there.
    std::vector<std::size_t> all(outcome.trial.contestants.size());
    std::iota(all.begin(), all.end(), std::size_t{0});
    std::string text = "segment,row";
    for (const std::size_t c : all) text += "," + csv_field(outcome.trial.contestants[c].name);
    sink(text + "\n");
    for (const Outcome& segment : outcome.segments)
        put_losses(segment, all, csv_field(segment.segment_name) + ",", sink);
}

void write_folds_csv(const Outcome& outcome, const Sink& sink) {
    sink("row,repeat,fold\n");
    put_folds(outcome, "", sink);
}

void write_segment_folds_csv(const Outcome& outcome, const Sink& sink) {
    sink("segment,row,repeat,fold\n");
    for (const Outcome& segment : outcome.segments) put_folds(segment, csv_field(segment.segment_name) + ",", sink);
}

void write_disagreements_csv(const Outcome& outcome, const Sink& sink) {
    const Disagreement& d = outcome.verdict.disagreement;
    std::string text = "row,actual";
    if (!d.present) return sink(text + "\n");
    const auto column = [&](const char* what, std::size_t c) {
        text += "," + csv_field(std::string(what) + outcome.trial.contestants[c].name);
    };
    for (const char* what : {"predicted: ", "loss: "})
        for (const std::size_t c : {d.first, d.second}) column(what, c);
    text += ",difference";
    for (const std::string& antecedent : d.antecedents) text += "," + csv_field("score: " + antecedent);
    text += "\n";
    for (std::size_t k = 0; k < d.rows.size(); ++k) {
        const auto i = static_cast<Eigen::Index>(k), row = static_cast<Eigen::Index>(d.rows[k]);
        const double loss_first = outcome.trial.contestants[d.first].row_loss(row),
                     loss_second = outcome.trial.contestants[d.second].row_loss(row);
        append(text, outcome.survey.rows[d.rows[k]]);
        for (const double value : {d.actual(i), d.predicted_first(i), d.predicted_second(i), loss_first, loss_second,
                                   loss_first - loss_second}) {
            text += ',';
            append(text, value);
        }
        for (Eigen::Index c = 0; c < d.scores.cols(); ++c) {
            text += ',';
            append(text, d.scores(i, c));
        }
        text += '\n';
        if (text.size() < 60000) continue;
        sink(text);
        text.clear();
    }
    sink(text);
}

void write_study_yaml(const Outcome& outcome, const Sink& sink) { sink(outcome.study.source); }

const std::vector<ResultFile>& result_files() {
    static const std::vector<ResultFile> files = {{"results.json", write_results_json},
                                                  {"ranking.csv", write_ranking_csv},
                                                  {"pairs.csv", write_pairs_csv},
                                                  {"indicators.csv", write_indicators_csv},
                                                  {"losses.csv", write_losses_csv},
                                                  {"folds.csv", write_folds_csv},
                                                  {"segment_losses.csv", write_segment_losses_csv, true},
                                                  {"segment_folds.csv", write_segment_folds_csv, true},
                                                  {"disagreements.csv", write_disagreements_csv},
                                                  {"table.md", write_table_md},
                                                  {"study.yaml", write_study_yaml},
                                                  {"manifest.json", write_manifest_json}};
    return files;
}

}  // namespace rivalfold
