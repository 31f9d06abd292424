#include "data/layout.hpp"
#include "data/numbers.hpp"
#include "reading.hpp"
#include "support/catch.hpp"

#include <charconv>
#include <cmath>
#include <cstring>
#include <random>

using namespace rivalfold;
using Texts = std::vector<std::string>;

TEST_CASE("header and numbers of a small table", "[data]") {
    const Table table = read_numbers("a,b\n1,2\n3.5,-4\n");
    CHECK(table.header == Texts{"a", "b"});
    REQUIRE(table.n_rows == 2);
    CHECK(table.numbers(0, 0) == 1);
    CHECK(table.numbers(0, 1) == 2);
    CHECK(table.numbers(1, 0) == 3.5);
    CHECK(table.numbers(1, 1) == -4);
}

TEST_CASE("only chosen columns are read, in the order asked for, as number and as text", "[data]") {
    const Table table = read_delimited_text("a,b,c\n1,x,3\n4,y,6\n", "t.csv", {}, [](const Texts&) {
        return ColumnChoice{{2, 0}, {1, 0}};
    });
    CHECK(table.numbers(1, 0) == 6);
    CHECK(table.numbers(1, 1) == 4);
    CHECK(table.texts == std::vector<Texts>{{"x", "y"}, {"1", "4"}});
}

// RFC 4180, section 2: quoted cells, with the delimiter, line ends and doubled quotes inside.
TEST_CASE("quoted cells hold delimiters, line ends and doubled quotes", "[data]") {
    const Table table = read_texts("\"a\",\"b,c\"\r\n\"x,y\",\"two\r\nlines\"\r\n\"say \"\"hi\"\"\",\"\"\"\"\r\n");
    CHECK(table.header == Texts{"a", "b,c"});
    CHECK(table.texts[0] == Texts{"x,y", "say \"hi\""});
    CHECK(table.texts[1] == Texts{"two\r\nlines", "\""});
}

TEST_CASE("quoted numbers are numbers, blanks around cells do not count", "[data]") {
    const Table table = read_numbers("a , \"b\"\n\"1\",\"2.5\"\n \"3\" , 4 \n\" 5 \",\" +6\"\n");
    CHECK(table.header == Texts{"a", "b"});
    CHECK(table.numbers.col(0) == Eigen::Vector3d(1, 3, 5));
    CHECK(table.numbers.col(1) == Eigen::Vector3d(2.5, 4, 6));
}

TEST_CASE("a quote inside an unquoted cell is a character like another", "[data]") {
    CHECK(read_texts("a,b\n5\" pipe,x\n").texts[0] == Texts{"5\" pipe"});
}

TEST_CASE("LF, CRLF and CR end rows, with or without one at the end", "[data]") {
    for (const char* text : {"a,b\n1,2\n3,4\n", "a,b\n1,2\n3,4", "a,b\r\n1,2\r\n3,4\r\n", "a,b\r\n1,2\r\n3,4",
                             "a,b\r1,2\r3,4\r", "a,b\r1,2\r3,4", "a,b\r\n1,2\r3,4\n",
                             "\xEF\xBB\xBF"
                             "a,b\n1,2\n3,4\n\n\r\n  \n"}) {
        CAPTURE(text);
        const Table table = read_numbers(text);
        CHECK(table.header == Texts{"a", "b"});
        REQUIRE(table.n_rows == 2);
        CHECK(table.numbers.row(1) == Eigen::RowVector2d(3, 4));
    }
}

TEST_CASE("blank lines between rows are skipped and not counted", "[data]") {
    const Table table = read_numbers("\n\na,b\n\n1,2\n  \n3,4\n\n\n");
    CHECK(table.header == Texts{"a", "b"});
    CHECK(table.n_rows == 2);
    CHECK(table.numbers(1, 1) == 4);
    CHECK(read_numbers("a\tb\n1\t2\n\t\n").n_rows == 2);  // a line of tabs is a row of empty cells where tabs delimit
}

TEST_CASE("in a file of one column a blank line is an empty cell, except at the end", "[data]") {
    const Table table = read_numbers("a\n1\n\n3\n\n\n");
    REQUIRE(table.n_rows == 3);
    CHECK(std::isnan(table.numbers(1, 0)));
    CHECK(table.numbers(2, 0) == 3);
    CHECK(read_numbers("a\n1\n\"\"\n\n").n_rows == 2);  // quotes make a cell
}

TEST_CASE("the delimiter is found among comma, semicolon, tab and bar", "[data]") {
    CHECK(find_delimiter("a,b\n1,2\n", true) == ',');
    CHECK(find_delimiter("a;b\n1;2\n", true) == ';');
    CHECK(find_delimiter("a\tb\n1\t2\n", true) == '\t');
    CHECK(find_delimiter("a|b\n1|2\n", true) == '|');
    CHECK(find_delimiter("a;b;c\n1,5;2,5;3,5\n2,5;1,5;0,5\n", true) == ';');
    CHECK(find_delimiter("a;b\n1,5;2\n1,5;2\n", true) == ';');
    CHECK(find_delimiter("\"a;b;c\",d\n\"x;y\",2\n", true) == ',');
    CHECK(find_delimiter("id,text\n1,a;b;c\n2,d;e;f\n", true) == ',');
    CHECK(find_delimiter("alone\n1\n", true) == ',');
    CHECK(find_delimiter("a,b\n1,2\n1;;;;", false) == ',');  // the last row of a sample may be cut
}

