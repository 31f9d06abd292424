#include "data/build_survey.hpp"

#include "data/levels.hpp"
#include "data/segments.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <stdexcept>
#include <utility>

namespace rivalfold {
namespace {

constexpr std::size_t kMostLevels = 50;  ///< a category with more is likely to be an identifier

int index_in(const std::vector<std::size_t>& columns, std::size_t column, const std::vector<std::string>& header) {
    const auto at = std::find(columns.begin(), columns.end(), column);
    if (at == columns.end())
        throw std::invalid_argument(
            fmt::format("the table lacks the column {}, which survey_columns() names", in_quotes(header[column])));
    return static_cast<int>(at - columns.begin());
}

}  // namespace

SurveyBuilder::SurveyBuilder(const Study& study, const Table& table)
    : study_(study), table_(table), found_(find_columns(study, table.header)) {
    survey_.rows_read = table.n_rows;
    for (const FoundConstruct& found : found_.constructs) add_construct(found);
    if (found_.cluster)
        need({table.header[*found_.cluster], -1, text_index(*found_.cluster), true, study.data.cluster->place});
    if (found_.segment) {
        const bool cut = !study.data.segment->cuts.empty();
        need({table.header[*found_.segment], cut ? number_index(*found_.segment) : -1,
              cut ? -1 : text_index(*found_.segment), true, study.data.segment->column.place});
    }
}

Survey SurveyBuilder::build(const MakeValues& make_values) {
    std::vector<int> where_texts;
    for (const std::size_t column : found_.where) where_texts.push_back(text_index(column));
    choice_ = meet_conditions(study_, table_, where_texts);
    const FaultLog out_of_range = check_ranges(data_name(study_), table_, ranges_, choice_.rows);
    check_answers(choice_.rows);
    drop_missing(table_, study_.data.rows, needed_, choice_);
    if (faults_.empty() && choice_.rows.size() < 2)
        faults_.push_back(study_.fault_at(study_.data.file.place, say_lost(study_, table_, choice_),
                                          near_condition(study_, table_, where_texts)));
    if (faults_.empty()) {
        check_answers(choice_.rows);
        code_categories();
        code_clusters();
        code_segments();
    }
    if (out_of_range.empty() && faults_.empty()) {
        survey_.values = make_values(choice_.rows, value_columns_);
        check_variables();
    }
    out_of_range.throw_if_any(std::move(faults_));
    for (std::size_t& row : choice_.rows) ++row;
    survey_.rows = std::move(choice_.rows);
    survey_.dropped = std::move(choice_.dropped);
    advise();
    return std::move(survey_);
}

void SurveyBuilder::add_construct(const FoundConstruct& found) {
    Measurement measurement;
    measurement.construct = found.construct->name.text;
    measurement.theory = found.theory;
    measurement.weights = found.construct->weights;
    measurement.used = found.used;
    if (found.used) {
        for (const FoundIndicator& indicator : found.indicators)
            measurement.variables.push_back(variable_of(found, indicator));
        if (found.category) measurement.category = category_of(found);
    }
    survey_.measurements.push_back(std::move(measurement));
}

int SurveyBuilder::variable_of(const FoundConstruct& found, const FoundIndicator& indicator) {
    const std::string& name = table_.header[indicator.column];
    const int number = number_index(indicator.column);
    need({name, number, -1, found.is_target, indicator.place});
    const auto& range = found.construct->range;
    if (range) add_range({name, found.construct->name.text, number, range->first, range->second});
    const ValueColumn column{number, indicator.reversed, indicator.reversed ? range->first + range->second : 0.0};
    for (std::size_t i = 0; i < value_columns_.size(); ++i) {
        const ValueColumn& other = value_columns_[i];
        if (other.source == column.source && other.reversed == column.reversed && other.reflect == column.reflect)
            return static_cast<int>(i);
    }
    value_columns_.push_back(column);
    owners_.push_back(&found);
    places_.push_back(indicator.place);
    survey_.variables.push_back({name, column.reversed, column.reflect});
    return static_cast<int>(survey_.variables.size()) - 1;
}

int SurveyBuilder::category_of(const FoundConstruct& found) {
    const std::string& name = table_.header[*found.category];
    NeededColumn column{name, -1, text_index(*found.category), true, found.construct->category->place};
    need(column);
    for (std::size_t i = 0; i < category_columns_.size(); ++i)
        if (category_columns_[i].text == column.text) return static_cast<int>(i);
    category_columns_.push_back(std::move(column));
    survey_.categories.push_back({name, {}, {}});
    return static_cast<int>(survey_.categories.size()) - 1;
}

void SurveyBuilder::need(NeededColumn column) {
    for (NeededColumn& other : needed_) {
        if (other.number != column.number || other.text != column.text) continue;
        other.always |= column.always;
        return;
    }
    needed_.push_back(std::move(column));
}

void SurveyBuilder::add_range(RangeRule rule) {
    const auto same = [&](const RangeRule& other) {
        return other.number == rule.number && other.low == rule.low && other.high == rule.high;
    };
    if (std::none_of(ranges_.begin(), ranges_.end(), same)) ranges_.push_back(std::move(rule));
}

int SurveyBuilder::number_index(std::size_t column) const {
    return index_in(table_.chosen.numbers, column, table_.header);
}

int SurveyBuilder::text_index(std::size_t column) const { return index_in(table_.chosen.texts, column, table_.header); }

void SurveyBuilder::check_answers(const std::vector<std::size_t>& rows) {
    if (rows.empty()) return;
    for (const NeededColumn& column : needed_) {
        const auto answered = [&](std::size_t row) {
            return column.number >= 0 ? !std::isnan(table_.numbers(static_cast<Eigen::Index>(row), column.number))
                                      : !table_.texts[static_cast<std::size_t>(column.text)][row].empty();
        };
        if (std::any_of(rows.begin(), rows.end(), answered)) continue;
        say(column.place,
            fmt::format("column {} holds no answer in any of the {} rows that could be used; leave it out, or "
                        "check missing_codes",
                        in_quotes(column.name), rows.size()));
    }
}

void SurveyBuilder::check_variables() {
    const auto n = static_cast<std::size_t>(survey_.values.rows());
    for (std::size_t i = 0; i < value_columns_.size(); ++i) {
        const Spread spread = spread_of(survey_.values.col(static_cast<Eigen::Index>(i)).data(), n);
        survey_.has_missing |= spread.any_missing;
        if (spread.low != spread.high) continue;
        const Variable& variable = survey_.variables[i];
        const double raw = variable.reversed ? variable.reflect - spread.low : spread.low;
        say(places_[i],
            fmt::format("column {} of construct {} is {} in all {} rows used; leave it out: a constant says "
                        "nothing about differences",
                        in_quotes(variable.column), in_quotes(owners_[i]->construct->name.text), raw, n));
    }
}

void SurveyBuilder::code_categories() {
    for (std::size_t i = 0; i < survey_.categories.size(); ++i) {
        const NeededColumn& column = category_columns_[i];
        Levels levels = code_levels(table_.texts[static_cast<std::size_t>(column.text)], choice_.rows);
        if (levels.names.size() == 1)
            say(column.place,
                fmt::format("category {} is {} in all {} rows used; leave it out: one level says nothing "
                            "about differences",
                            in_quotes(column.name), in_quotes(levels.names.front()), choice_.rows.size()));
        if (levels.names.size() > kMostLevels)
            say(column.place,
                fmt::format("category {} has {} levels, above the limit of {}: it looks like an identifier; "
                            "if it is a number, declare it under indicators",
                            in_quotes(column.name), levels.names.size(), kMostLevels));
        survey_.categories[i].levels = std::move(levels.names);
        survey_.categories[i].codes = std::move(levels.codes);
    }
}

void SurveyBuilder::code_clusters() {
    if (!found_.cluster) return;
    Levels levels = code_levels(table_.texts[static_cast<std::size_t>(text_index(*found_.cluster))], choice_.rows);
    survey_.cluster_names = std::move(levels.names);
    survey_.clusters = std::move(levels.codes);
}

void SurveyBuilder::code_segments() {
    if (!found_.segment) return;
    Segments segments;
    if (study_.data.segment->cuts.empty()) {
        const auto text = static_cast<std::size_t>(text_index(*found_.segment));
        segments = segments_by_value(study_, table_.texts[text], choice_.rows, faults_);
    } else {
        const double* const values = table_.numbers.col(number_index(*found_.segment)).data();
        segments = segments_by_cuts(study_, values, choice_.rows, faults_);
    }
    survey_.segment_names = std::move(segments.names);
    survey_.segments = std::move(segments.codes);
}

void SurveyBuilder::advise() {
    for (const FoundConstruct& found : found_.constructs) {
        const std::string name = in_quotes(found.construct->name.text);
        if (found.used) continue;
        survey_.advice.push_back(
            found.theory == Measurement::kEveryTheory
                ? fmt::format("construct {} is used by no theory; its columns do not decide which rows are used", name)
                : fmt::format("theory {} measures construct {} its own way but does not use it",
                              in_quotes(study_.theories[found.theory].name.text), name));
    }
    std::vector<std::size_t> counts(survey_.segment_names.size(), 0);
    for (const int segment : survey_.segments) ++counts[static_cast<std::size_t>(segment)];
    for (std::size_t i = 0; i < counts.size(); ++i)
        if (counts[i] < kFewRows)
            survey_.advice.push_back(
                fmt::format("segment {} has only {} {} used; with fewer than about {} a contest rarely tells theories "
                            "apart (common practice): read it as a hint, or join segments",
                            in_quotes(survey_.segment_names[i]), counts[i], counts[i] == 1 ? "row" : "rows", kFewRows));
}

void SurveyBuilder::say(Place place, std::string message) {
    faults_.push_back(study_.fault_at(place, std::move(message)));
}

}  // namespace rivalfold
