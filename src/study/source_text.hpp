// The text of a study file as lines: where is line 14, which character is byte 9 of it, and can it be read at all?
// Knows nothing of YAML.
#pragma once

#include "rivalfold/study/fault.hpp"

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

namespace rivalfold {

inline constexpr std::size_t kMostBytes = std::size_t{4} * 1024 * 1024;  ///< of a study file
/// Of one line: the YAML library reads a line ahead, at some 250 bytes of memory a byte.
inline constexpr std::size_t kMostLineBytes = std::size_t{64} * 1024;

/// Line `number` (from 1) of a text whose lines end in LF, CRLF or CR; a byte order mark is left out. Empty when
/// absent.
std::string line_of(std::string_view text, std::size_t number);

/// A text without its byte order mark and with LF as its only line end, so that places can be looked up.
class SourceText {
public:
    explicit SourceText(std::string_view raw);

    const std::string& text() const noexcept { return text_; }
    /// Line `number`, from 1; empty when there is no such line.
    std::string_view line(std::size_t number) const;
    /// The place of a byte; line and byte column count from 0 as YAML libraries do. Beyond the end: the last place.
    Place place(std::size_t line_index, std::size_t byte_column) const;
    /// The byte offset in text() of the same.
    std::size_t offset(std::size_t line_index, std::size_t byte_column) const;
    /// The place of the byte at an offset in text().
    Place place_of_offset(std::size_t offset) const;
    std::size_t n_lines() const noexcept { return starts_.size(); }

private:
    std::size_t characters_before(std::size_t offset) const;

    std::string text_;
    std::vector<std::size_t> starts_;   // offset of each line's first byte
    std::vector<std::size_t> counted_;  // characters before every 256th byte: a line may be 4 MiB long
};

/// What keeps raw text from being read at all: too long, a line too long, UTF-16, NUL bytes, no UTF-8, control
/// characters. Returns at most one fault, located, without its source line when the text is not UTF-8.
std::vector<Fault> check_encoding(std::string_view raw, const std::string& path);

}  // namespace rivalfold
