// Ways of reading that the tests of this room share.
#pragma once

#include "data/read_source.hpp"

#include "rivalfold/data/read_delimited.hpp"
#include "rivalfold/study/fault.hpp"

#include <atomic>
#include <filesystem>
#include <fstream>
#include <string>
#include <string_view>

#include <unistd.h>

namespace rivalfold {

inline ColumnChoice every_number(const std::vector<std::string>& header) {
    ColumnChoice choice;
    for (std::size_t column = 0; column < header.size(); ++column) choice.numbers.push_back(column);
    return choice;
}

inline ColumnChoice every_text(const std::vector<std::string>& header) {
    ColumnChoice choice;
    for (std::size_t column = 0; column < header.size(); ++column) choice.texts.push_back(column);
    return choice;
}

inline Table read_numbers(std::string_view text, const ReadRules& rules = {}) {
    return read_delimited_text(text, "t.csv", rules, every_number);
}

inline Table read_texts(std::string_view text, const ReadRules& rules = {}) {
    return read_delimited_text(text, "t.csv", rules, every_text);
}

/// The message of the FaultError that `act` throws; "nothing thrown" if it does not.
template <class Act>
std::string faults_of(const Act& act) {
    try {
        act();
    } catch (const FaultError& error) {
        return error.what();
    }
    return "nothing thrown";
}

inline std::string faults_in(std::string_view text, const ReadRules& rules = {}) {
    return faults_of([&] { read_numbers(text, rules); });
}

/// A folder of its own for one test, removed at the end.
class TestFolder {
public:
    TestFolder() {
        static std::atomic<int> count{0};
        path_ = std::filesystem::temp_directory_path() /
                ("rivalfold-data-" + std::to_string(getpid()) + "-" + std::to_string(count++));
        std::filesystem::create_directories(path_);
    }
    ~TestFolder() {
        std::error_code ignored;
        std::filesystem::remove_all(path_, ignored);
    }
    TestFolder(const TestFolder&) = delete;
    TestFolder& operator=(const TestFolder&) = delete;
    std::string operator/(const std::string& name) const { return (path_ / name).string(); }
    std::string write(const std::string& name, std::string_view text) const {
        std::ofstream(path_ / name, std::ios::binary) << text;
        return *this / name;
    }

private:
    std::filesystem::path path_;
};

}  // namespace rivalfold
