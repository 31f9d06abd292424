// How numbers and names are written: the same in every file, whatever the locale.
#include "report/numbers.hpp"
#include "support/catch.hpp"

#include <cmath>
#include <cstdlib>
#include <limits>
#include <locale>
#include <string>

using namespace rivalfold;

namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr double kInfinity = std::numeric_limits<double>::infinity();

/// Decimal comma and points between thousands, as in much of Europe, without needing that locale to be installed.
struct Commas : std::numpunct<char> {
    char do_decimal_point() const override { return ','; }
    char do_thousands_sep() const override { return '.'; }
    std::string do_grouping() const override { return "\3"; }
};

struct UnderCommas {
    std::locale before = std::locale::global(std::locale(std::locale::classic(), new Commas));
    ~UnderCommas() { std::locale::global(before); }
};

}  // namespace

TEST_CASE("a rounded zero has no minus sign", "[report]") {
    CHECK(fixed(-0.0004, 3) == "0.000");
    CHECK(fixed(-0.0, 2) == "0.00");
    CHECK(fixed(-0.4, 0) == "0");
    CHECK(fixed(-0.0006, 3) == "-0.001");
    CHECK(fixed(-10.0, 1) == "-10.0");
}

TEST_CASE("fixed decimals", "[report]") {
    CHECK(fixed(1234567.891, 2) == "1234567.89");
    CHECK(fixed(0.9999, 3) == "1.000");
    CHECK(fixed(0.0625, 3) == "0.062");  // exactly between: the even digit
    CHECK(fixed(kNaN, 3) == "-");
    CHECK(fixed(kInfinity, 3) == "-");
    CHECK(fixed(-kInfinity, 3) == "-");
}

TEST_CASE("p has no zero before its point, and none is 0", "[report]") {
    CHECK(p_text(0.0) == "<.001");
    CHECK(p_text(0.000999) == "<.001");
    CHECK(p_text(0.001) == ".001");
    CHECK(p_text(0.0496) == ".050");
    CHECK(p_text(0.5) == ".500");
    CHECK(p_text(0.99951) == "1.000");
    CHECK(p_text(1.0) == "1.000");
    CHECK(p_text(kNaN) == "-");
}

TEST_CASE("an exact number reads back to the same double and is empty where there is none", "[report]") {
    for (const double value :
         {0.1, 1.0 / 3, 6.02214076e23, 5e-324, -1.7976931348623157e308, 0.0, 123456789.123456789}) {
        INFO(value);
        CHECK(std::strtod(exact(value).c_str(), nullptr) == value);
    }
    CHECK(exact(0.1) == "0.1");
    CHECK(exact(-12.5) == "-12.5");
    CHECK(exact(kNaN).empty());
    CHECK(exact(kInfinity).empty());
}

TEST_CASE("numbers do not change under another locale", "[report]") {
    const UnderCommas commas;
    CHECK(fixed(1234567.891, 2) == "1234567.89");
    CHECK(exact(1234567.5) == "1234567.5");
    CHECK(p_text(0.25) == ".250");
}

TEST_CASE("csv fields are quoted where they must be (RFC 4180)", "[report]") {
    CHECK(csv_field("plain words") == "plain words");
    CHECK(csv_field("") == "");
    CHECK(csv_field("a,b") == "\"a,b\"");
    CHECK(csv_field("say \"yes\"") == "\"say \"\"yes\"\"\"");
    CHECK(csv_field("two\nlines") == "\"two\nlines\"");
    CHECK(csv_field("a\rb") == "\"a\rb\"");
    CHECK(csv_field("überall") == "überall");
}

TEST_CASE("a text that a spreadsheet would run as a formula is kept a text", "[report]") {
    CHECK(csv_field("=1+1") == "'=1+1");
    CHECK(csv_field("+1") == "'+1");
    CHECK(csv_field("-1") == "'-1");
    CHECK(csv_field("@SUM(A1)") == "'@SUM(A1)");
    CHECK(csv_field("\t=1") == "'\t=1");
    CHECK(csv_field("=cmd|'a',b") == "\"'=cmd|'a',b\"");
    CHECK(csv_field("a=1") == "a=1");
}

TEST_CASE("what could move a terminal's cursor is written out", "[report]") {
    CHECK(plain("sector=größer 理論") == "sector=größer 理論");
    CHECK(plain("a\x1b[31mb") == "a\\x1b[31mb");
    CHECK(plain("two\nlines\tand\r") == "two\\nlines\\tand\\r");
    CHECK(plain("\x7f") == "\\x7f");
    CHECK(plain("\xC2\x9B") == "\\x9b");                  // a C1 control: some terminals take it for escape [
    CHECK(plain("\xE2\x80\xAEright") == "\\u202eright");  // turns the reading direction
    CHECK(plain("\xFF\xC3") == "\\xff\\xc3");             // no UTF-8
}

TEST_CASE("a Markdown cell keeps its text one cell", "[report]") {
    CHECK(markdown_cell("a|b") == "a\\|b");
    CHECK(markdown_cell("back\\slash|") == "back\\\\slash\\|");
    CHECK(markdown_cell("*bold* _x_ `code`") == "\\*bold\\* \\_x\\_ \\`code\\`");
    CHECK(markdown_cell("<b>[l](u)#") == "\\<b\\>\\[l\\](u)\\#");
    CHECK(markdown_cell("two\nlines") == "two\\\\nlines");
}
