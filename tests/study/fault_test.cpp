// How a fault is shown, and which name is near enough to be meant.
#include "rivalfold/study/fault.hpp"

#include <set>

#include "study/characters.hpp"
#include "support/catch.hpp"

using namespace rivalfold;

namespace {

// As shown, after a line break so that tests can hold it as a block.
std::string block(const Fault& fault) {
    std::string text = "\n";
    return text += render(fault);
}

std::string shown_at(const std::string& line, std::size_t column) {
    return block(Fault{"study.yaml", {14, column}, {}, "wrong", {}, line}) + "\n";
}

}  // namespace

TEST_CASE("a fault shows place, message, line, caret and hint", "[fault]") {
    const Fault fault{"study.yaml",
                      {14, 28},
                      {},
                      "theory \"chain\" uses the construct \"skil\", which nothing defines",
                      "did you mean \"skill\"?",
                      "      delivery: [planning, skil]"};
    CHECK(block(fault) == R"(
study.yaml:14:28: error: theory "chain" uses the construct "skil", which nothing defines
   14 |       delivery: [planning, skil]
      |                            ^
did you mean "skill"?)");
}

TEST_CASE("a fault in data shows its row and column", "[fault]") {
    CHECK(render(Fault{"refits.csv", {}, "row 7, column \"pln1\"", "\"abc\" is not a number", {}, {}}) ==
          "refits.csv: row 7, column \"pln1\": \"abc\" is not a number");
}

TEST_CASE("a fault of a whole file shows the file alone", "[fault]") {
    CHECK(render(Fault{"study.yaml", {}, {}, "there is no such file", {}, {}}) ==
          "study.yaml: error: there is no such file");
    CHECK(render(Fault{{}, {}, {}, "nothing to do", {}, {}}) == "error: nothing to do");
}

TEST_CASE("the caret stands under the character and not under its bytes", "[fault]") {
    CHECK(shown_at("größe: [naïve]", 9) == R"(
study.yaml:14:9: error: wrong
   14 | größe: [naïve]
      |         ^
)");
    CHECK(shown_at("\u8239: x", 4) == "\nstudy.yaml:14:4: error: wrong\n   14 | \u8239: x\n      |     ^\n");
    CHECK(shown_at("e\u0301: x", 5) == "\nstudy.yaml:14:5: error: wrong\n   14 | e\u0301: x\n      |    ^\n");
}

TEST_CASE("tabs are shown as blanks up to the next fourth column", "[fault]") {
    CHECK(shown_at("a\tb\tc", 5) == "\nstudy.yaml:14:5: error: wrong\n   14 | a   b   c\n      |         ^\n");
}

TEST_CASE("a caret may stand behind the last character", "[fault]") {
    CHECK(shown_at("ab", 3) == "\nstudy.yaml:14:3: error: wrong\n   14 | ab\n      |   ^\n");
    CHECK(shown_at("ab", 99) == "\nstudy.yaml:14:99: error: wrong\n   14 | ab\n      |   ^\n");
}

TEST_CASE("a long line is cut around the place", "[fault]") {
    std::string line(300, '.');
    line[150] = 'X';
    CHECK(shown_at(line, 151) == "\nstudy.yaml:14:151: error: wrong\n   14 | ..." + std::string(35, '.') + "X" +
                                     std::string(34, '.') + "...\n      | " + std::string(38, ' ') + "^\n");
    line[0] = 'X';
    CHECK(shown_at(line, 1) ==
          "\nstudy.yaml:14:1: error: wrong\n   14 | X" + std::string(69, '.') + "...\n      | ^\n");
    line[299] = 'X';
    CHECK(shown_at(line, 300) == "\nstudy.yaml:14:300: error: wrong\n   14 | ..." + std::string(69, '.') +
                                     "X\n      | " + std::string(72, ' ') + "^\n");
}

TEST_CASE("no control character of a file reaches the terminal", "[fault]") {
    const Fault fault{"a\x1b[31m.yaml",
                      {1, 5},
                      {},
                      "found \"\x07\xC2\x9B"
                      "31m\"",
                      "hint\r",
                      "a\x1b[b\xFFz"};
    const std::string text = render(fault);
    CHECK(text == R"(a\x1b[31m.yaml:1:5: error: found "\x07\x9b31m"
    1 | a\x1b[b\xffz
      |        ^
hint\r)");
    CHECK(escape_controls("right to left \xE2\x80\xAE, mark \xEF\xBB\xBF, tag \xF3\xA0\x80\x81") ==
          "right to left \\u202e, mark \\ufeff, tag \\U000e0001");
}

TEST_CASE("twenty faults are shown and the rest is counted", "[fault]") {
    std::vector<Fault> faults(22, Fault{"f", {}, {}, "wrong", {}, {}});
    std::string twenty;
    for (int k = 0; k < 20; ++k) twenty += "f: error: wrong\n";
    CHECK(FaultError(faults).what() == twenty + "and 2 more errors");
    faults.pop_back();
    CHECK(FaultError(faults).what() == twenty + "and 1 more error");
    faults.pop_back();
    CHECK(FaultError(faults).what() + std::string("\n") == twenty);
    CHECK(FaultError(faults).faults().size() == 20);
    CHECK(render(std::vector<Fault>{}, 3).empty());
}

// Expected distances are counted by hand; optimal string alignment as in Damerau (1964): "ca" to "abc" is 3, not 2.
TEST_CASE("the nearest name is found by edits and swaps of neighbours", "[fault]") {
    const std::vector<std::string> known = {"planning", "skill", "supply", "delivery", "abc", "Größe"};
    const std::vector<std::pair<std::string, std::string>> cases = {{"skil", "skill"},
                                                                    {"sklil", "skill"},
                                                                    {"SKILL", "skill"},
                                                                    {"skills", "skill"},
                                                                    {"skixx", ""},
                                                                    {"skixl", "skill"},
                                                                    {"planing", "planning"},
                                                                    {"plannnig", "planning"},
                                                                    {"delivree", "delivery"},
                                                                    {"livery", "delivery"},
                                                                    {"x", ""},
                                                                    {"", ""},
                                                                    {"ca", ""},
                                                                    {"acb", "abc"},
                                                                    {"a", ""},
                                                                    {"GRÖSSE", "Größe"},
                                                                    {"grÖße", "Größe"},
                                                                    {"supplyskillplanning", ""}};
    for (const auto& [wrong, expected] : cases) {
        INFO(wrong);
        CHECK(nearest_name(wrong, known) == expected);
    }
}

TEST_CASE("of two names as near the first is taken, and the nearer one wins", "[fault]") {
    CHECK(nearest_name("pln0", std::vector<std::string>{"pln1", "pln2"}) == "pln1");
    CHECK(nearest_name("plan", std::vector<std::string>{"pla", "plans", "PLAN"}) == "PLAN");
    CHECK(nearest_name("skill", std::vector<std::string>{}).empty());
    CHECK(nearest_name(std::string(5000, 'a'), std::vector<std::string>{std::string(5000, 'a')}).empty());
}

TEST_CASE("a suggestion is a question", "[fault]") {
    const std::vector<std::string> known = {"skill"};
    CHECK(did_you_mean("skil", known) == "did you mean \"skill\"?");
    CHECK(did_you_mean("supply", known).empty());
}