TEST_CASE("a given delimiter is not questioned", "[data]") {
    const Table table = read_texts("a;b,c\n1;2,3\n", {',', {}});
    CHECK(table.header == Texts{"a;b", "c"});
    CHECK(table.texts[0] == Texts{"1;2"});
}

TEST_CASE("a decimal comma is read where the delimiter is no comma", "[data]") {
    const Table table = read_numbers("a;b\n3,5;-0,25\n\"1,5\";1e3\n+,5;7,\n");
    CHECK(table.numbers.col(0) == Eigen::Vector3d(3.5, 1.5, 0.5));
    CHECK(table.numbers.col(1) == Eigen::Vector3d(-0.25, 1000, 7));
}

TEST_CASE("empty cells and missing codes are no answer, by text and by value", "[data]") {
    const Table table = read_numbers("a,b\n-9,1\n-9.0,\n\" -9e0\",NA\n 9,\"\"\n7,9\n", {0, {"-9", "NA", " 7 "}});
    CHECK(table.numbers.col(0).array().isNaN().cast<int>().matrix() ==
          (Eigen::VectorXi(5) << 1, 1, 1, 0, 1).finished());
    CHECK(table.numbers.col(1).array().isNaN().cast<int>().matrix() ==
          (Eigen::VectorXi(5) << 0, 1, 1, 1, 0).finished());
    const Table texts = read_texts("a,b\n-9.0,yes\n NA ,no\n-9x,NAN\n", {0, {"-9", "NA"}});
    CHECK(texts.texts[0] == Texts{"", "", "-9x"});
    CHECK(texts.texts[1] == Texts{"yes", "no", "NAN"});
    // Words that std::from_chars takes for numbers can be codes too.
    CHECK(std::isnan(read_numbers("a,b\nnan,1\n", {0, {"nan"}}).numbers(0, 0)));
}

TEST_CASE("UTF-8 text is kept as it is", "[data]") {
    CHECK(read_texts("a,b\n\xC3\xA9t\xC3\xA9,\xE2\x82\xAC\n").texts ==
          std::vector<Texts>{{"\xC3\xA9t\xC3\xA9"}, {"\xE2\x82\xAC"}});
}

TEST_CASE("the fast path for plain numbers agrees with std::from_chars to the last bit", "[data]") {
    std::mt19937_64 random(7);
    std::size_t n_fast = 0;
    for (int trial = 0; trial < 200000; ++trial) {
        std::string text = random() % 3 == 0 ? "-" : "";
        const std::uint64_t n_digits = 1 + random() % 18;
        const std::uint64_t point = random() % 20;
        for (std::uint64_t i = 0; i < n_digits; ++i) {
            if (i == point) text += '.';
            text += static_cast<char>('0' + random() % 10);
        }
        double expected = 0;
        std::from_chars(text.data(), text.data() + text.size(), expected);
        double value = 0;
        Mark mark = Mark::none;
        text += ',';
        const char* const stop = read_plain_number(text.c_str(), false, value, mark);
        if (stop == nullptr) continue;
        ++n_fast;
        REQUIRE(stop == text.c_str() + text.size() - 1);
        REQUIRE(std::memcmp(&value, &expected, sizeof value) == 0);
    }
    CHECK(n_fast > 150000);
}

TEST_CASE("numbers of every form are read as std::from_chars reads them", "[data]") {
    const NumberRules rules({}, false);
    const std::vector<std::pair<const char*, double>> good = {{"0", 0},
                                                              {"-0", -0.0},
                                                              {"00012", 12},
                                                              {".5", .5},
                                                              {"5.", 5},
                                                              {"+3", 3},
                                                              {"1e3", 1e3},
                                                              {"1E-3", 1e-3},
                                                              {" 7\t", 7},
                                                              {"1e100", 1e100},
                                                              {"-1e100", -1e100},
                                                              {"1e-400", 0},
                                                              {"0.1", 0.1},
                                                              {"123456789012345678901", 123456789012345678901.0},
                                                              {"2.2250738585072011e-308", 2.2250738585072011e-308}};
    for (const auto& [text, value] : good) {
        CAPTURE(text);
        CHECK(rules.read(text).finding == Finding::number);
        CHECK(rules.read(text).value == value);
    }
    for (const char* text :
         {"abc", "1.5abc", "0x10", "1,5", "1 2", "-", "+", ".", "e5", "--1", "+-1", "1e", "nan", "-nan", "1.2.3"}) {
        CAPTURE(text);
        CHECK(rules.read(text).finding == Finding::not_a_number);
    }
    CHECK(rules.read("inf").finding == Finding::infinite);
    CHECK(rules.read("-Infinity").finding == Finding::infinite);
    CHECK(rules.read("1.0000001e100").finding == Finding::enormous);
    CHECK(rules.read("-1e400").finding == Finding::enormous);
}
