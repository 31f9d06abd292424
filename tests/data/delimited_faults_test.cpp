#include "reading.hpp"
#include "support/catch.hpp"

using namespace rivalfold;

TEST_CASE("text in a numeric column names row and column", "[data]") {
    CHECK(faults_in("a,pln1\n1,2\n3,abc\n") ==
          "t.csv: row 2, column \"pln1\": \"abc\" is not a number; if it means \"no answer\", add it to missing_codes");
    CHECK(faults_in("a,b\n1,nan\n") ==
          "t.csv: row 1, column \"b\": \"nan\" is not a number; if it means \"no answer\", add it to missing_codes");
}

TEST_CASE("a decimal comma in a comma-delimited file is explained", "[data]") {
    CHECK(faults_in("a,b\n1,\"3,5\"\n") ==
          "t.csv: row 1, column \"b\": \"3,5\" is not a number; decimal commas need another delimiter, such as ;");
}

TEST_CASE("infinite and enormous numbers are faults", "[data]") {
    CHECK(
        faults_in("a,b\ninf,1\n2,-1e101\n1e999,3\n") ==
        "t.csv: row 1, column \"a\": \"inf\" is infinite; if it means \"no answer\", add it to missing_codes\n"
        "t.csv: row 2, column \"b\": \"-1e101\" is enormous (above 1e100 in size); if it means \"no answer\", add it "
        "to "
        "missing_codes\n"
        "t.csv: row 3, column \"a\": \"1e999\" is enormous (above 1e100 in size); if it means \"no answer\", add it to "
        "missing_codes");
}

TEST_CASE("a fast-path number above 1e100 cannot slip through", "[data]") {
    CHECK(faults_in("a,b\n1," + std::string(101, '9') + "\n").starts_with("t.csv: row 1, column \"b\": \"999"));
}

TEST_CASE("a column that mixes decimal points and commas is a fault", "[data]") {
    CHECK(faults_in("a;b\n1,5;2,5\n2.5;1,5\n") ==
          "t.csv: column \"a\": mixes a decimal point (row 2) and a decimal comma (row 1); use one of them");
    CHECK(
        faults_in("a;b\n1.234,5;2\n") ==
        "t.csv: row 1, column \"a\": \"1.234,5\" is not a number; if it means \"no answer\", add it to missing_codes");
}

TEST_CASE("ragged rows say how many cells were expected, and nothing about those cells", "[data]") {
    CHECK(faults_in("a,b,c\n1,2,3\n1,x\n1,2,3,y\n1,2,z\n") ==
          "t.csv: row 2: expected 3 cells, found 2\n"
          "t.csv: row 3: expected 3 cells, found 4\n"
          "t.csv: row 4, column \"c\": \"z\" is not a number; if it means \"no answer\", add it to missing_codes");
    CHECK(faults_in("a,b\n1,2\n3,") == "nothing thrown");  // the last cell is empty
    CHECK(faults_in("a,b\n1,2\n3") == "t.csv: row 2: expected 2 cells, found 1");
}

TEST_CASE("the line is given where line ends in cells or blank lines make it differ from the row", "[data]") {
    CHECK(faults_of([] {
              read_delimited_text("note,a\n\"one\ntwo\r\nthree\",1\nx,oops\n\ny,2,3\n", "t.csv", {}, [](const auto&) {
                  return ColumnChoice{{1}, {}};
              });
          }) ==
          "t.csv: row 2 (line 5), column \"a\": \"oops\" is not a number; if it means \"no answer\", add it to "
          "missing_codes\n"
          "t.csv: row 3 (line 7): expected 2 cells, found 3");
}

TEST_CASE("the first twenty faults are told and the rest counted", "[data]") {
    std::string text = "a,b\n";
    for (int row = 0; row < 1000000; ++row) text += "1,?\n";
    const std::string message = faults_in(text);
    CHECK(
        message.ends_with("t.csv: row 20, column \"b\": \"?\" is not a number; if it means \"no answer\", add it to "
                          "missing_codes\nand 999980 more errors"));
    CHECK(std::count(message.begin(), message.end(), '\n') == 20);
    std::string exactly = "a,b\n";
    for (int row = 0; row < 21; ++row) exactly += "1,?\n";
    CHECK(faults_in(exactly).ends_with("\nand 1 more error"));
}

TEST_CASE("control characters and long cells are shown on one short line", "[data]") {
    CHECK(faults_in("a,b\n1,\"x\ty\nz\x1b[31m\"\n") ==
          "t.csv: row 1, column \"b\": \"x\\ty\\nz\\x1b[31m\" is not a number; if it means \"no answer\", add it to "
          "missing_codes");
    CHECK(faults_in("a,b\n1," + std::string(5000, 'w') + "\n") ==
          "t.csv: row 1, column \"b\": \"" + std::string(60, 'w') +
              "...\" is not a number; if it means \"no answer\", add it to missing_codes");
}

