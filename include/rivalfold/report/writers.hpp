// One writer per format, each fed the same finished outcome. Writers compute nothing and open no files.
#pragma once

#include "rivalfold/verdict/outcome.hpp"

#include <functional>
#include <string>
#include <string_view>
#include <vector>

namespace rivalfold {

/// Takes the next piece of a file's text.
using Sink = std::function<void(std::string_view)>;

struct TerminalStyle {
    bool colour = false;
    int width = 80;
};

/// The ranked table, the pairs table, their readings, the headline and the caution: what `run` prints.
std::string write_tables(const Outcome& outcome, const TerminalStyle& style);
/// What `check` prints: rows read, used and dropped, constructs with reliability, theories, splits.
std::string write_plan(const Outcome& outcome, const TerminalStyle& style);
/// Advice as a list, each item wrapped; empty without advice.
std::string write_advice(const std::vector<std::string>& advice, const TerminalStyle& style);

/// What was done, in sentences with the published sources: for results.json and the notes of a table.
std::string methods_text(const Outcome& outcome);

void write_results_json(const Outcome& outcome, const Sink& sink);
void write_ranking_csv(const Outcome& outcome, const Sink& sink);
void write_pairs_csv(const Outcome& outcome, const Sink& sink);
void write_indicators_csv(const Outcome& outcome, const Sink& sink);
void write_losses_csv(const Outcome& outcome, const Sink& sink);
void write_folds_csv(const Outcome& outcome, const Sink& sink);
/// The same per segment, with a leading column `segment`.
void write_segment_losses_csv(const Outcome& outcome, const Sink& sink);
void write_segment_folds_csv(const Outcome& outcome, const Sink& sink);
void write_disagreements_csv(const Outcome& outcome, const Sink& sink);
void write_table_md(const Outcome& outcome, const Sink& sink);
void write_study_yaml(const Outcome& outcome, const Sink& sink);
void write_manifest_json(const Outcome& outcome, const Sink& sink);

/// The files of a results folder, in the order of `help outputs`.
struct ResultFile {
    const char* name;
    void (*write)(const Outcome&, const Sink&);
    bool by_segment = false;  ///< written only where the study has segments
};
const std::vector<ResultFile>& result_files();

/// What the analysis cannot support: short, once, in every form of the report.
std::string_view caution();

}  // namespace rivalfold
