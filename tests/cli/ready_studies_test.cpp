// The studies that come with the program: every theory set of models/ is read and says where it comes from and when it
// fits.
#include "support/catch.hpp"

#include "rivalfold/study/fault.hpp"
#include "rivalfold/study/read_study.hpp"

#include <algorithm>
#include <cctype>
#include <filesystem>
#include <fstream>
#include <sstream>
#include <string>
#include <vector>

namespace fs = std::filesystem;

namespace {

std::vector<fs::path> yaml_files(const fs::path& folder) {
    std::vector<fs::path> found;
    for (const fs::directory_entry& entry : fs::directory_iterator(folder))
        if (entry.path().extension() == ".yaml") found.push_back(entry.path());
    std::sort(found.begin(), found.end());
    return found;
}

/// The comment that opens a file, in small letters.
std::string head_comment(const fs::path& file) {
    std::ifstream in(file);
    std::string head;
    for (std::string line; std::getline(in, line) && !line.empty() && line.front() == '#';) head += line + "\n";
    std::transform(head.begin(), head.end(), head.begin(),
                   [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
    return head;
}

}  // namespace

TEST_CASE("every theory set of models/ is read without a fault", "[cli]") {
    const std::vector<fs::path> files = yaml_files(fs::path(RIVALFOLD_ROOT) / "models");
    REQUIRE(files.size() >= 6);
    for (const fs::path& file : files) {
        INFO(file.string());
        try {
            const rivalfold::Study study = rivalfold::read_study(file.string());
            CHECK(study.theories.size() >= 2);
            CHECK(std::all_of(study.theories.begin(), study.theories.end(),
                              [](const auto& theory) { return !theory.claim.empty(); }));
        } catch (const rivalfold::FaultError& error) {
            FAIL_CHECK(error.what());
        }
    }
}

TEST_CASE("every theory set of models/ names its purpose, when it fits, and a published source", "[cli]") {
    for (const fs::path& file : yaml_files(fs::path(RIVALFOLD_ROOT) / "models")) {
        const std::string head = head_comment(file);
        INFO(file.string() << "\n" << head);
        CHECK(head.find("purpose:") != std::string::npos);
        CHECK(head.find("fits when") != std::string::npos);
        const std::size_t source = head.find("source");
        REQUIRE(source != std::string::npos);
        // A year in brackets, as every reference has.
        bool dated = false;
        for (std::size_t at = head.find('(', source); at != std::string::npos; at = head.find('(', at + 1))
            dated = dated || (head.size() > at + 5 && head[at + 5] == ')' &&
                              std::all_of(head.begin() + static_cast<std::ptrdiff_t>(at) + 1,
                                          head.begin() + static_cast<std::ptrdiff_t>(at) + 5,
                                          [](unsigned char c) { return std::isdigit(c) != 0; }));
        CHECK(dated);
    }
}
