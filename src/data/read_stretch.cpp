#include "data/read_stretch.hpp"

#include "data/plain_text.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>

#include <algorithm>

namespace rivalfold {
namespace {

constexpr std::size_t kBlockRows = 128;
constexpr std::size_t kBlockStride = kBlockRows + 8;  ///< not a power of two: columns then share no cache sets

std::string what_is_wrong(const NumberCell& number, std::string_view text, bool decimal_comma) {
    constexpr std::string_view kCodes = "if it means \"no answer\", add it to missing_codes";
    switch (number.finding) {
        case Finding::infinite:
            return fmt::format("{} is infinite; {}", in_quotes(text), kCodes);
        case Finding::enormous:
            return fmt::format("{} is enormous (above 1e100 in size); {}", in_quotes(text), kCodes);
        default:
            break;
    }
    const bool comma_in_comma_file = !decimal_comma && text.find(',') != std::string_view::npos;
    return fmt::format("{} is not a number; {}", in_quotes(text),
                       comma_in_comma_file ? "decimal commas need another delimiter, such as ;" : kCodes);
}

}  // namespace

StretchReader::StretchReader(const ByteSource& source, const Layout& layout, const NumberRules& rules,
                             const std::vector<ColumnUse>& uses, Table& table)
    : source_(source),
      layout_(layout),
      rules_(rules),
      uses_(uses),
      table_(table),
      block_(kBlockStride * table.chosen.numbers.size()),
      marks_(table.chosen.numbers.size()) {}

void StretchReader::read(const Stretch& stretch, FaultLog& faults) {
    // The line end after the last byte lets the number reader look ahead without asking for the end.
    bytes_.resize(stretch.bytes + 1);
    const std::size_t got = source_.read_at(stretch.begin, bytes_.data(), stretch.bytes);
    bytes_[got] = '\n';
    end_ = bytes_.data() + got;
    faults_ = &faults;
    row_ = stretch.first_row;
    line_ = stretch.first_line;
    block_row_ = 0;
    const char* at = bytes_.data();
    const std::size_t end_row = stretch.first_row + stretch.n_rows;
    const bool one_column = layout_.header.size() == 1;
    while (at < end_ && row_ < end_row) {
        const bool may_be_blank = *at == '\n' || *at == '\r' || is_blank(*at, layout_.delimiter);
        if (may_be_blank && !one_column) {
            const char* const line = at;
            while (at < end_ && is_blank(*at, layout_.delimiter)) ++at;
            if (at == end_ || *at == '\n' || *at == '\r') {
                at += (at + 1 < end_ && *at == '\r' && at[1] == '\n') ? 2 : 1;
                ++line_;
                continue;
            }
            at = line;
        }
        at = read_row(at);
        ++row_;
        if (++block_row_ == kBlockRows) flush_rows();
    }
    flush_rows();
    if (row_ != end_row || got != stretch.bytes)
        throw FaultError(Fault{layout_.file, {}, {}, "the file changed while it was being read; try again", {}, {}});
}

const char* StretchReader::read_row(const char* at) {
    const std::size_t n_columns = uses_.size();
    const std::size_t faults_before = faults_->count();
    const char delimiter = layout_.delimiter;
    breaks_ = 0;
    std::size_t column = 0;
    for (bool row_ends = false; !row_ends; ++column) {
        const ColumnUse use = column < n_columns ? uses_[column] : ColumnUse{};
        if (use.number >= 0 && use.text < 0) {
            // Short whole numbers are most of a survey.
            const auto digit = static_cast<unsigned>(static_cast<unsigned char>(at[0] - '0'));
            if (digit < 10 && at[1] == delimiter) {
                store(use.number, rules_.small(digit));
                at += 2;
                continue;
            }
            double value = 0;
            Mark mark = Mark::none;
            const bool quoted = *at == '"';
            const char* stop = read_plain_number(at + (quoted ? 1 : 0), rules_.decimal_comma(), value, mark);
            if (quoted && stop != nullptr) stop = *stop == '"' ? stop + 1 : nullptr;
            if (stop != nullptr && (*stop == delimiter || *stop == '\n' || *stop == '\r')) {
                store(use.number, rules_.without_codes(value));
                if (mark != Mark::none) note_mark(static_cast<std::size_t>(use.number), mark);
                Cell cell;
                end_cell(cell, stop, end_, delimiter);
                at = cell.next;
                row_ends = cell.row_ends;
                continue;
            }
        }
        at = read_cell(at, column, row_ends);
    }
    if (column != n_columns) {
        // What the cells hold says little once they are shifted.
        faults_->roll_back(faults_before);
        if (faults_->full())
            faults_->count_only();
        else
            faults_->add({layout_.file,
                          {},
                          position_of(row_, line_),
                          fmt::format("expected {} cells, found {}", n_columns, column),
                          {},
                          {}});
    }
    line_ += 1 + breaks_;
    return at;
}

const char* StretchReader::read_cell(const char* at, std::size_t column, bool& row_ends) {
    const Cell cell = next_cell(at, end_, layout_.delimiter);
    row_ends = cell.row_ends;
    breaks_ += cell.line_breaks;
    if (cell.trailing) say(column, "text follows the closing quote; a quote inside quotes is written twice (\"\")");
    if (column >= uses_.size() || cell.trailing) return cell.next;
    if (uses_[column].number >= 0) take_number(cell, column);
    if (uses_[column].text >= 0) take_text(cell, column);
    return cell.next;
}

void StretchReader::take_number(const Cell& cell, std::size_t column) {
    std::string_view text = cell.text;
    if (cell.doubled) text = without_doubles_ = single_quotes(cell.text);
    const NumberCell number = rules_.read(text);
    const int slot = uses_[column].number;
    store(slot, number.value);
    if (number.finding == Finding::number) {
        note_mark(static_cast<std::size_t>(slot), number.mark);
    } else if (number.finding != Finding::missing) {
        if (faults_->full()) return faults_->count_only();
        say(column, what_is_wrong(number, trimmed(text), rules_.decimal_comma()));
    }
}

void StretchReader::take_text(const Cell& cell, std::size_t column) {
    std::string_view text = cell.text;
    if (cell.doubled) text = without_doubles_ = single_quotes(cell.text);
    text = trimmed(text);
    if (!is_utf8(text))
        return say(column, fmt::format("{} is not UTF-8 text; save the file as UTF-8", in_quotes(text)));
    if (!rules_.is_missing_text(text)) table_.texts[static_cast<std::size_t>(uses_[column].text)][row_] = text;
}

void StretchReader::note_mark(std::size_t number_column, Mark mark) {
    if (mark == Mark::none) return;
    std::size_t& first = mark == Mark::point ? marks_[number_column].point : marks_[number_column].comma;
    first = std::min(first, row_);
}

void StretchReader::store(int number_column, double value) {
    block_[static_cast<std::size_t>(number_column) * kBlockStride + block_row_] = value;
}

void StretchReader::flush_rows() {
    if (block_row_ == 0) return;
    for (std::size_t column = 0; column < marks_.size(); ++column) {
        double* const into = table_.numbers.data() + column * table_.n_rows + (row_ - block_row_);
        std::copy_n(block_.data() + column * kBlockStride, block_row_, into);
    }
    block_row_ = 0;
}

void StretchReader::say(std::size_t column, std::string message) {
    if (faults_->full()) return faults_->count_only();
    faults_->add({layout_.file, {}, position_of(row_, line_, layout_, column), std::move(message), {}, {}});
}

}  // namespace rivalfold
