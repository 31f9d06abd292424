// Where the bytes of a data file come from: a file on disk or a text in memory, read at any offset.
// Knows nothing of rows or cells.
#pragma once

#include "rivalfold/study/fault.hpp"

#include <cstddef>
#include <cstdint>
#include <optional>
#include <string>
#include <string_view>

namespace rivalfold {

class ByteSource {
public:
    virtual ~ByteSource() = default;
    /// Bytes when opened.
    virtual std::uint64_t size() const = 0;
    /// Fills `into` with the bytes from `offset` on; returns how many there were, less than `most` only at the end.
    /// May be called by several threads at once.
    virtual std::size_t read_at(std::uint64_t offset, char* into, std::size_t most) const = 0;
};

class TextSource final : public ByteSource {
public:
    explicit TextSource(std::string_view text) : text_(text) {}
    std::uint64_t size() const override { return text_.size(); }
    std::size_t read_at(std::uint64_t offset, char* into, std::size_t most) const override;

private:
    std::string_view text_;
};

class FileSource final : public ByteSource {
public:
    /// Throws FaultError when file_trouble() has something to say.
    explicit FileSource(const std::string& path);
    ~FileSource() override;
    FileSource(const FileSource&) = delete;
    FileSource& operator=(const FileSource&) = delete;
    std::uint64_t size() const override { return size_; }
    std::size_t read_at(std::uint64_t offset, char* into, std::size_t most) const override;

private:
    std::string path_;
    int descriptor_ = -1;
    std::uint64_t size_ = 0;
};

/// Why `path` cannot be read as a data file: `no such file` (hint: the nearest name in its folder), `is a folder, not a
/// file`, ... Nothing when it can be opened. The fault's file is `path`.
std::optional<Fault> file_trouble(const std::string& path);

}  // namespace rivalfold
