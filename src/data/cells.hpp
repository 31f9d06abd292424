// One cell of delimited text: where it ends, and whether its quotes are in order (RFC 4180, and blanks around quotes).
// The one place that knows what a quote means; knows nothing of columns or numbers.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>

namespace rivalfold {

struct Cell {
    std::string_view text;        ///< as written, without the enclosing quotes; doubled quotes still doubled
    const char* next = nullptr;   ///< where the next cell or row begins
    std::size_t line_breaks = 0;  ///< inside the quotes: LF, CRLF or CR
    bool row_ends = false;        ///< it is the last of its row
    bool quoted = false;
    bool doubled = false;   ///< holds doubled quotes
    bool trailing = false;  ///< something follows the closing quote
    bool open = false;      ///< the closing quote is missing
};

/// The quoted cell whose opening quote stands at `quote`.
Cell quoted_cell(const char* quote, const char* end, char delimiter);

/// The text of a quoted cell with doubled quotes made single.
std::string single_quotes(std::string_view text);

/// A line without cells: nothing but spaces (and tabs, where they delimit nothing) up to the line end.
bool is_blank_line(std::string_view line, char delimiter);

inline bool is_blank(char c, char delimiter) { return c == ' ' || (c == '\t' && delimiter != '\t'); }

/// Where the cell or row after one that ends at `stop` begins.
inline void end_cell(Cell& cell, const char* stop, const char* end, char delimiter) {
    cell.row_ends = stop == end || *stop != delimiter;
    if (stop == end)
        cell.next = end;
    else
        cell.next = stop + ((*stop == '\r' && stop + 1 < end && stop[1] == '\n') ? 2 : 1);
}

/// The cell that begins at `from`. A quote opens a quoted cell only as its first character after blanks.
inline Cell next_cell(const char* from, const char* end, char delimiter) {
    const char* at = from;
    while (at < end && is_blank(*at, delimiter)) ++at;
    if (at < end && *at == '"') return quoted_cell(at, end, delimiter);
    while (at < end && *at != delimiter && *at != '\n' && *at != '\r') ++at;
    Cell cell;
    cell.text = {from, static_cast<std::size_t>(at - from)};
    end_cell(cell, at, end, delimiter);
    return cell;
}

}  // namespace rivalfold
