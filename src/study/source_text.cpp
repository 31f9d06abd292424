#include "study/source_text.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>
#include <algorithm>

namespace rivalfold {
namespace {

constexpr std::string_view kByteOrderMark = "\xEF\xBB\xBF";

std::string_view without_mark(std::string_view raw) {
    return raw.starts_with(kByteOrderMark) ? raw.substr(kByteOrderMark.size()) : raw;
}

constexpr std::size_t kCountStep = 256;

bool starts_character(char byte) { return (static_cast<unsigned char>(byte) & 0xC0) != 0x80; }

Fault whole_file(const std::string& path, std::string message) { return {path, {}, {}, std::move(message), {}, {}}; }

}  // namespace

std::string line_of(std::string_view text, std::size_t number) {
    text = without_mark(text);
    for (std::size_t line = 1; number > 0; ++line) {
        const std::size_t end = text.find_first_of("\r\n");
        if (line == number) return std::string(text.substr(0, end));
        if (end == std::string_view::npos) break;
        text.remove_prefix(end + (text.substr(end).starts_with("\r\n") ? 2 : 1));
    }
    return {};
}

SourceText::SourceText(std::string_view raw) {
    raw = without_mark(raw);
    text_.reserve(raw.size() + 1);
    starts_.push_back(0);
    for (std::size_t k = 0; k < raw.size(); ++k) {
        if (raw[k] == '\r' && k + 1 < raw.size() && raw[k + 1] == '\n') continue;
        text_ += raw[k] == '\r' ? '\n' : raw[k];
        if (text_.back() == '\n') starts_.push_back(text_.size());
    }
    std::size_t n_characters = 0;
    for (std::size_t k = 0; k < text_.size(); ++k) {
        if (k % kCountStep == 0) counted_.push_back(n_characters);
        if (starts_character(text_[k])) ++n_characters;
    }
    counted_.push_back(n_characters);
}

std::size_t SourceText::characters_before(std::size_t offset) const {
    if (offset >= text_.size()) return counted_.back();
    const auto first = text_.begin() + static_cast<std::ptrdiff_t>(offset - offset % kCountStep);
    const auto last = text_.begin() + static_cast<std::ptrdiff_t>(offset);
    return counted_[offset / kCountStep] + static_cast<std::size_t>(std::count_if(first, last, starts_character));
}

std::string_view SourceText::line(std::size_t number) const {
    if (number == 0 || number > starts_.size()) return {};
    const std::size_t from = starts_[number - 1];
    const std::size_t to = number < starts_.size() ? starts_[number] - 1 : text_.size();
    return std::string_view(text_).substr(from, to - from);
}

Place SourceText::place(std::size_t line_index, std::size_t byte_column) const {
    const std::size_t index = std::min(line_index, starts_.size() - 1);
    const std::size_t start = starts_[index];
    const std::size_t n_bytes = line(index + 1).size();
    const std::size_t column = line_index == index ? std::min(byte_column, n_bytes) : n_bytes;
    return {index + 1, characters_before(start + column) - characters_before(start) + 1};
}

std::size_t SourceText::offset(std::size_t line_index, std::size_t byte_column) const {
    if (line_index >= starts_.size()) return text_.size();
    return std::min(starts_[line_index] + byte_column, text_.size());
}

Place SourceText::place_of_offset(std::size_t offset) const {
    const auto after = std::upper_bound(starts_.begin(), starts_.end(), offset);
    const auto index = static_cast<std::size_t>(after - starts_.begin()) - 1;
    return place(index, offset - starts_[index]);
}

std::vector<Fault> check_encoding(std::string_view raw, const std::string& path) {
    if (raw.size() > kMostBytes)
        return {whole_file(path, fmt::format("the file has {} bytes; a study file may have at most {} (4 MiB)",
                                             raw.size(), kMostBytes))};
    if (raw.starts_with("\xFF\xFE") || raw.starts_with("\xFE\xFF"))
        return {whole_file(path, "the file is UTF-16 text; expected UTF-8, so save it as UTF-8")};
    const SourceText source(raw);
    for (std::size_t line = 1; line <= source.n_lines(); ++line)
        if (source.line(line).size() > kMostLineBytes)
            return {{path,
                     {line, 1},
                     {},
                     fmt::format("this line has {} bytes; a line of a study file may have at most {}",
                                 source.line(line).size(), kMostLineBytes),
                     {},
                     {}}};
    const std::string& text = source.text();
    for (std::size_t offset = 0; offset < text.size();) {
        const Character character = character_at(text, offset);
        const bool blank = character.code == U'\n' || character.code == U'\t';
        std::string message;
        if (!character.valid) {
            message = fmt::format("the byte {} is not UTF-8 text; expected UTF-8, so save the file as UTF-8",
                                  in_quotes(shown(text, character)));
        } else if (!blank && (character.code < 0x20 || (character.code >= 0x7F && character.code <= 0x9F))) {
            message = fmt::format("the control character {} may not stand in a study file; expected plain text",
                                  in_quotes(shown(text, character)));
        }
        if (!message.empty()) {
            const Place place = source.place_of_offset(offset);
            return {{path, place, {}, std::move(message), {}, std::string(source.line(place.line))}};
        }
        offset += character.size;
    }
    return {};
}

}  // namespace rivalfold
