#include "data/layout.hpp"

#include "data/plain_text.hpp"
#include "data/row_scanner.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <string>
#include <unordered_map>

namespace rivalfold {
namespace {

constexpr std::size_t kSampleBytes = std::size_t{1} << 16;

[[noreturn]] void fail(const std::string& file, std::string position, std::string message) {
    throw FaultError(Fault{file, {}, std::move(position), std::move(message), {}, {}});
}

struct Fit {
    std::size_t n_header = 0;
    std::size_t n_rows = 0;
    std::size_t n_equal = 0;  ///< rows with as many cells as the header, itself included

    bool better_than(const Fit& other) const {
        // Shares compared without division.
        const std::size_t mine = n_equal * other.n_rows;
        const std::size_t theirs = other.n_equal * n_rows;
        return mine != theirs ? mine > theirs : n_header > other.n_header;
    }
};

Fit fit_delimiter(std::string_view sample, bool whole, char delimiter) {
    const char* const end = sample.data() + sample.size();
    Fit fit;
    for (const char* at = sample.data(); at < end;) {
        const char* const row = at;
        std::size_t n_cells = 0;
        for (bool row_ends = false; !row_ends; ++n_cells) {
            const Cell cell = next_cell(at, end, delimiter);
            at = cell.next;
            row_ends = cell.row_ends;
        }
        if (at == end && !whole && fit.n_rows > 0) break;  // perhaps cut in the middle
        if (is_blank_line({row, static_cast<std::size_t>(at - row)}, delimiter)) continue;
        if (fit.n_rows == 0) fit.n_header = n_cells;
        ++fit.n_rows;
        if (n_cells == fit.n_header) ++fit.n_equal;
    }
    return fit;
}

/// Text in two or four bytes per character, which a spreadsheet calls "Unicode text".
bool is_wide_text(std::string_view sample) {
    if (sample.starts_with("\xFF\xFE") || sample.starts_with("\xFE\xFF")) return true;
    if (sample.starts_with(std::string_view("\0\0\xFE\xFF", 4))) return true;
    if (sample.size() < 4) return false;
    // Without a byte order mark: every second byte of plain letters is zero.
    return (sample[0] == 0 && sample[1] != 0 && sample[2] == 0 && sample[3] != 0) ||
           (sample[0] != 0 && sample[1] == 0 && sample[2] != 0 && sample[3] == 0);
}

void check_text(std::string_view sample, const std::string& file) {
    if (is_wide_text(sample))
        fail(file, {}, "this is UTF-16 text; save it as UTF-8 (\"CSV UTF-8\" in most spreadsheets)");
    if (sample.starts_with("PK\x03\x04"))
        fail(file, {}, "this is a spreadsheet or another zip archive, not delimited text; save it as CSV");
}

std::string name_of(const Cell& cell) {
    return std::string(trimmed(cell.doubled ? single_quotes(cell.text) : std::string(cell.text)));
}

void parse_header(std::string_view row, Layout& layout, FaultLog& faults) {
    const char* at = row.data();
    const char* const end = at + row.size();
    std::unordered_map<std::string, std::size_t> seen;
    for (bool row_ends = false; !row_ends;) {
        const Cell cell = next_cell(at, end, layout.delimiter);
        at = cell.next;
        row_ends = cell.row_ends;
        layout.header.push_back(name_of(cell));
        const std::string& name = layout.header.back();
        const std::size_t number = layout.header.size();
        const auto say = [&](std::string message) {
            faults.add({layout.file, {}, fmt::format("header, column {}", number), std::move(message), {}, {}});
        };
        if (cell.open) say("the quote that opens this cell is never closed");
        if (cell.trailing) say("text follows the closing quote; a quote inside quotes is written twice (\"\")");
        if (!is_utf8(name)) say(fmt::format("{} is not UTF-8 text; save the file as UTF-8", in_quotes(name)));
        if (name.empty()) continue;
        const auto [first, is_new] = seen.emplace(name, number);
        if (!is_new)
            say(fmt::format("{} is the name of column {} too; rename one of them", in_quotes(name), first->second));
    }
}

}  // namespace

char find_delimiter(std::string_view sample, bool whole) {
    // The comma stands last: among equals it is the one that also occurs inside numbers.
    constexpr std::array<char, 4> kCandidates = {';', '\t', '|', ','};
    char best = ',';
    Fit best_fit;
    for (const char candidate : kCandidates) {
        const Fit fit = fit_delimiter(sample, whole, candidate);
        if (fit.n_header < 2) continue;
        if (best_fit.n_rows == 0 || fit.better_than(best_fit)) {
            best = candidate;
            best_fit = fit;
        }
    }
    return best;
}

Layout read_layout(const ByteSource& source, const std::string& file, char delimiter, FaultLog& faults) {
    std::string sample(kSampleBytes, '\0');
    sample.resize(source.read_at(0, sample.data(), sample.size()));
    check_text(sample, file);
    constexpr std::string_view kByteOrderMark = "\xEF\xBB\xBF";
    Layout layout;
    layout.file = file;
    layout.rows_begin = sample.starts_with(kByteOrderMark) ? kByteOrderMark.size() : 0;
    std::string_view text = std::string_view(sample).substr(static_cast<std::size_t>(layout.rows_begin));
    layout.delimiter = delimiter != 0 ? delimiter : find_delimiter(text, sample.size() == source.size());
    for (;;) {
        RowScanner rows(text.data(), text.data() + text.size(), layout.delimiter);
        const char* const begin = text.data();
        const char* const end = begin + text.size();
        const bool whole = layout.rows_begin + text.size() >= source.size();
        const char* at = begin;
        std::size_t line = 1;
        while (at < end) {
            const RowEnd row = rows.row_from(at);
            const std::string_view bytes(at, static_cast<std::size_t>(row.next - at));
            if (row.next == end && !whole) break;
            at = row.next;
            line += 1 + row.line_breaks;
            if (is_blank_line(bytes, layout.delimiter)) continue;
            if (bytes.find('\0') != std::string_view::npos)
                fail(file, "header", "NUL byte: this is not a text file; save the data as CSV text");
            parse_header(bytes, layout, faults);
            if (row.open) faults.throw_if_any();
            layout.rows_begin += static_cast<std::uint64_t>(at - begin);
            layout.first_line = line;
            return layout;
        }
        if (whole) fail(file, {}, "the file is empty; expected a header row with the column names");
        if (sample.size() >= kMostRowBytes)
            fail(file, "header", fmt::format("longer than {} bytes; is a closing quote missing?", kMostRowBytes));
        sample.resize(sample.size() * 4);
        sample.resize(source.read_at(0, sample.data(), sample.size()));
        text = std::string_view(sample).substr(static_cast<std::size_t>(layout.rows_begin));
    }
}

std::string position_of(std::size_t row, std::size_t line) {
    // A header line and one line for each row is what a reader expects.
    return line == row + 2 ? fmt::format("row {}", row + 1) : fmt::format("row {} (line {})", row + 1, line);
}

std::string position_of(std::size_t row, std::size_t line, const Layout& layout, std::size_t column) {
    const std::string name = column < layout.header.size() && !layout.header[column].empty()
                                 ? in_quotes(layout.header[column])
                                 : fmt::format("number {}", column + 1);
    return fmt::format("{}, column {}", position_of(row, line), name);
}

}  // namespace rivalfold
