// How a delimited file is laid out: its delimiter, its header and where the rows begin.
// Knows nothing of what the cells mean.
#pragma once

#include "data/byte_source.hpp"
#include "data/fault_log.hpp"

#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

namespace rivalfold {

constexpr std::size_t kMostCellBytes = std::size_t{1} << 20;  ///< a longer cell is a quote that was never closed
constexpr std::size_t kMostRowBytes = std::size_t{1} << 26;

struct Layout {
    std::string file;  ///< as the user named it
    char delimiter = ',';
    std::vector<std::string> header;  ///< trimmed; escaped quotes undone
    std::uint64_t rows_begin = 0;     ///< offset of the first byte after the header
    std::size_t first_line = 1;       ///< line number, from 1, at that offset
};

/// The delimiter among , ; tab | that cuts the most of the first rows into as many cells as the header has, and among
/// equals into the most cells; a comma if none cuts the header. `whole`: the sample is the whole text.
char find_delimiter(std::string_view sample, bool whole);

/// Opens the file: encoding, delimiter (0: found) and header. Throws FaultError if it is empty, UTF-16 or not text, or
/// if its header cannot be read; a column named twice goes to `faults`.
Layout read_layout(const ByteSource& source, const std::string& file, char delimiter, FaultLog& faults);

/// A part of the file that holds whole rows.
struct Stretch {
    std::uint64_t begin = 0;
    std::size_t bytes = 0;
    std::size_t first_row = 0;  ///< from 0
    std::size_t n_rows = 0;
    std::size_t first_line = 0;  ///< from 1
};

struct RowIndex {
    std::vector<Stretch> stretches;
    std::size_t n_rows = 0;
};

/// Counts the rows and cuts the file into stretches. Blank lines hold no row, except in a file of one column, where one
/// is an empty cell unless only blank lines follow. Throws FaultError: NUL bytes, an unclosed quote, a cell longer
/// than kMostCellBytes, a row longer than kMostRowBytes, no rows.
RowIndex index_rows(const ByteSource& source, const Layout& layout);

/// `row 7, column "pln1"`, with the line where it cannot be guessed from the row: `row 7 (line 12)`. Row from 0.
std::string position_of(std::size_t row, std::size_t line);
std::string position_of(std::size_t row, std::size_t line, const Layout& layout, std::size_t column);

}  // namespace rivalfold
