#include "data/layout.hpp"
#include "data/row_scanner.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cstring>

namespace rivalfold {
namespace {

constexpr std::size_t kBlockBytes = std::size_t{1} << 20;
constexpr std::size_t kStretchBytes = std::size_t{1} << 18;

class RowCounter {
public:
    RowCounter(const ByteSource& source, const Layout& layout)
        : source_(source),
          layout_(layout),
          one_column_(layout.header.size() == 1),
          buffer_(static_cast<std::size_t>(std::min<std::uint64_t>(kBlockBytes, source.size() + 1))),
          base_(layout.rows_begin),
          line_(layout.first_line) {
        stretch_ = {base_, 0, 0, 0, line_};
    }

    RowIndex count() {
        for (bool at_end = false; !at_end;) {
            at_end = fill();
            const std::size_t used = take_rows(at_end);
            if (used == 0 && filled_ == buffer_.size()) grow();
            std::memmove(buffer_.data(), buffer_.data() + used, filled_ - used);
            filled_ -= used;
            base_ += used;
            if (nul_ != nullptr) nul_ -= used;
        }
        close_stretch();
        drop_trailing_blanks();
        return std::move(index_);
    }

private:
    /// Reads on; true when nothing follows.
    bool fill() {
        char* const into = buffer_.data() + filled_;
        const std::size_t wanted = buffer_.size() - filled_;
        const std::size_t got = source_.read_at(base_ + filled_, into, wanted);
        nul_ = nul_ != nullptr ? nul_ : static_cast<const char*>(std::memchr(into, 0, got));
        filled_ += got;
        return got < wanted;
    }

    /// Counts the whole rows in the buffer; returns the bytes that they take.
    std::size_t take_rows(bool at_end) {
        const char* const begin = buffer_.data();
        const char* const end = begin + filled_;
        RowScanner rows(begin, end, layout_.delimiter);
        const char* at = begin;
        while (at < end) {
            const RowEnd row = rows.row_from(at);
            const auto length = static_cast<std::size_t>(row.next - at);
            if (length > kMostCellBytes) check_cells(at, row.next);
            if (row.next == end && !at_end) break;  // it may go on
            if (nul_ != nullptr && nul_ < row.next)
                fail("NUL byte: this is not a text file; save the data as CSV text");
            if (row.open) fail_at_open_quote(at, end);
            take_row({at, length}, row.line_breaks);
            at = row.next;
        }
        return static_cast<std::size_t>(at - begin);
    }

    void take_row(std::string_view row, std::size_t line_breaks) {
        const char first = row.front();
        const bool may_be_blank = first == '\n' || first == '\r' || is_blank(first, layout_.delimiter);
        const bool blank = may_be_blank && is_blank_line(row, layout_.delimiter);
        stretch_.bytes += row.size();
        line_ += 1 + line_breaks;
        if (!blank || one_column_) ++stretch_.n_rows;
        trailing_blanks_ = blank && one_column_ ? trailing_blanks_ + 1 : 0;
        if (stretch_.bytes >= kStretchBytes) close_stretch();
    }

    void close_stretch() {
        if (stretch_.n_rows > 0) index_.stretches.push_back(stretch_);
        index_.n_rows += stretch_.n_rows;
        stretch_ = {stretch_.begin + stretch_.bytes, 0, index_.n_rows, 0, line_};
    }

    void drop_trailing_blanks() {
        index_.n_rows -= trailing_blanks_;
        while (trailing_blanks_ > 0) {
            Stretch& last = index_.stretches.back();
            const std::size_t dropped = std::min(trailing_blanks_, last.n_rows);
            last.n_rows -= dropped;
            trailing_blanks_ -= dropped;
            if (last.n_rows == 0) index_.stretches.pop_back();
        }
    }

    std::size_t row_now() const { return index_.n_rows + stretch_.n_rows; }

    [[noreturn]] void fail(std::string message) const {
        throw FaultError(Fault{layout_.file, {}, position_of(row_now(), line_), std::move(message), {}, {}});
    }

    [[noreturn]] void fail(std::size_t column, std::string message) const {
        const std::string position = position_of(row_now(), line_, layout_, column);
        throw FaultError(Fault{layout_.file, {}, position, std::move(message), {}, {}});
    }

    /// Finds the cell of a long row that is too long to be one.
    void check_cells(const char* at, const char* end) const {
        for (std::size_t column = 0; at < end; ++column) {
            const Cell cell = next_cell(at, end, layout_.delimiter);
            if (cell.text.size() > kMostCellBytes)
                fail(column,
                     fmt::format("this cell is longer than {} bytes; {}", kMostCellBytes,
                                 cell.quoted ? "is its closing quote missing?" : "is this a delimited text file?"));
            at = cell.next;
        }
    }

    [[noreturn]] void fail_at_open_quote(const char* at, const char* end) const {
        std::size_t column = 0;
        for (; at < end; ++column) {
            const Cell cell = next_cell(at, end, layout_.delimiter);
            if (cell.open) break;
            at = cell.next;
        }
        fail(column, "the quote that opens this cell is never closed");
    }

    void grow() {
        if (buffer_.size() >= kMostRowBytes) fail(fmt::format("this row is longer than {} bytes", kMostRowBytes));
        const std::ptrdiff_t nul_at = nul_ != nullptr ? nul_ - buffer_.data() : -1;
        buffer_.resize(buffer_.size() * 2);
        nul_ = nul_at >= 0 ? buffer_.data() + nul_at : nullptr;
    }

    const ByteSource& source_;
    const Layout& layout_;
    const bool one_column_;
    std::vector<char> buffer_;
    std::size_t filled_ = 0;
    std::uint64_t base_;         ///< offset in the file of the buffer's first byte
    const char* nul_ = nullptr;  ///< the first NUL byte in the buffer
    std::size_t line_;
    std::size_t trailing_blanks_ = 0;
    Stretch stretch_;
    RowIndex index_;
};

}  // namespace

RowIndex index_rows(const ByteSource& source, const Layout& layout) {
    RowIndex index = RowCounter(source, layout).count();
    if (index.n_rows == 0)
        throw FaultError(Fault{layout.file, {}, {}, "the file holds a header but no rows of data", {}, {}});
    return index;
}

}  // namespace rivalfold
