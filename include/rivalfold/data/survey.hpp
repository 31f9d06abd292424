// The rows and columns that one study uses, the same for every theory: what the contest is about, in numbers.
// Knows theories only by the columns that their constructs name.
#pragma once

#include "rivalfold/data/table.hpp"
#include "rivalfold/study/study.hpp"

#include <Eigen/Core>

#include <cstddef>
#include <string>
#include <vector>

namespace rivalfold {

/// One numeric column as used. The same column reversed in one construct and not in another gives two variables.
struct Variable {
    std::string column;
    bool reversed = false;
    double reflect = 0;  ///< low + high; a reversed value is reflect - value
};

/// One categorical column as used.
struct Category {
    std::string column;
    std::vector<std::string> levels;  ///< sorted: by value if every level is a number, else by bytes
    std::vector<int> codes;           ///< per used row, an index into levels
};

/// How one construct is measured, with every name resolved.
struct Measurement {
    std::string construct;
    std::size_t theory = 0;      ///< kEveryTheory, or the theory whose own measurement this is
    std::vector<int> variables;  ///< indices into Survey::variables; empty for a category
    int category = -1;           ///< index into Survey::categories, or -1
    Weights weights = Weights::mode_a;
    bool used = false;  ///< some equation or control of a theory meets it
    static constexpr std::size_t kEveryTheory = static_cast<std::size_t>(-1);
};

/// Rows that were read but not used, and why: `missing answer in "pln1"`, `where: phase is not closed`.
struct Dropped {
    std::string reason;
    std::vector<std::size_t> rows;  ///< file row numbers, from 1
};

struct Survey {
    std::size_t rows_read = 0;
    std::vector<std::size_t> rows;     ///< file row number (from 1) of each used row, ascending
    std::vector<Dropped> dropped;      ///< each row once, under its first reason; by reason in column order
    std::vector<Variable> variables;   ///< those of used measurements only
    Eigen::MatrixXd values;            ///< rows x variables, reversed where so declared; NaN only under rows: mean
    bool has_missing = false;          ///< some value is NaN
    std::vector<Category> categories;  ///< those of used measurements only
    std::vector<Measurement> measurements;
    std::vector<int> clusters;  ///< per used row, 0 .. n_clusters - 1; empty without `cluster`
    std::vector<std::string> cluster_names;
    std::vector<int> segments;  ///< per used row, an index into segment_names; empty without `segment`
    std::vector<std::string>
        segment_names;  ///< `kind: simple`, or with cuts `complexity <= 4`, `4 < complexity <= 6`, `complexity > 6`
    std::vector<std::string> advice;  ///< e.g. a construct that no theory uses
    std::string sha256;               ///< of the data file, lower-case hexadecimal

    std::size_t n() const { return rows.size(); }
    /// The measurement of `construct` in theory number `theory`; null if unknown.
    const Measurement* measurement(std::size_t theory, std::string_view construct) const;
};

/// Reads the study's data file and keeps what the study uses. Throws FaultError: unreadable file, unknown columns (at
/// their place in the study, with the nearest name), values outside `range`, no rows left (with the count lost per
/// column). Under rows: mean a row still leaves when a target indicator, a category or the cluster is missing: an
/// outcome that was never observed cannot be predicted or judged.
Survey read_survey(const Study& study);

/// The same from a table in memory, for library users; the table must hold the columns that survey_columns() names.
Survey build_survey(const Study& study, const Table& table);

/// The rows of one segment as a survey of its own: clusters renumbered, levels that do not occur removed, rows_read as
/// in the whole. Throws FaultError naming the segment and the column where a used indicator does not vary within it or
/// a category has one level.
Survey survey_of_segment(const Study& study, const Survey& whole, std::size_t segment);

/// Which columns of a file with this header the study needs. Throws FaultError for names that match nothing.
ColumnChoice survey_columns(const Study& study, const std::vector<std::string>& header);

}  // namespace rivalfold
