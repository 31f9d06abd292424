// What is wrong with text that is not YAML, beyond what the YAML library says of it: open quotes, and its messages in
// words that say what to do. Knows no tree.
#pragma once

#include <cstddef>
#include <optional>
#include <string>
#include <string_view>

namespace rivalfold {

/// True if the quoted scalar that opens at a byte of the text, with " or ', is closed before the text ends.
bool is_quote_closed(std::string_view text, std::size_t opening);

/// The byte of the last quote that stands where a value may begin and is not closed after it.
std::optional<std::size_t> find_open_quote(std::string_view text);

/// The library's message in our words, or `this is not YAML: ` and the message.
std::string syntax_wording(std::string_view message);

}  // namespace rivalfold
