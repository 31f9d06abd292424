#include "study/yaml_syntax.hpp"

#include <yaml-cpp/exceptions.h>

namespace rivalfold {
namespace {

struct Wording {
    const char* library;
    const char* ours;
};

// The library's messages that a study file can meet, in words that say what to do.
const Wording kWordings[] = {
    {YAML::ErrorMsg::TAB_IN_INDENTATION, "a tab indents this line; expected spaces"},
    {YAML::ErrorMsg::MAP_KEY, "a key cannot stand here; expected it on a line of its own"},
    {YAML::ErrorMsg::BLOCK_ENTRY, "a list item cannot stand here; expected the dash on a line of its own"},
    {YAML::ErrorMsg::FLOW_END, "a bracket closes here that was never opened"},
    {YAML::ErrorMsg::END_OF_MAP,
     "this line does not fit the keys above it; expected the same indentation, and a colon and a space after each key"},
    {YAML::ErrorMsg::END_OF_SEQ, "this line does not fit the list above it; expected a dash at the same indentation"},
    {YAML::ErrorMsg::END_OF_MAP_FLOW, "\"}\" or a comma is missing here or before"},
    {YAML::ErrorMsg::END_OF_SEQ_FLOW, "\"]\" or a comma is missing here or before"},
    {YAML::ErrorMsg::DOC_IN_SCALAR, "a quote is still open at this document mark"},
    {YAML::ErrorMsg::INVALID_ESCAPE,
     "the backslash here starts no known escape; expected text with a backslash to be in single quotes"},
    {YAML::ErrorMsg::INVALID_HEX,
     "the backslash here starts no known escape; expected text with a backslash to be in single quotes"},
    {YAML::ErrorMsg::INVALID_UNICODE,
     "the backslash here names no character; expected text with a backslash to be in single quotes"},
};

}  // namespace

bool is_quote_closed(std::string_view text, std::size_t opening) {
    const char quote = text[opening];
    for (std::size_t at = opening + 1; at < text.size(); ++at) {
        if (quote == '"' && text[at] == '\\') {
            ++at;
        } else if (text[at] == quote) {
            if (quote == '"' || at + 1 >= text.size() || text[at + 1] != quote) return true;
            ++at;
        }
    }
    return false;
}

std::optional<std::size_t> find_open_quote(std::string_view text) {
    constexpr std::size_t kMostTried = 1000;
    std::size_t at = text.size();
    for (std::size_t n_tried = 0; n_tried < kMostTried && at > 0; ++n_tried) {
        at = text.find_last_of("\"'", at - 1);
        if (at == std::string_view::npos) break;
        const bool may_open = at == 0 || std::string_view(" \n\t[{,:-").find(text[at - 1]) != std::string_view::npos;
        if (may_open && !is_quote_closed(text, at)) return at;
    }
    return std::nullopt;
}

std::string syntax_wording(std::string_view message) {
    for (const Wording& wording : kWordings)
        if (message.starts_with(wording.library)) return wording.ours;
    return "this is not YAML: " + std::string(message);
}

}  // namespace rivalfold