TEST_CASE("quotes out of order are faults", "[data]") {
    CHECK(faults_in("a,b\n1,2\n3,\"4\n5,6\n") ==
          "t.csv: row 2, column \"b\": the quote that opens this cell is never closed");
    CHECK(faults_in("a,b\n\"1\"x,2\n") ==
          "t.csv: row 1, column \"a\": text follows the closing quote; a quote inside quotes is written twice (\"\")");
    CHECK(faults_in("a,\"b\n1,2\n") == "t.csv: header, column 2: the quote that opens this cell is never closed");
}

TEST_CASE("headers: names twice, no name, no rows, nothing at all", "[data]") {
    CHECK(faults_in("a,b, a ,b\n1,2,3,4\n") ==
          "t.csv: header, column 3: \"a\" is the name of column 1 too; rename one of them\n"
          "t.csv: header, column 4: \"b\" is the name of column 2 too; rename one of them");
    CHECK(faults_in("a,,\n1,2,3\n") ==
          "t.csv: header, column 2: this column has no name\nt.csv: header, column 3: this column has no name");
    CHECK(faults_of([] {  // columns without a name that nobody asks for do no harm
              read_delimited_text(",,a\n1,2,3\n", "t.csv", {}, [](const auto&) { return ColumnChoice{{2}, {}}; });
          }) == "nothing thrown");
    CHECK(faults_in("a,b\n") == "t.csv: error: the file holds a header but no rows of data");
    CHECK(faults_in("a,b") == "t.csv: error: the file holds a header but no rows of data");
    CHECK(faults_in("a\n\n\n") == "t.csv: error: the file holds a header but no rows of data");
    CHECK(faults_in("") == "t.csv: error: the file is empty; expected a header row with the column names");
    CHECK(faults_in("\xEF\xBB\xBF\n \r\n") ==
          "t.csv: error: the file is empty; expected a header row with the column names");
}

TEST_CASE("faults of the header and of the choice are told together", "[data]") {
    CHECK(faults_of([] {
              read_delimited_text("a,a\n1,2\n", "t.csv", {}, [](const auto&) -> ColumnChoice {
                  throw FaultError(Fault{"study.yaml", {}, {}, "no such name", {}, {}});
              });
          }) ==
          "t.csv: header, column 2: \"a\" is the name of column 1 too; rename one of them\n"
          "study.yaml: error: no such name");
}

TEST_CASE("what is no UTF-8 text is refused with what to do", "[data]") {
    constexpr const char* kWide =
        "t.csv: error: this is UTF-16 text; save it as UTF-8 (\"CSV UTF-8\" in most spreadsheets)";
    CHECK(faults_in(std::string_view("\xFF\xFE"
                                     "a\0,\0",
                                     6)) == kWide);
    CHECK(faults_in(std::string_view("\xFE\xFF\0a\0,", 6)) == kWide);
    CHECK(faults_in(std::string_view("a\0,\0b\0\n\0", 8)) == kWide);
    CHECK(faults_in(std::string_view("a,b\n1,2\n3,\0\n", 12)) ==
          "t.csv: row 2: NUL byte: this is not a text file; save the data as CSV text");
    CHECK(faults_in(std::string_view("abc,b\0\n1,2\n", 11)) ==
          "t.csv: header: NUL byte: this is not a text file; save the data as CSV text");
    CHECK(faults_in("PK\x03\x04zip") ==
          "t.csv: error: this is a spreadsheet or another zip archive, not delimited text; save it as CSV");
    CHECK(faults_of([] { read_texts("a,b\nM\xFCller,1\n"); }) ==
          "t.csv: row 1, column \"a\": \"M\\xfcller\" is not UTF-8 text; save the file as UTF-8");
    CHECK(faults_of([] { read_texts("M\xFCll,b\nx,1\n"); }) ==
          "t.csv: header, column 1: \"M\\xfcll\" is not UTF-8 text; save the file as UTF-8");
    CHECK(faults_of([] {
              read_delimited_text("a,b\nM\xFCller,1\n", "t.csv", {},  // a column that is not asked for
                                  [](const auto&) {
                                      return ColumnChoice{{1}, {}};
                                  });
          }) == "nothing thrown");
}

TEST_CASE("files that cannot be read say why and suggest the nearest name", "[data]") {
    const TestFolder folder;
    const std::string path = folder.write("refits.csv", "a,b\n1,2\n");
    const auto faults = [](const std::string& name) {
        return faults_of([&] { read_delimited(name, {}, every_number); });
    };
    CHECK(faults(path) == "nothing thrown");
    CHECK(faults(folder / "refit.csv") == folder / "refit.csv: error: no such file\ndid you mean \"refits.csv\"?");
    CHECK(faults(folder / "nowhere/x.csv") ==
          (folder / "nowhere/x.csv") + ": error: no such file, and no folder \"" + (folder / "nowhere") + "\"");
    CHECK(faults(folder / "") == (folder / "") + ": error: this is a folder; expected a data file");
    CHECK(faults("/dev/null") == "/dev/null: error: this is not a regular file; save the data to a file first");
    CHECK(faults(path + "/x") == path + "/x: error: no such file, and no folder \"" + path + "\"");
    if (geteuid() != 0) {
        std::filesystem::permissions(path, std::filesystem::perms::none);
        CHECK(faults(path) == path + ": error: cannot be read: Permission denied");
    }
}
