// Tables and paragraphs of a terminal: widths, cuts, line breaks.
#include "report/text_table.hpp"
#include "support/catch.hpp"

#include <sstream>
#include <string>
#include <vector>

using namespace rivalfold;

namespace {

std::size_t widest(const std::string& text) {
    std::istringstream lines(text);
    std::size_t most = 0;
    for (std::string line; std::getline(lines, line);) most = std::max(most, display_width(line));
    return most;
}

std::string without_spaces(std::string text) {
    std::erase_if(text, [](char c) { return c == ' ' || c == '\n'; });
    return text;
}

}  // namespace

TEST_CASE("width counts columns, not bytes", "[report]") {
    CHECK(display_width("") == 0);
    CHECK(display_width("planning") == 8);
    CHECK(display_width("größer") == 6);
    CHECK(display_width("理論") == 4);       // East Asian wide: Unicode Standard Annex 11
    CHECK(display_width("e\xCC\x81") == 1);  // a combining accent
    CHECK(display_width("\xFF") == 1);       // no UTF-8
}

TEST_CASE("a text is cut between characters", "[report]") {
    CHECK(cut_to("planning", 8) == "planning");
    CHECK(cut_to("planning", 7) == "planni…");
    CHECK(cut_to("größer als", 5) == "größ…");
    CHECK(cut_to("größer als", 3) == "gr…");
    CHECK(cut_to("理論一二", 8) == "理論一二");
    CHECK(cut_to("理論一二", 6) == "理論…");
    CHECK(cut_to("理論一二", 5) == "理論…");
    CHECK(cut_to("ab", 1) == "…");
}

TEST_CASE("words wrap into lines of a width", "[report]") {
    CHECK(wrap("one two three", 7, 0) == "one two\nthree");
    CHECK(wrap("one two three", 7, 2) == "one two\n  three");
    CHECK(wrap("one two three", 9, 4) == "one two\n    three");
    CHECK(wrap("one two three", 80, 2) == "one two three");
    CHECK(wrap("", 10, 2).empty());
    CHECK(wrap("größer größer", 13, 0) == "größer größer");
    CHECK(wrap("größer größer", 12, 0) == "größer\ngrößer");
    CHECK(wrap("理論 理論", 8, 0) == "理論\n理論");
}

TEST_CASE("a word longer than a line is broken between characters", "[report]") {
    CHECK(wrap("abcdefgh", 3, 0) == "abc\ndef\ngh");
    CHECK(wrap("see abcdefgh", 6, 2) == "see\n  abcd\n  efgh");
    CHECK(wrap("öööööö", 4, 1) == "öööö\n öö");
    CHECK(wrap("理論一二", 5, 0) == "理論\n一二");
}

TEST_CASE("wrapping loses nothing and keeps to the width, for every width", "[report]") {
    const std::string text =
        "Größere Betriebe ( n = 40 ) planen \"früher\", " + std::string(90, 'x') + " und 理論理論理論理論 folgt.";
    for (std::size_t width = 4; width < 100; ++width) {
        const std::string wrapped = wrap(text, width, 2);
        INFO(width << "\n" << wrapped);
        CHECK(widest(wrapped) <= width);
        CHECK(without_spaces(wrapped) == without_spaces(text));
    }
}

TEST_CASE("a line too narrow for its indent still ends", "[report]") {
    CHECK(without_spaces(wrap("abc de", 1, 2)) == "abcde");
}

TEST_CASE("columns are aligned, numbers to the right, names to the left", "[report]") {
    TextTable table({{"rank", false}, {"theory", true}, {"loss", false}});
    table.add({"1", "größer", "0.5"});
    table.add({"10", "理論", "12.5"});
    CHECK(table.render(80) ==
          "rank  theory  loss\n"
          "   1  größer   0.5\n"
          "  10  理論    12.5\n");
}

TEST_CASE("no line ends in spaces", "[report]") {
    TextTable table({{"theory", true}, {"verdict", true}});
    table.add({"additive", ""});
    CHECK(table.render(80) == "theory    verdict\nadditive\n");
}

TEST_CASE("long names give way to numbers, down to eight columns", "[report]") {
    TextTable table({{"first", true}, {"second", true}, {"p", false}});
    table.add({std::string(100, 'a'), std::string(100, 'b'), ".123"});
    table.add({"short", std::string(100, 'c'), ".5"});
    for (const std::size_t width : {30U, 60U, 80U, 100U}) {
        const std::string text = table.render(width);
        INFO(text);
        CHECK(widest(text) <= width);
        CHECK(text.find(".123") != std::string::npos);
        CHECK(text.find("aaaaaaa…") != std::string::npos);
    }
    CHECK(widest(table.render(10)) == 24);  // 8 + 2 + 8 + 2 + 4: numbers are never cut
}

TEST_CASE("a short column leaves its room to a long one", "[report]") {
    TextTable table({{"a", true}, {"b", true}});
    table.add({"x", std::string(30, 'y')});
    CHECK(table.render(33) == "a  b\nx  " + std::string(30, 'y') + "\n");
    TextTable other({{"a", true}, {"b", true}});
    other.add({std::string(30, 'y'), "x"});
    CHECK(other.render(20) == std::string("a") + std::string(18, ' ') + "b\n" + std::string(16, 'y') + "…  x\n");
    CHECK(other.render(33) == std::string("a") + std::string(31, ' ') + "b\n" + std::string(30, 'y') + "  x\n");
}
