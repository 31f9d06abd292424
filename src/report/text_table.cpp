#include "report/text_table.hpp"

#include "study/characters.hpp"

#include <algorithm>

namespace rivalfold {
namespace {

std::string spaces(std::size_t count) { return std::string(count, ' '); }

/// Bytes of the longest beginning that is no wider than `width`; with `some`, at least one character.
std::size_t bytes_within(std::string_view text, std::size_t width, bool some) {
    std::size_t used = 0, at = 0;
    while (at < text.size()) {
        const Character character = character_at(text, at);
        used += display_width(character.code);
        if (used > width && !(some && at == 0)) break;
        at += character.size;
    }
    return at;
}

}  // namespace

std::size_t display_width(std::string_view text) {
    std::size_t width = 0;
    for (const Character& character : characters(text)) width += display_width(character.code);
    return width;
}

std::string cut_to(std::string_view text, std::size_t width) {
    if (display_width(text) <= width) return std::string(text);
    return std::string(text.substr(0, bytes_within(text, width > 0 ? width - 1 : 0, false))) + "…";
}

std::string wrap(std::string_view text, std::size_t width, std::size_t indent) {
    std::string out;
    std::size_t used = 0;
    bool line_begins = true;
    const auto new_line = [&] {
        out += "\n" + spaces(indent);
        used = indent;
        line_begins = true;
    };
    for (std::size_t at = 0; at < text.size();) {
        const std::size_t stop = std::min(text.find(' ', at), text.size());
        std::string_view word = text.substr(at, stop - at);
        at = stop + 1;
        if (word.empty()) continue;
        if (!line_begins && used + 1 + display_width(word) > width) new_line();
        if (!line_begins) {
            out += ' ';
            ++used;
        }
        while (used + display_width(word) > width) {  // a word longer than a line, e.g. a name without spaces
            const std::size_t part = bytes_within(word, width > used ? width - used : 0, true);
            if (part == word.size()) break;
            out += word.substr(0, part);
            word.remove_prefix(part);
            new_line();
        }
        out += word;
        used += display_width(word);
        line_begins = false;
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
        // Long names give way, short ones first: what a short column does not need goes to the longer ones. Each keeps
        // at least 8 characters.
        std::vector<std::size_t> shortest_first;
        for (std::size_t c = 0; c < columns_.size(); ++c)
            if (columns_[c].text) shortest_first.push_back(c);
        std::stable_sort(shortest_first.begin(), shortest_first.end(),
                         [&](std::size_t a, std::size_t b) { return needed[a] < needed[b]; });
        std::size_t left = available, open = text_columns;
        for (const std::size_t c : shortest_first) {
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
