// A table for a terminal: columns aligned, names cut to what fits. Knows widths, not meanings.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

namespace rivalfold {

/// Columns that a UTF-8 text takes on a terminal: 2 for an East Asian wide character, 0 for a combining mark.
std::size_t display_width(std::string_view text);
/// The text cut to a width, with an ellipsis where something was cut.
std::string cut_to(std::string_view text, std::size_t width);
/// Words of `text` in lines of at most `width`, each after the first indented by `indent` spaces; a longer word is
/// broken.
std::string wrap(std::string_view text, std::size_t width, std::size_t indent);

class TextTable {
public:
    /// `text` columns are left-aligned and share what width is left over; the others are right-aligned and never cut.
    struct Column {
        std::string title;
        bool text = false;
    };
    explicit TextTable(std::vector<Column> columns) : columns_(std::move(columns)) {}
    void add(std::vector<std::string> cells) { rows_.push_back(std::move(cells)); }
    /// Lines of at most `width` characters (more only where the numbers alone need more).
    std::string render(std::size_t width) const;

private:
    std::vector<Column> columns_;
    std::vector<std::vector<std::string>> rows_;
};

}  // namespace rivalfold
