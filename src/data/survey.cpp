#include "rivalfold/data/survey.hpp"

#include "data/build_survey.hpp"
#include "data/byte_source.hpp"
#include "data/find_columns.hpp"

#include "rivalfold/data/read_delimited.hpp"
#include "rivalfold/data/sha256.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <future>
#include <utility>

namespace rivalfold {
namespace {

void choose_once(std::vector<std::size_t>& columns, std::size_t column) {
    if (std::find(columns.begin(), columns.end(), column) == columns.end()) columns.push_back(column);
}

}  // namespace

const Measurement* Survey::measurement(std::size_t theory, std::string_view construct) const {
    const Measurement* of_study = nullptr;
    for (const Measurement& one : measurements) {
        if (one.construct != construct) continue;
        if (one.theory == theory) return &one;
        if (one.theory == Measurement::kEveryTheory) of_study = &one;
    }
    return of_study;
}

ColumnChoice survey_columns(const Study& study, const std::vector<std::string>& header) {
    const FoundColumns found = find_columns(study, header);
    ColumnChoice choice;
    std::vector<char> number_taken(header.size(), 0);
    for (const FoundConstruct& construct : found.constructs) {
        if (!construct.used) continue;
        for (const FoundIndicator& indicator : construct.indicators)
            if (!std::exchange(number_taken[indicator.column], char{1})) choice.numbers.push_back(indicator.column);
        if (construct.category) choose_once(choice.texts, *construct.category);
    }
    for (const std::size_t column : found.where) choose_once(choice.texts, column);
    if (found.cluster) choose_once(choice.texts, *found.cluster);
    if (found.segment) choose_once(study.data.segment->cuts.empty() ? choice.texts : choice.numbers, *found.segment);
    return choice;
}

Survey build_survey(const Study& study, const Table& table) {
    return SurveyBuilder(study, table).build([&](auto rows, const auto& columns) {
        return gather_values(table.numbers, rows, columns);
    });
}

Survey read_survey(const Study& study) {
    const std::string& path = data_name(study);
    if (const std::optional<Fault> trouble = file_trouble(path))
        throw FaultError(study.fault_at(
            study.data.file.place, fmt::format("data file {}: {}", in_quotes(path), trouble->message), trouble->hint));
    std::future<std::string> hash = std::async(std::launch::async, [&path] { return sha256_hex_of_file(path); });
    Table table = read_delimited(path, {study.data.delimiter, study.data.missing_codes},
                                 [&](const std::vector<std::string>& header) { return survey_columns(study, header); });
    Survey survey = SurveyBuilder(study, table).build([&](auto rows, const auto& columns) {
        return take_values(std::move(table.numbers), rows, columns);
    });
    survey.sha256 = hash.get();
    return survey;
}

}  // namespace rivalfold
