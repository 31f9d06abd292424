#include "rivalfold/report/results_folder.hpp"

#include "report/numbers.hpp"
#include "rivalfold/report/writers.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cerrno>
#include <csignal>
#include <cstdio>
#include <cstring>
#include <exception>
#include <filesystem>
#include <fstream>
#include <memory>
#include <string>
#include <thread>
#include <vector>

#include <fcntl.h>
#include <unistd.h>

namespace rivalfold {
namespace {

namespace fs = std::filesystem;

constexpr std::string_view kBeside = ".rivalfold-";
constexpr std::string_view kSetAside = ".old";
constexpr std::size_t kLongestName = 220;

std::string in_words(int error) { return std::strerror(error); }

void write_file(const fs::path& path, const Outcome& outcome, const ResultFile& file) {
    const std::unique_ptr<std::FILE, int (*)(std::FILE*)> out(std::fopen(path.c_str(), "wb"), std::fclose);
    const auto fail = [&] { throw SaveError(fmt::format("cannot write {}: {}", path.string(), in_words(errno))); };
    if (!out) fail();
    std::string buffer;
    const auto flush = [&] {
        if (std::fwrite(buffer.data(), 1, buffer.size(), out.get()) != buffer.size()) fail();
        buffer.clear();
    };
    file.write(outcome, [&](std::string_view text) {
        buffer += text;
        if (buffer.size() > (1U << 18)) flush();
    });
    flush();
    if (std::fflush(out.get()) != 0) fail();  // no fsync: a killed process loses nothing, and a power cut may
}

/// Folders `.<name>.rivalfold-<process>` whose process is gone, or that an earlier process with our number left. An old
/// result that was set aside (`...old`, see put_in_place) by a process that died before the new one was in place goes
/// back first.
void remove_left_overs(const fs::path& parent, const std::string& name) {
    const std::string prefix = "." + name + std::string(kBeside);
    std::error_code ignored;
    for (const fs::directory_entry& entry : fs::directory_iterator(parent, ignored)) {
        const std::string found = entry.path().filename().string();
        if (found.rfind(prefix, 0) != 0) continue;
        std::string tail = found.substr(prefix.size());
        const bool set_aside = tail.ends_with(kSetAside);
        if (set_aside) tail.resize(tail.size() - kSetAside.size());
        if (tail.empty() || tail.find_first_not_of("0123456789") != std::string::npos || tail.size() > 9) continue;
        const auto process = static_cast<pid_t>(std::stol(tail));
        if (process == getpid() || (kill(process, 0) != 0 && errno == ESRCH)) {
            if (set_aside && !fs::exists(parent / name, ignored)) fs::rename(entry.path(), parent / name, ignored);
            fs::remove_all(entry.path(), ignored);
        }
    }
}

void put_in_place(const fs::path& made, const fs::path& place) {
    if (!fs::exists(place)) {
        if (std::rename(made.c_str(), place.c_str()) != 0)
            throw SaveError(fmt::format("cannot create {}: {}", place.string(), in_words(errno)));
        return;
    }
    if (renameat2(AT_FDCWD, made.c_str(), AT_FDCWD, place.c_str(), RENAME_EXCHANGE) != 0) {
        // File systems without an exchange: two steps, the old folder kept under the temporary name in between.
        const fs::path old = made.string() + std::string(kSetAside);
        if (std::rename(place.c_str(), old.c_str()) != 0)
            throw SaveError(fmt::format("cannot replace {}: {}", place.string(), in_words(errno)));
        if (std::rename(made.c_str(), place.c_str()) != 0) {
            const int error = errno;
            std::rename(old.c_str(), place.c_str());
            throw SaveError(fmt::format("cannot replace {}: {}", place.string(), in_words(error)));
        }
        std::rename(old.c_str(), made.c_str());
    }
    std::error_code ignored;
    fs::remove_all(made, ignored);
}

fs::path parent_of(const fs::path& place) { return place.has_parent_path() ? place.parent_path() : fs::path("."); }

fs::path without_final_slash(const std::string& folder) {
    const fs::path path(folder);
    return path.has_filename() ? path : path.parent_path();
}

/// The first thing in a folder that is not of a results folder: the whole folder is replaced, so nothing else may be in
/// it.
std::string what_is_no_result(const fs::path& folder) {
    std::vector<std::string> found;
    std::error_code ignored;
    for (const fs::directory_entry& entry : fs::directory_iterator(folder, ignored)) {
        const std::string name = entry.path().filename().string();
        const auto& files = result_files();
        const bool known =
            std::any_of(files.begin(), files.end(), [&](const ResultFile& file) { return name == file.name; });
        if (!known || !fs::is_regular_file(entry.symlink_status(ignored))) found.push_back(name);
    }
    if (!found.empty()) return fmt::format("\"{}\"", plain(*std::min_element(found.begin(), found.end())));
    if (fs::is_empty(folder, ignored)) return {};
    std::ifstream manifest(folder / "manifest.json");
    std::string opening(64, '\0');
    manifest.read(opening.data(), static_cast<std::streamsize>(opening.size()));
    return opening.find("\"rivalfold\"") == std::string::npos ? "files without a manifest.json of rivalfold" : "";
}

}  // namespace

std::string default_results_folder(const std::string& study_path) {
    for (const std::string_view ending : {".yaml", ".yml"})
        if (study_path.size() > ending.size() && study_path.ends_with(ending))
            return study_path.substr(0, study_path.size() - ending.size()) + ".results";
    return study_path + ".results";
}

void check_results_folder(const std::string& folder) {
    const fs::path place = without_final_slash(folder);
    std::error_code error;
    const fs::path parent = parent_of(place);
    if (fs::exists(parent, error) && !fs::is_directory(parent, error))
        throw SaveError(fmt::format("cannot write {}: {} is a file, not a folder", folder, parent.string()));
    if (!fs::is_directory(parent, error))
        throw SaveError(fmt::format("cannot write {}: the folder {} does not exist", folder, parent.string()));
    if (access(parent.c_str(), W_OK) != 0)
        throw SaveError(fmt::format("cannot write {}: no permission to write in {}", folder, parent.string()));
    // File systems take names of 255 bytes; the folder that is written beside has a longer one than its place.
    if (place.filename().string().size() > kLongestName)
        throw SaveError(
            fmt::format("cannot write {}: the folder's name is longer than {} bytes", folder, kLongestName));
    if (!fs::exists(fs::symlink_status(place, error))) return;
    if (fs::is_symlink(fs::symlink_status(place, error)))
        throw SaveError(fmt::format("{} is a symbolic link; name the folder that it points to", folder));
    if (!fs::is_directory(place, error)) throw SaveError(fmt::format("{} is a file; name a folder with -o", folder));
    const std::string stranger = what_is_no_result(place);
    if (!stranger.empty())
        throw SaveError(fmt::format(
            "{} holds {}, which no earlier run wrote; the folder was left alone. Name another folder with -o", folder,
            stranger));
}

void save_results(const Outcome& outcome, const std::string& folder) {
    check_results_folder(folder);
    const fs::path place = without_final_slash(folder);
    const fs::path parent = parent_of(place);
    const std::string name = place.filename().string();
    remove_left_overs(parent, name);
    const fs::path made = parent / fmt::format(".{}{}{}", name, kBeside, getpid());
    std::error_code error;
    if (!fs::create_directory(made, error))
        throw SaveError(fmt::format("cannot create {}: {}", made.string(), error.message()));
    try {
        // The two long files side by side with the rest.
        std::vector<std::exception_ptr> failures(2);
        const auto write_half = [&](std::size_t half) {
            try {
                for (const ResultFile& file : result_files())
                    if (!(file.by_segment && outcome.segments.empty()) &&
                        (std::string_view(file.name) == "folds.csv") == (half == 1))
                        write_file(made / file.name, outcome, file);
            } catch (...) {
                failures[half] = std::current_exception();
            }
        };
        {
            const std::jthread beside(write_half, 1);
            write_half(0);
        }
        for (const std::exception_ptr& failure : failures)
            if (failure) std::rethrow_exception(failure);
        put_in_place(made, place);
    } catch (...) {
        fs::remove_all(made, error);
        throw;
    }
}

}  // namespace rivalfold
