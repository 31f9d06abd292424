// Which rows of the table stay, and why the others leave. Knows columns by what they are needed for, not by theory.
#pragma once

#include "data/fault_log.hpp"
#include "data/find_columns.hpp"

#include "rivalfold/data/survey.hpp"
#include "rivalfold/data/table.hpp"

#include <cstddef>
#include <optional>
#include <string>
#include <vector>

namespace rivalfold {

/// A column in which a used row must have an answer.
struct NeededColumn {
    std::string name;
    int number = -1;      ///< index into Table::numbers' columns
    int text = -1;        ///< index into Table::texts
    bool always = false;  ///< also under rows: mean
    Place place;          ///< where the study names it
};

struct RowChoice {
    std::vector<std::size_t> rows;  ///< used rows of the table, from 0, ascending
    std::vector<Dropped> dropped;
};

/// Rows that meet every `where` condition; the others go to `dropped`.
RowChoice meet_conditions(const Study& study, const Table& table, const std::vector<int>& where_texts);

/// Takes the rows without an answer in a needed column out of `choice`, each under the first such column.
void drop_missing(const Table& table, RowRule rule, const std::vector<NeededColumn>& needed, RowChoice& choice);

/// What an indicator's raw values must lie within.
struct RangeRule {
    std::string column;
    std::string construct;
    int number = -1;
    double low = 0;
    double high = 0;
};

/// Values outside their range in the given rows, by row and then in the order of the rules.
FaultLog check_ranges(const std::string& file, const Table& table, const std::vector<RangeRule>& rules,
                      const std::vector<std::size_t>& rows);

/// `none of the 3 rows of "refits.csv" can be used; lost to: missing answer in "pln1" (3)`.
std::string say_lost(const Study& study, const Table& table, const RowChoice& choice);

/// `did you mean "closed"?` for the first value of a condition that its column never holds, if one it holds is near.
std::string near_condition(const Study& study, const Table& table, const std::vector<int>& where_texts);

}  // namespace rivalfold
