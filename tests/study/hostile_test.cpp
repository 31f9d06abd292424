// Files that are made to break a reader: each ends in a fault, soon and in little memory.
#include <filesystem>
#include <fstream>

#include "study/changed_study.hpp"

using namespace rivalfold;
using namespace rivalfold::test;

namespace {

std::string repeated(const std::string& text, std::size_t times) {
    std::string all;
    for (std::size_t k = 0; k < times; ++k) all += text;
    return all;
}

std::string first_message(const std::string& text) {
    try {
        read_study_text(text, "study.yaml");
    } catch (const FaultError& error) {
        const Fault& fault = error.faults().front();
        return std::to_string(fault.place.line) + ":" + std::to_string(fault.place.column) + ": " + fault.message;
    }
    return "no fault";
}

std::string message_of_file(const std::string& path) {
    try {
        read_study(path);
    } catch (const FaultError& error) {
        return error.what();
    }
    return "no fault";
}

// A file that is gone when the test is over.
class ScratchFile {
public:
    explicit ScratchFile(const std::string& text)
        : path_(std::filesystem::temp_directory_path() / "rivalfold_hostile_test_study.yaml") {
        std::ofstream(path_, std::ios::binary) << text;
    }
    ~ScratchFile() { std::filesystem::remove(path_); }
    ScratchFile(const ScratchFile&) = delete;
    ScratchFile& operator=(const ScratchFile&) = delete;
    std::string path() const { return path_.string(); }

private:
    std::filesystem::path path_;
};

const std::string kTooDeep = ": lists and keys are nested more than 64 levels deep here; a study needs 7";

}  // namespace

TEST_CASE("deep nesting is faulted at the 65th level", "[hostile]") {
    CHECK(first_message(repeated("[", 65) + repeated("]", 65)) == "1:65" + kTooDeep);
    CHECK(first_message(repeated("{a: ", 65) + repeated("}", 65)) == "1:257" + kTooDeep);
    // The YAML library takes some brackets that are never closed for keys, so the level is reached earlier.
    CHECK(first_message(repeated("[", 60'000)).ends_with(kTooDeep));
    CHECK(first_message(repeated("[\n", 100'000)).ends_with(kTooDeep));
    CHECK(first_message(repeated("{a: ", 10'000)).ends_with(kTooDeep));
    CHECK(first_message(repeated("- ", 10'000)) == "1:129" + kTooDeep);
    CHECK(first_message(repeated("? ", 10'000)) == "1:129" + kTooDeep);
    std::string ladder;
    for (std::size_t k = 0; k < 1000; ++k) ladder += std::string(k, ' ') + "a:\n";
    CHECK(first_message(ladder) == "65:65" + kTooDeep);
    CHECK(first_message(repeated("[", 64) + repeated("]", 64)).starts_with("1:1: a study must be keys with values"));
}

TEST_CASE("a line of 100000 brackets is too long to be looked at", "[hostile]") {
    CHECK(first_message("study: x\n" + repeated("[", 100'000)) ==
          "2:1: this line has 100000 bytes; a line of a study file may have at most 65536");
}

TEST_CASE("aliases that would grow to billions of values are faulted at the first anchor", "[hostile]") {
    std::string text = "a: &a [x, x]\n";
    for (char name = 'b'; name < 'z'; ++name)
        text += std::string(1, name) + ": &" + name + " [*" + char(name - 1) + ", *" + char(name - 1) + "]\n";
    CHECK(first_message(text) == "1:4: \"&a\" is an anchor, which a study file may not hold; expected the plain value");
}

TEST_CASE("more than 200000 values are too many", "[hostile]") {
    CHECK(first_message("[" + repeated("a,\n", 200'001) + "]") ==
          "200000:1: the file holds more than 200000 values; a study file may not be that large");
}

TEST_CASE("many faults are bounded", "[hostile]") {
    std::string text = kStudy;
    for (int k = 0; k < 50'000; ++k) text.append("unknown").append(std::to_string(k)).append(": 1\n");
    try {
        read_study_text(text, "study.yaml");
        FAIL("no fault");
    } catch (const FaultError& error) {
        CHECK(error.faults().size() == 501);
        CHECK(render(error.faults().back()) == "study.yaml: error: there are more than 500 errors; mend these first");
    }
}

TEST_CASE("a long chain of outcomes is followed without recursion", "[hostile]") {
    std::string constructs, equations;
    for (int k = 0; k < 5000; ++k) {
        constructs += "  c" + std::to_string(k) + ": {indicators: [x" + std::to_string(k) + "]}\n";
        equations += "      c" + std::to_string(k) + ": [c" + std::to_string((k + 1) % 5000) + "]\n";
    }
    const std::string text = changed(kStudy, {{"target:", constructs + "target:"},
                                              {"      skill: [planning]\n", "      skill: [planning]\n" + equations}});
    CHECK(first_message(text) ==
          "5017:7: theory \"chain\" explains \"c0\" in a circle, c0 -> c4999 -> c4998 -> c4997 -> c4996 -> c4995 -> "
          "c4994 -> "
          "c4993 -> c4992 -> c4991 -> c4990 -> c4989 -> ... -> c0; expected no cycles");
}

TEST_CASE("text in another encoding is told from a study", "[hostile]") {
    using namespace std::string_literals;
    const std::string utf16 = "0:0: the file is UTF-16 text; expected UTF-8, so save it as UTF-8";
    CHECK(first_message("\xFF\xFEs\0t\0"s) == utf16);
    CHECK(first_message("\xFE\xFF\0s\0t"s) == utf16);
    CHECK(first_message("s\0t\0u\0"s) ==
          "1:2: the control character \"\\x00\" may not stand in a study file; expected plain text");
    CHECK(first_message("study: a\x1b[31m\n") ==
          "1:9: the control character \"\\x1b\" may not stand in a study file; expected plain text");
    CHECK(first_message("study: x\nname: gr\xFC\xDF") ==
          "2:9: the byte \"\\xfc\" is not UTF-8 text; expected UTF-8, so save the file as UTF-8");
    // Overlong forms, surrogates and a cut sequence are no UTF-8 (RFC 3629, section 3).
    for (const std::string broken : {"\xC0\xAF", "\xED\xA0\x80", "\xF4\x90\x80\x80", "\xE2\x82"})
        CHECK(first_message(broken).find("is not UTF-8 text") != std::string::npos);
}

TEST_CASE("files that cannot be a study are faulted by name", "[hostile]") {
    CHECK(message_of_file("nowhere/study.yaml") ==
          "nowhere/study.yaml: error: there is no such file; expected a study file");
    CHECK(message_of_file(RIVALFOLD_TESTS) == RIVALFOLD_TESTS ": error: this is a folder; expected a study file");
    const ScratchFile large(repeated("# 16 bytes long\n", 5 * 65536));
    CHECK(message_of_file(large.path()) ==
          large.path() + ": error: the file has 5242880 bytes; a study file may have at most 4194304 (4 MiB)");
}

TEST_CASE("a file on disk is read like its text", "[study]") {
    const ScratchFile file(kStudy);
    const Study study = read_study(file.path());
    CHECK(study.source == kStudy);
    CHECK(study.path == file.path());
    CHECK(study.data.path == (std::filesystem::path(file.path()).parent_path() / "refits.csv").string());
}
