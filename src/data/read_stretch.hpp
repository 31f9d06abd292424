// The cells of one stretch of whole rows, put into the table. Several readers work on one table at once, each on rows
// of its own. Knows nothing of how the file was cut.
#pragma once

#include "data/cells.hpp"
#include "data/layout.hpp"
#include "data/numbers.hpp"

#include "rivalfold/data/table.hpp"

#include <cstddef>
#include <vector>

namespace rivalfold {

/// What a column of the file is read for.
struct ColumnUse {
    int number = -1;  ///< index into Table::numbers' columns
    int text = -1;    ///< index into Table::texts
};

/// Where a column first met each decimal mark; row numbers from 0.
struct MarksSeen {
    static constexpr std::size_t kNever = static_cast<std::size_t>(-1);
    std::size_t point = kNever;
    std::size_t comma = kNever;
};

class StretchReader {
public:
    StretchReader(const ByteSource& source, const Layout& layout, const NumberRules& rules,
                  const std::vector<ColumnUse>& uses, Table& table);

    /// Reads the stretch into the table's rows; what is wrong with it goes to `faults`, in file order.
    void read(const Stretch& stretch, FaultLog& faults);

    /// Per number column, over all stretches read so far.
    const std::vector<MarksSeen>& marks() const { return marks_; }

private:
    const char* read_row(const char* at);
    const char* read_cell(const char* at, std::size_t column, bool& row_ends);
    void take_number(const Cell& cell, std::size_t column);
    void take_text(const Cell& cell, std::size_t column);
    void note_mark(std::size_t number_column, Mark mark);
    void store(int number_column, double value);
    void flush_rows();
    void say(std::size_t column, std::string message);

    const ByteSource& source_;
    const Layout& layout_;
    const NumberRules& rules_;
    const std::vector<ColumnUse>& uses_;
    Table& table_;
    std::vector<char> bytes_;
    std::vector<double> block_;  ///< kBlockRows rows of every number column, column by column
    std::vector<MarksSeen> marks_;

    FaultLog* faults_ = nullptr;
    const char* end_ = nullptr;
    std::size_t row_ = 0;          ///< row of the file, from 0
    std::size_t block_row_ = 0;    ///< row within the block
    std::size_t line_ = 0;         ///< line of the file where the row begins
    std::size_t breaks_ = 0;       ///< line breaks inside the row so far
    std::string without_doubles_;  ///< text of the last cell with doubled quotes
};

}  // namespace rivalfold
