// Finds where rows end, at memchr speed where no quotes are near. Knows cells only to step over quoted line ends.
#pragma once

#include "data/cells.hpp"

#include <cstring>

namespace rivalfold {

struct RowEnd {
    const char* next = nullptr;   ///< where the next row begins
    std::size_t line_breaks = 0;  ///< inside quoted cells
    bool open = false;            ///< a quote is not closed before the end of the bytes
};

/// Steps forward through rows that begin at or after `begin`, which must be the beginning of a row.
class RowScanner {
public:
    RowScanner(const char* begin, const char* end, char delimiter)
        : end_(end),
          delimiter_(delimiter),
          line_feed_(find('\n', begin)),
          return_(find('\r', begin)),
          quote_(find('"', begin)) {}

    /// The end of the row that begins at `row`; rows must be asked for in ascending order.
    RowEnd row_from(const char* row) {
        // Each mark moves forward only, so that the scan stays linear whatever the line ends are.
        if (line_feed_ < row) line_feed_ = find('\n', row);
        if (return_ < row) return_ = find('\r', row);
        if (quote_ < row) quote_ = find('"', row);
        const char* const stop = line_feed_ < return_ ? line_feed_ : return_;
        if (quote_ < stop) return row_with_quotes(row);
        if (stop == end_) return {end_, 0, false};
        return {stop + ((*stop == '\r' && stop + 1 < end_ && stop[1] == '\n') ? 2 : 1), 0, false};
    }

private:
    const char* find(char wanted, const char* from) const {
        if (from >= end_) return end_;
        const void* found = std::memchr(from, wanted, static_cast<std::size_t>(end_ - from));
        return found ? static_cast<const char*>(found) : end_;
    }
    RowEnd row_with_quotes(const char* row) const {
        RowEnd result{row, 0, false};
        for (bool row_ends = false; !row_ends;) {
            const Cell cell = next_cell(result.next, end_, delimiter_);
            result = {cell.next, result.line_breaks + cell.line_breaks, cell.open};
            row_ends = cell.row_ends;
        }
        return result;
    }

    const char* end_;
    char delimiter_;
    const char* line_feed_;
    const char* return_;
    const char* quote_;
};

}  // namespace rivalfold
