#include "study/characters.hpp"

#include <fmt/format.h>
#include <algorithm>
#include <array>

namespace rivalfold {
namespace {

constexpr std::size_t kQuotedCharacters = 60;

struct CodeRange {
    char32_t first;
    char32_t last;
};

bool within(char32_t code, const auto& ranges) {
    return std::any_of(ranges.begin(), ranges.end(),
                       [code](const CodeRange& range) { return code >= range.first && code <= range.last; });
}

// The common blocks of Unicode's East Asian Width classes W and F (UAX 11) and of combining marks; from memory, and
// coarse: a wrong width moves only the caret of a fault.
constexpr std::array kWide = {CodeRange{0x1100, 0x115F},   CodeRange{0x2E80, 0x303E},   CodeRange{0x3041, 0xA4CF},
                              CodeRange{0xAC00, 0xD7A3},   CodeRange{0xF900, 0xFAFF},   CodeRange{0xFE30, 0xFE6F},
                              CodeRange{0xFF00, 0xFF60},   CodeRange{0xFFE0, 0xFFE6},   CodeRange{0x1F300, 0x1F64F},
                              CodeRange{0x1F680, 0x1F6FF}, CodeRange{0x1F900, 0x1F9FF}, CodeRange{0x20000, 0x3FFFD}};
constexpr std::array kCombining = {CodeRange{0x0300, 0x036F}, CodeRange{0x0483, 0x0489}, CodeRange{0x0591, 0x05BD},
                                   CodeRange{0x064B, 0x065F}, CodeRange{0x1AB0, 0x1AFF}, CodeRange{0x1DC0, 0x1DFF},
                                   CodeRange{0x20D0, 0x20FF}, CodeRange{0xFE00, 0xFE0F}, CodeRange{0xFE20, 0xFE2F}};
// Zero-width and bidirectional controls, line separators, byte order mark, noncharacters at the end of plane 0.
constexpr std::array kMisleading = {CodeRange{0x0000, 0x001F},  CodeRange{0x007F, 0x009F}, CodeRange{0x061C, 0x061C},
                                    CodeRange{0x200B, 0x200F},  CodeRange{0x2028, 0x202E}, CodeRange{0x2060, 0x206F},
                                    CodeRange{0xFEFF, 0xFEFF},  CodeRange{0xFFF9, 0xFFFB}, CodeRange{0xFFFE, 0xFFFF},
                                    CodeRange{0xE0000, 0xE007F}};

std::size_t sequence_size(unsigned char lead) {
    if (lead < 0x80) return 1;
    if (lead >= 0xC2 && lead <= 0xDF) return 2;
    if (lead >= 0xE0 && lead <= 0xEF) return 3;
    if (lead >= 0xF0 && lead <= 0xF4) return 4;
    return 0;
}

}  // namespace

Character character_at(std::string_view text, std::size_t offset) {
    const auto byte = [&](std::size_t at) { return static_cast<unsigned char>(text[at]); };
    const unsigned char lead = byte(offset);
    const std::size_t size = sequence_size(lead);
    const Character broken{lead, offset, 1, false};
    if (size == 0 || size > text.size() - offset) return broken;
    constexpr std::array<unsigned char, 5> kLeadBits = {0, 0x7F, 0x1F, 0x0F, 0x07};
    char32_t code = lead & kLeadBits[size];
    for (std::size_t k = 1; k < size; ++k) {
        if ((byte(offset + k) & 0xC0) != 0x80) return broken;
        code = (code << 6) | (byte(offset + k) & 0x3F);
    }
    constexpr std::array<char32_t, 5> kSmallest = {0, 0, 0x80, 0x800, 0x10000};
    const bool surrogate = code >= 0xD800 && code <= 0xDFFF;
    if (code < kSmallest[size] || code > 0x10FFFF || surrogate) return broken;
    return {code, offset, size, true};
}

std::vector<Character> characters(std::string_view text) {
    std::vector<Character> all;
    for (std::size_t offset = 0; offset < text.size(); offset += all.back().size)
        all.push_back(character_at(text, offset));
    return all;
}

bool is_control(char32_t code) { return within(code, kMisleading); }

std::string shown(std::string_view text, const Character& character) {
    if (!character.valid) return fmt::format("\\x{:02x}", static_cast<unsigned>(character.code));
    if (!is_control(character.code)) return std::string(text.substr(character.offset, character.size));
    if (character.code == U'\n') return "\\n";
    if (character.code == U'\r') return "\\r";
    if (character.code == U'\t') return "\\t";
    const auto code = static_cast<unsigned>(character.code);
    if (code < 0x100) return fmt::format("\\x{:02x}", code);
    return code < 0x10000 ? fmt::format("\\u{:04x}", code) : fmt::format("\\U{:08x}", code);
}

std::string escape_controls(std::string_view text) {
    std::string escaped;
    escaped.reserve(text.size());
    for (std::size_t offset = 0; offset < text.size();) {
        const Character character = character_at(text, offset);
        escaped += shown(text, character);
        offset += character.size;
    }
    return escaped;
}

std::size_t display_width(char32_t code) {
    if (within(code, kCombining)) return 0;
    return within(code, kWide) ? 2 : 1;
}

std::string in_quotes(std::string_view text) {
    std::size_t offset = 0;
    for (std::size_t count = 0; offset < text.size() && count < kQuotedCharacters; ++count)
        offset += character_at(text, offset).size;
    return fmt::format("\"{}{}\"", text.substr(0, offset), offset < text.size() ? "..." : "");
}

std::string joined(const std::vector<std::string>& words, std::string_view last_link) {
    std::string all;
    for (std::size_t k = 0; k < words.size(); ++k) {
        if (k > 0) all += k + 1 == words.size() ? fmt::format(" {} ", last_link) : ", ";
        all += words[k];
    }
    return all;
}

char32_t folded(char32_t code) {
    if (code >= U'A' && code <= U'Z') return code + 0x20;
    if (code >= 0xC0 && code <= 0xDE && code != 0xD7) return code + 0x20;
    if (code >= 0x391 && code <= 0x3A9) return code + 0x20;
    if (code >= 0x410 && code <= 0x42F) return code + 0x20;
    return code >= 0x400 && code <= 0x40F ? code + 0x50 : code;
}

}  // namespace rivalfold
