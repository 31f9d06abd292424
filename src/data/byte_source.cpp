#include "data/byte_source.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cerrno>
#include <cstring>
#include <filesystem>
#include <system_error>
#include <vector>

#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

namespace rivalfold {
namespace {

constexpr std::size_t kMostNeighbours = 10000;  ///< files of a folder looked at for a near name

std::string message_of(int error) { return std::generic_category().message(error); }

Fault missing_file(const std::string& path) {
    namespace fs = std::filesystem;
    const fs::path wanted(path);
    const fs::path folder = wanted.has_parent_path() ? wanted.parent_path() : fs::path(".");
    std::error_code failed;
    std::vector<std::string> names;
    for (fs::directory_iterator entry(folder, failed), end; !failed && entry != end; entry.increment(failed)) {
        names.push_back(entry->path().filename().string());
        if (names.size() == kMostNeighbours) break;
    }
    if (!fs::is_directory(folder, failed))
        return {path, {}, {}, fmt::format("no such file, and no folder {}", in_quotes(folder.string())), {}, {}};
    std::sort(names.begin(), names.end());
    return {path, {}, {}, "no such file", did_you_mean(wanted.filename().string(), names), {}};
}

/// Opens a regular file; on trouble says what it is and returns -1.
int open_file(const std::string& path, std::uint64_t& size, std::optional<Fault>& trouble) {
    const auto say = [&](std::string message) { trouble = Fault{path, {}, {}, std::move(message), {}, {}}; };
    struct stat status {};
    if (stat(path.c_str(), &status) != 0) {
        const int error = errno;
        if (error == ENOENT || error == ENOTDIR)
            trouble = missing_file(path);
        else
            say(fmt::format("cannot be read: {}", message_of(error)));
        return -1;
    }
    if (S_ISDIR(status.st_mode)) return say("this is a folder; expected a data file"), -1;
    if (!S_ISREG(status.st_mode)) return say("this is not a regular file; save the data to a file first"), -1;
    const int descriptor = open(path.c_str(), O_RDONLY | O_CLOEXEC);
    if (descriptor < 0) return say(fmt::format("cannot be read: {}", message_of(errno))), -1;
    size = static_cast<std::uint64_t>(status.st_size);
    return descriptor;
}

}  // namespace

std::size_t TextSource::read_at(std::uint64_t offset, char* into, std::size_t most) const {
    if (offset >= text_.size()) return 0;
    const std::size_t n = std::min<std::size_t>(most, text_.size() - static_cast<std::size_t>(offset));
    std::memcpy(into, text_.data() + offset, n);
    return n;
}

FileSource::FileSource(const std::string& path) : path_(path) {
    std::optional<Fault> trouble;
    descriptor_ = open_file(path, size_, trouble);
    if (trouble) throw FaultError(std::move(*trouble));
}

FileSource::~FileSource() {
    if (descriptor_ >= 0) close(descriptor_);
}

std::size_t FileSource::read_at(std::uint64_t offset, char* into, std::size_t most) const {
    std::size_t filled = 0;
    while (filled < most) {
        const ssize_t got = pread(descriptor_, into + filled, most - filled, static_cast<off_t>(offset + filled));
        if (got == 0) break;
        if (got < 0 && errno == EINTR) continue;
        if (got < 0)
            throw FaultError(Fault{path_, {}, {}, fmt::format("cannot be read: {}", message_of(errno)), {}, {}});
        filled += static_cast<std::size_t>(got);
    }
    return filled;
}

std::optional<Fault> file_trouble(const std::string& path) {
    std::optional<Fault> trouble;
    std::uint64_t size = 0;
    const int descriptor = open_file(path, size, trouble);
    if (descriptor >= 0) close(descriptor);
    return trouble;
}

}  // namespace rivalfold
