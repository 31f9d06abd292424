#include "data/cells.hpp"

#include <algorithm>

namespace rivalfold {

Cell quoted_cell(const char* quote, const char* end, char delimiter) {
    Cell cell;
    cell.quoted = true;
    const char* const begin = quote + 1;
    const char* at = begin;
    for (; at < end; ++at) {
        const char c = *at;
        if (c == '"') {
            if (at + 1 == end || at[1] != '"') break;
            cell.doubled = true;
            ++at;
        } else if (c == '\n' || (c == '\r' && (at + 1 == end || at[1] != '\n'))) {
            ++cell.line_breaks;
        }
    }
    cell.open = at == end;
    cell.text = {begin, static_cast<std::size_t>(at - begin)};
    if (!cell.open) ++at;
    while (at < end && is_blank(*at, delimiter)) ++at;
    const char* const after = at;
    while (at < end && *at != delimiter && *at != '\n' && *at != '\r') ++at;
    cell.trailing = at != after;
    end_cell(cell, at, end, delimiter);
    return cell;
}

std::string single_quotes(std::string_view text) {
    std::string out;
    out.reserve(text.size());
    for (std::size_t at = 0; at < text.size(); ++at) {
        out += text[at];
        if (text[at] == '"' && at + 1 < text.size() && text[at + 1] == '"') ++at;
    }
    return out;
}

bool is_blank_line(std::string_view line, char delimiter) {
    return std::all_of(line.begin(), line.end(),
                       [&](char c) { return c == '\n' || c == '\r' || is_blank(c, delimiter); });
}

}  // namespace rivalfold
