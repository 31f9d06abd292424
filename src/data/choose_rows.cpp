#include "data/choose_rows.hpp"

#include "data/numbers.hpp"
#include "data/plain_text.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <numeric>
#include <set>
#include <utility>

namespace rivalfold {
namespace {

/// The values that one condition allows; a cell equals a value as text or, if both are numbers, as a number.
class Allowed {
public:
    explicit Allowed(const std::vector<std::string>& values) {
        for (const std::string& value : values) {
            texts_.emplace_back(trimmed(value));
            double number = 0;
            if (text_is_number(texts_.back(), number)) numbers_.push_back(number);
        }
    }
    bool holds(const std::string& cell) const {
        if (cell.empty()) return false;  // no answer equals nothing
        if (std::find(texts_.begin(), texts_.end(), cell) != texts_.end()) return true;
        double number = 0;
        return !numbers_.empty() && text_is_number(cell, number) &&
               std::find(numbers_.begin(), numbers_.end(), number) != numbers_.end();
    }

private:
    std::vector<std::string> texts_;
    std::vector<double> numbers_;
};

std::string reason_of(const Condition& condition) {
    std::string values;
    for (const std::string& value : condition.values) values += (values.empty() ? "" : " or ") + value;
    return fmt::format("where: {} is not {}", condition.column.text, values);
}

/// Moves the rows that `leaves` accepts from the choice to a reason of their own.
template <class Leaves>
void drop_rows(RowChoice& choice, std::string reason, const Leaves& leaves) {
    const auto first = std::find_if(choice.rows.begin(), choice.rows.end(), leaves);
    if (first == choice.rows.end()) return;
    Dropped dropped{std::move(reason), {}};
    auto kept = first;
    for (auto row = first; row != choice.rows.end(); ++row) {
        if (leaves(*row))
            dropped.rows.push_back(*row + 1);
        else
            *kept++ = *row;
    }
    choice.rows.erase(kept, choice.rows.end());
    choice.dropped.push_back(std::move(dropped));
}

struct OutOfRange {
    std::size_t row = 0;
    std::size_t rule = 0;
};

}  // namespace

RowChoice meet_conditions(const Study& study, const Table& table, const std::vector<int>& where_texts) {
    RowChoice choice;
    choice.rows.resize(table.n_rows);
    std::iota(choice.rows.begin(), choice.rows.end(), std::size_t{0});
    for (std::size_t i = 0; i < study.data.where.size(); ++i) {
        const Condition& condition = study.data.where[i];
        const Allowed allowed(condition.values);
        const std::vector<std::string>& cells = table.texts[static_cast<std::size_t>(where_texts[i])];
        drop_rows(choice, reason_of(condition), [&](std::size_t row) { return !allowed.holds(cells[row]); });
    }
    return choice;
}

void drop_missing(const Table& table, RowRule rule, const std::vector<NeededColumn>& needed, RowChoice& choice) {
    for (const NeededColumn& column : needed) {
        if (rule == RowRule::mean && !column.always) continue;
        std::string reason = fmt::format("missing answer in {}", in_quotes(column.name));
        if (column.number >= 0) {
            const double* const values = table.numbers.col(column.number).data();
            drop_rows(choice, std::move(reason), [&](std::size_t row) { return std::isnan(values[row]); });
        } else {
            const std::vector<std::string>& cells = table.texts[static_cast<std::size_t>(column.text)];
            drop_rows(choice, std::move(reason), [&](std::size_t row) { return cells[row].empty(); });
        }
    }
}

FaultLog check_ranges(const std::string& file, const Table& table, const std::vector<RangeRule>& rules,
                      const std::vector<std::size_t>& rows) {
    std::vector<OutOfRange> first;  // the first of each rule: the first of all are among them
    std::size_t count = 0;
    for (std::size_t i = 0; i < rules.size(); ++i) {
        const RangeRule& rule = rules[i];
        const double* const values = table.numbers.col(rule.number).data();
        std::size_t kept = 0;
        for (const std::size_t row : rows) {
            // A missing value compares false both ways.
            if (!(values[row] < rule.low || values[row] > rule.high)) continue;
            ++count;
            if (++kept <= FaultLog::kMost) first.push_back({row, i});
        }
    }
    std::stable_sort(first.begin(), first.end(),
                     [](const OutOfRange& a, const OutOfRange& b) { return a.row < b.row; });
    FaultLog log;
    for (std::size_t i = 0; i < first.size() && !log.full(); ++i) {
        const RangeRule& rule = rules[first[i].rule];
        const double value = table.numbers(static_cast<Eigen::Index>(first[i].row), rule.number);
        log.add({file,
                 {},
                 fmt::format("row {}, column {}", first[i].row + 1, in_quotes(rule.column)),
                 fmt::format("{} is outside the range {} to {} of construct {}; if it means \"no answer\", add it to "
                             "missing_codes",
                             value, rule.low, rule.high, in_quotes(rule.construct)),
                 {},
                 {}});
    }
    while (log.count() < count) log.count_only();
    return log;
}

std::string say_lost(const Study& study, const Table& table, const RowChoice& choice) {
    std::string lost;
    for (const Dropped& dropped : choice.dropped)
        lost += fmt::format("{}{} ({})", lost.empty() ? "" : ", ", dropped.reason, dropped.rows.size());
    const std::string left = choice.rows.empty() ? fmt::format("none of the {} rows", table.n_rows) : "only 1 row";
    return fmt::format("{} of {} can be used{}{}", left, in_quotes(study.data.file.text),
                       lost.empty() ? "" : "; lost to: ", lost);
}

std::string near_condition(const Study& study, const Table& table, const std::vector<int>& where_texts) {
    constexpr std::size_t kMostValues = 200;
    for (std::size_t i = 0; i < where_texts.size(); ++i) {
        const std::vector<std::string>& cells = table.texts[static_cast<std::size_t>(where_texts[i])];
        std::set<std::string> seen;
        for (std::size_t row = 0; row < cells.size() && seen.size() < kMostValues; ++row)
            if (!cells[row].empty()) seen.insert(cells[row]);
        const std::vector<std::string> held(seen.begin(), seen.end());
        for (const std::string& value : study.data.where[i].values) {
            const Allowed allowed({value});
            const auto holds = [&](const std::string& cell) { return allowed.holds(cell); };
            if (std::any_of(cells.begin(), cells.end(), holds)) continue;
            if (std::string hint = did_you_mean(value, held); !hint.empty()) return hint;
        }
    }
    return {};
}

}  // namespace rivalfold
