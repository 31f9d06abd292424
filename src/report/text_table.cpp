#include "report/text_table.hpp"

#include <algorithm>

namespace rivalfold {
namespace {

bool starts_character(char c) { return (static_cast<unsigned char>(c) & 0xC0) != 0x80; }

std::string spaces(std::size_t count) { return std::string(count, ' '); }

}  // namespace

std::size_t display_width(std::string_view text) { return static_cast<std::size_t>(std::count_if(text.begin(), text.end(), starts_character)); }

std::string cut_to(std::string_view text, std::size_t width) {
    if (display_width(text) <= width) return std::string(text);
    std::size_t characters = 0, at = 0;
    for (; at < text.size(); ++at) {
        if (!starts_character(text[at])) continue;
        if (characters + 1 >= width) break;
        ++characters;
    }
    return std::string(text.substr(0, at)) + "…";
}

std::string wrap(std::string_view text, std::size_t width, std::size_t indent) {
    std::string out;
    std::size_t used = 0;
    for (std::size_t at = 0; at < text.size();) {
        const std::size_t stop = std::min(text.find(' ', at), text.size());
        const std::string_view word = text.substr(at, stop - at);
        const std::size_t needed = display_width(word);
        if (used > indent && used + 1 + needed > width) {
            out += "\n" + spaces(indent);
            used = indent;
        } else if (used > 0 && !out.empty() && out.back() != ' ') {
            out += ' ';
            ++used;
        }
        out += word;
        used += needed;
        at = stop + 1;
    }
    return out;
}

std::string TextTable::render(std::size_t width) const {
    std::vector<std::size_t> needed(columns_.size());
    std::size_t fixed_part = columns_.size() > 1 ? 2 * (columns_.size() - 1) : 0, text_part = 0, text_columns = 0;
    for (std::size_t c = 0; c < columns_.size(); ++c) {
        needed[c] = display_width(columns_[c].title);
        for (const auto& row : rows_) needed[c] = std::max(needed[c], display_width(row[c]));
        (columns_[c].text ? text_part : fixed_part) += needed[c];
        text_columns += columns_[c].text ? 1 : 0;
    }
    const std::size_t available = width > fixed_part ? width - fixed_part : 0;
    if (text_part > available && text_columns > 0) {
        // Long names give way: every text column keeps at least 8 characters.
        std::size_t left = available, open = text_columns;
        for (std::size_t c = 0; c < columns_.size(); ++c) {
            if (!columns_[c].text) continue;
            needed[c] = std::min(needed[c], std::max<std::size_t>(8, left / open));
            left -= std::min(left, needed[c]);
            --open;
        }
    }
    std::string out;
    const auto add_line = [&](const std::vector<std::string>& cells) {
        std::string line;
        for (std::size_t c = 0; c < columns_.size(); ++c) {
            const std::string cell = columns_[c].text ? cut_to(cells[c], needed[c]) : cells[c];
            const std::string gap = spaces(needed[c] - std::min(needed[c], display_width(cell)));
            line += (c > 0 ? "  " : "") + (columns_[c].text ? cell + gap : gap + cell);
        }
        line.erase(line.find_last_not_of(' ') + 1);
        out += line + "\n";
    };
    std::vector<std::string> titles;
    for (const Column& column : columns_) titles.push_back(column.title);
    add_line(titles);
    for (const auto& row : rows_) add_line(row);
    return out;
}

}  // namespace rivalfold
