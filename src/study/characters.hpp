// How text of unknown origin is read and shown one character at a time: UTF-8, widths on a terminal, escapes.
// Knows nothing of study files; never lets a control character through to a terminal.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

namespace rivalfold {

/// One character of a text: its code point and its bytes. A byte that is no UTF-8 stands alone with valid = false.
struct Character {
    char32_t code = 0;
    std::size_t offset = 0;
    std::size_t size = 1;
    bool valid = true;
};

/// The character that starts at byte `offset` (below text.size()). Well-formed sequences as in RFC 3629, section 4.
Character character_at(std::string_view text, std::size_t offset);

/// All characters of a text in order.
std::vector<Character> characters(std::string_view text);

/// True for what a terminal or a reader could be misled by: C0 and C1 controls, bidirectional overrides, line
/// separators.
bool is_control(char32_t code);

/// The text with every control character and invalid byte written out, e.g. \n, \x1b, \u202e.
std::string escape_controls(std::string_view text);

/// One character as escape_controls shows it.
std::string shown(std::string_view text, const Character& character);

/// Columns that a character takes on a terminal: 0 (combining), 1 or 2 (East Asian wide, emoji).
std::size_t display_width(char32_t code);

/// The text in double quotes, as faults name what the user wrote; cut after 60 characters.
std::string in_quotes(std::string_view text);

/// `a, b or c`, for lists of what was expected.
std::string joined(const std::vector<std::string>& words, std::string_view last_link);

/// The lower-case form for comparing names: Latin, Greek and Cyrillic capitals, everything else as it is.
char32_t folded(char32_t code);

}  // namespace rivalfold
