// The sections data, trial and verdict.
#include "study/characters.hpp"
#include "study/sections.hpp"
#include "study/values.hpp"

#include <fmt/format.h>
#include <algorithm>
#include <array>
#include <filesystem>
#include <limits>
#include <utility>

namespace rivalfold {
namespace {

void note_unsupported(const Keys& keys, std::string_view key, std::string_view instead) {
    if (keys.value(key) != nullptr)
        keys.faults().add(keys.place(key), fmt::format("\"{}\" is not supported yet; {}", key, instead));
}

std::string lower_extension(const std::string& file) {
    std::string extension = std::filesystem::path(file).extension().string();
    for (char& letter : extension)
        if (letter >= 'A' && letter <= 'Z') letter = static_cast<char>(letter + ('a' - 'A'));
    return extension;
}

bool is_one_of(const std::string& text, const auto& words) {
    return std::find(words.begin(), words.end(), text) != words.end();
}

void check_data_file(const Name& file, FaultList& faults) {
    constexpr std::array<std::string_view, 3> kDelimited = {".csv", ".tsv", ".txt"};
    constexpr std::array<std::string_view, 6> kLater = {".sav", ".zsav", ".por", ".dta", ".sas7bdat", ".xpt"};
    constexpr std::array<std::string_view, 3> kSpreadsheets = {".xlsx", ".xls", ".ods"};
    const std::string extension = lower_extension(file.text);
    if (is_one_of(extension, kLater)) {
        faults.add(file.place, fmt::format("\"file\" ending in {} is not supported yet, found {}; save it as CSV",
                                           extension, in_quotes(file.text)));
    } else if (is_one_of(extension, kSpreadsheets)) {
        faults.add(file.place, fmt::format("\"file\" of \"data\" must be delimited text, found the spreadsheet {}; "
                                           "save its sheet as CSV",
                                           in_quotes(file.text)));
    } else if (!is_one_of(extension, kDelimited)) {
        faults.add(file.place,
                   fmt::format("\"file\" of \"data\" must end in .csv, .tsv or .txt, found {}", in_quotes(file.text)));
    }
}

char read_delimiter(const Node& node, const std::string& label, FaultList& faults) {
    constexpr std::array<std::pair<std::string_view, char>, 5> kDelimiters = {
        {{",", ','}, {";", ';'}, {"|", '|'}, {"\t", '\t'}, {"tab", '\t'}}};
    if (node.kind == Node::Kind::text)
        for (const auto& [written, delimiter] : kDelimiters)
            if (node.text == written) return delimiter;
    const bool bare_bar = node.kind == Node::Kind::text && node.quoted && node.text.empty();
    note_type(node, label, "\",\", \";\", \"|\" or tab", faults,
              bare_bar ? "a bare | must stand in quotes: \"|\"" : "");
    return 0;
}

RowRule read_rows(const Node& node, const std::string& label, FaultList& faults) {
    RowRule rule = RowRule::drop;
    if (node.kind == Node::Kind::text && node.text == "regression") {
        faults.add(node.place, "\"rows: regression\" is not supported yet; expected drop or mean");
        return rule;
    }
    read_word(node, label, std::array{RowRule::drop, RowRule::mean}, rule, faults);
    return rule;
}

std::vector<Condition> read_where(const Node& node, const std::string& label, FaultList& faults) {
    std::vector<Condition> conditions;
    if (node.kind != Node::Kind::map) {
        note_type(node, label, "columns with the values to keep, e.g. {phase: closed}", faults);
        return conditions;
    }
    for (std::size_t k = 0; k < node.keys.size(); ++k) {
        const auto column = read_name(node.keys[k], "a column in " + label, "a column name", faults);
        if (!column) continue;
        const std::string values_label = fmt::format("{} in {}", in_quotes(column->text), label);
        const Node& values = node.items[k];
        if (values.kind == Node::Kind::text) {
            conditions.push_back({*column, {values.text}});
        } else if (values.kind == Node::Kind::list && !values.items.empty()) {
            conditions.push_back({*column, read_cells(values, values_label, faults)});
        } else {
            note_type(values, values_label, "a cell value or a list of one or more", faults);
        }
    }
    return conditions;
}

std::vector<double> read_cuts(const Node& node, const std::string& label, FaultList& faults) {
    constexpr std::size_t kMostCuts = 9;
    std::vector<double> cuts;
    const bool list = node.kind == Node::Kind::list;
    if (!list || node.items.empty() || node.items.size() > kMostCuts) {
        faults.add(node.place,
                   fmt::format("{} must be a list of 1 to {} ascending numbers, found {}", label, kMostCuts,
                               list && !node.items.empty() ? fmt::format("{}", node.items.size()) : found(node)),
                   node.kind == Node::Kind::text ? fmt::format("write [{}]", node.text) : std::string());
        return cuts;
    }
    for (const Node& item : node.items) {
        const auto cut = read_decimal(item, "an item of " + label, "a number", faults);
        if (!cut) continue;
        if (!cuts.empty() && *cut <= cuts.back())
            faults.add(item.place, fmt::format("{} must ascend, found {} after {}", label, item.text, cuts.back()));
        cuts.push_back(*cut + 0.0);  // -0 is 0
    }
    return cuts;
}

std::optional<Segmenting> read_segment(const Node& node, Place place, const std::string& label, FaultList& faults) {
    Segmenting segment;
    if (node.kind != Node::Kind::map) {
        auto column = read_name(node, label, "a column name, or {column: complexity, cuts: [4]}", faults);
        if (!column) return std::nullopt;
        segment.column = std::move(*column);
        return segment;
    }
    const Keys keys(node, place, label, kSegmentKeys, faults);
    if (const Node* cuts = keys.value("cuts")) segment.cuts = read_cuts(*cuts, keys.label("cuts"), faults);
    const Node* written = keys.value("column");
    if (written == nullptr) return std::nullopt;
    auto column = read_name(*written, keys.label("column"), "a column name", faults);
    if (!column) return std::nullopt;
    segment.column = std::move(*column);
    return segment;
}

void check_segment(const DataSource& data, FaultList& faults) {
    if (!data.segment || !data.cluster || data.segment->column.text != data.cluster->text) return;
    faults.add(data.segment->column.place,
               fmt::format("the segment column {} is the cluster column too; expected another column: a cluster would "
                           "be a segment of its own",
                           in_quotes(data.cluster->text)));
}

void check_folds_file(const Keys& keys) {
    if (keys.value("folds_file") == nullptr) return;
    for (const std::string_view key : {"folds", "repeats", "seed"})
        if (keys.value(key) != nullptr)
            keys.faults().add(keys.place(key),
                              fmt::format("\"{}\" stands beside \"folds_file\", which is given instead of "
                                          "folds, repeats and seed; expected one or the other",
                                          key));
}

void check_open_interval(std::optional<double> number, const Node& node, const std::string& label,
                         std::string_view expected, bool inside, double& value, FaultList& faults) {
    if (!number) return;
    if (inside) {
        value = *number;
    } else {
        note_type(node, label, expected, faults);
    }
}

}  // namespace

std::string resolve(const std::string& study_path, const std::string& written) {
    return (std::filesystem::path(study_path).parent_path() / std::filesystem::path(written)).string();
}

DataSource read_data(const Node& node, Place place, const std::string& study_path, FaultList& faults) {
    const Keys keys(node, place, "\"data\"", kDataKeys, faults);
    DataSource data;
    if (const Node* file = keys.value("file")) {
        if (auto name = read_name(*file, keys.label("file"), "the name of a data file", faults)) {
            check_data_file(*name, faults);
            data.path = resolve(study_path, name->text);
            data.file = std::move(*name);
        }
    }
    if (const Node* delimiter = keys.value("delimiter"))
        data.delimiter = read_delimiter(*delimiter, keys.label("delimiter"), faults);
    if (const Node* codes = keys.value("missing_codes"))
        data.missing_codes = read_cells(*codes, keys.label("missing_codes"), faults);
    if (const Node* rows = keys.value("rows")) data.rows = read_rows(*rows, keys.label("rows"), faults);
    if (const Node* where = keys.value("where")) data.where = read_where(*where, keys.label("where"), faults);
    if (const Node* cluster = keys.value("cluster"))
        data.cluster = read_name(*cluster, keys.label("cluster"), "a column name", faults);
    if (const Node* segment = keys.value("segment"))
        data.segment = read_segment(*segment, keys.place("segment"), keys.label("segment"), faults);
    check_segment(data, faults);
    note_unsupported(keys, "holdout", "leave the key out");
    note_unsupported(keys, "order", "leave the key out");
    return data;
}

TrialPlan read_trial(const Node& node, Place place, const std::string& study_path, FaultList& faults) {
    const Keys keys(node, place, "\"trial\"", kTrialKeys, faults);
    TrialPlan trial;
    trial.folds_place = keys.place("folds");
    if (const Node* folds = keys.value("folds")) {
        trial.folds_place = folds->place;
        constexpr std::uint64_t kMost = std::numeric_limits<std::int32_t>::max();
        if (const auto number = read_whole(*folds, keys.label("folds"), 2, kMost, faults))
            trial.folds = static_cast<int>(*number);
    }
    if (const Node* repeats = keys.value("repeats")) {
        if (repeats->kind == Node::Kind::text && repeats->text == "auto") {
            trial.auto_repeats = true;
        } else if (const auto number = read_whole(*repeats, keys.label("repeats"), 1, 10'000, faults, "auto")) {
            trial.repeats = static_cast<int>(*number);
        }
    }
    if (const Node* seed = keys.value("seed")) {
        constexpr std::uint64_t kMost = std::numeric_limits<std::uint64_t>::max();
        trial.seed = read_whole(*seed, keys.label("seed"), 0, kMost, faults).value_or(trial.seed);
    }
    if (const Node* file = keys.value("folds_file")) {
        trial.folds_file =
            read_name(*file, keys.label("folds_file"), "the name of a file with columns row, repeat and fold", faults);
        if (trial.folds_file) trial.folds_path = resolve(study_path, trial.folds_file->text);
    }
    check_folds_file(keys);
    if (const Node* loss = keys.value("loss"))
        read_word(*loss, keys.label("loss"), std::array{Loss::squared, Loss::absolute}, trial.loss, faults);
    if (const Node* mediators = keys.value("mediators"))
        read_word(*mediators, keys.label("mediators"), std::array{Mediators::measured, Mediators::predicted},
                  trial.mediators, faults);
    return trial;
}

VerdictRules read_verdict(const Node& node, Place place, FaultList& faults) {
    const Keys keys(node, place, "\"verdict\"", kVerdictKeys, faults);
    VerdictRules verdict;
    if (const Node* level = keys.value("level")) {
        constexpr std::string_view kExpected = "a number above 0 and below 0.5";
        const auto number = read_decimal(*level, keys.label("level"), kExpected, faults);
        check_open_interval(number, *level, keys.label("level"), kExpected, number && *number > 0.0 && *number < 0.5,
                            verdict.level, faults);
    }
    if (const Node* margin = keys.value("margin")) {
        constexpr std::string_view kExpected = "a number from 0 to below 1";
        const auto number = read_decimal(*margin, keys.label("margin"), kExpected, faults);
        check_open_interval(number, *margin, keys.label("margin"), kExpected, number && *number >= 0.0 && *number < 1.0,
                            verdict.margin, faults);
    }
    if (const Node* completeness = keys.value("completeness"))
        verdict.completeness =
            read_truth(*completeness, keys.label("completeness"), faults).value_or(verdict.completeness);
    return verdict;
}

}  // namespace rivalfold
