#include "studies.hpp"
#include "support/catch.hpp"

using namespace rivalfold;

namespace {

std::string faults_between(const std::string& settings, const std::string& data, const std::string& own = {}) {
    return faults_of([&] { survey_of(settings, data, own); });
}

constexpr const char* kTwo =
    "constructs:\n  skill: {indicators: [a, b], range: [1, 7]}\n  delivery: {indicators: [d]}\n";

}  // namespace

TEST_CASE("names that the file lacks are faulted at their places, all at once, with the nearest name", "[data]") {
    CHECK(faults_between(R"(constructs:
  skill: {indicators: [pln1, skll2, "sup*"]}
  sector: {category: sectr}
  delivery: {indicators: [d]}
data: {where: {phse: 1}, cluster: yrd}
)",
                         "pln1,skl2,d,sector,phase,yard\n1,2,3,4,5,6\n") ==
          "study.yaml:5:30: error: \"refits.csv\" has no column \"skll2\"\n"
          "    5 |   skill: {indicators: [pln1, skll2, \"sup*\"]}\n"
          "      |                              ^\n"
          "did you mean \"skl2\"?\n"
          "study.yaml:5:37: error: no column of \"refits.csv\" matches \"sup*\"\n"
          "    5 |   skill: {indicators: [pln1, skll2, \"sup*\"]}\n"
          "      |                                     ^\n"
          "study.yaml:6:22: error: \"refits.csv\" has no column \"sectr\"\n"
          "    6 |   sector: {category: sectr}\n"
          "      |                      ^\n"
          "did you mean \"sector\"?\n"
          "study.yaml:2:34: error: \"refits.csv\" has no column \"phse\"\n"
          "    2 | data: {file: refits.csv, where: {phse: 1}, cluster: yrd}\n"
          "      |                                  ^\n"
          "did you mean \"phase\"?\n"
          "study.yaml:2:53: error: \"refits.csv\" has no column \"yrd\"\n"
          "    2 | data: {file: refits.csv, where: {phse: 1}, cluster: yrd}\n"
          "      |                                                     ^\n"
          "did you mean \"yard\"?");
}

TEST_CASE("a column twice in one construct is a fault, by whatever names", "[data]") {
    CHECK(faults_between("constructs:\n  skill: {indicators: [a1, \"a*\"]}\n  delivery: {indicators: [d]}\n",
                         "a1,a2,d\n1,2,3\n") ==
          "study.yaml:5:28: error: construct \"skill\" takes the column \"a1\" twice, by \"a1\" and by \"a*\"\n"
          "    5 |   skill: {indicators: [a1, \"a*\"]}\n"
          "      |                            ^");
}

TEST_CASE("a reversal must be among the columns that the construct's globs found", "[data]") {
    CHECK(faults_between("constructs:\n  skill: {indicators: [\"a*\"], reversed: [a22, \"a*9\"], range: [1, 7]}\n"
                         "  delivery: {indicators: [d]}\n",
                         "a1,a2,d,a\n1,2,3,4\n") ==
          "study.yaml:5:42: error: construct \"skill\" reverses \"a22\", which is none of its indicators\n"
          "    5 |   skill: {indicators: [\"a*\"], reversed: [a22, \"a*9\"], range: [1, 7]}\n"
          "      |                                          ^\n"
          "did you mean \"a2\"?\n"
          "study.yaml:5:47: error: construct \"skill\" reverses \"a*9\", which is none of its indicators\n"
          "    5 |   skill: {indicators: [\"a*\"], reversed: [a22, \"a*9\"], range: [1, 7]}\n"
          "      |                                               ^");
}

TEST_CASE("values outside the range are faults by row, raw values, only on rows kept by where", "[data]") {
    CHECK(faults_between("constructs:\n  skill: {indicators: [a, b], reversed: [b], range: [1, 7]}\n"
                         "  delivery: {indicators: [d]}\ndata: {where: {keep: 1}}\n",
                         "a,b,d,keep\n1,0,1,1\n,8,2,1\n9,9,9,0\n7.5,7,3,1\n") ==
          "refits.csv: row 1, column \"b\": 0 is outside the range 1 to 7 of construct \"skill\"; if it means \"no "
          "answer\", "
          "add it to missing_codes\n"
          "refits.csv: row 2, column \"b\": 8 is outside the range 1 to 7 of construct \"skill\"; if it means \"no "
          "answer\", "
          "add it to missing_codes\n"
          "refits.csv: row 4, column \"a\": 7.5 is outside the range 1 to 7 of construct \"skill\"; if it means \"no "
          "answer\", add it to missing_codes");
}

TEST_CASE("values outside the range are counted beyond the first twenty", "[data]") {
    std::string data = "a,b,d\n";
    for (int row = 0; row < 1000; ++row) data += "99,-1," + std::to_string(row) + "\n";
    const std::string message = faults_between(kTwo, data);
    CHECK(message.ends_with(
        "refits.csv: row 10, column \"b\": -1 is outside the range 1 to 7 of construct \"skill\"; if it "
        "means \"no answer\", add it to missing_codes\nand 1980 more errors"));
    CHECK(std::count(message.begin(), message.end(), '\n') == 20);
}

TEST_CASE("no rows left: a fault with the count lost to each reason", "[data]") {
    CHECK(faults_between(R"(constructs:
  skill: {indicators: [a, b]}
  delivery: {indicators: [d]}
data: {where: {phase: closed}}
)",
                         "a,b,d,phase\n1,1,1,open\n2,2,2,open\n,1,1,closed\n1,,1,closed\n2,,2,closed\n") ==
          "study.yaml:2:14: error: none of the 5 rows of \"refits.csv\" can be used; lost to: where: phase is not "
          "closed (2), "
          "missing answer in \"a\" (1), missing answer in \"b\" (2)\n"
          "    2 | data: {file: refits.csv, where: {phase: closed}}\n"
          "      |              ^");
    CHECK(faults_between(std::string(kTwo) + "data: {where: {phase: [Closed, won]}}\n",
                         "a,b,d,phase\n1,1,1,open\n2,2,2,closed\n") ==
          "study.yaml:2:14: error: none of the 2 rows of \"refits.csv\" can be used; lost to: where: phase is not "
          "Closed or "
          "won (2)\n"
          "    2 | data: {file: refits.csv, where: {phase: [Closed, won]}}\n"
          "      |              ^\n"
          "did you mean \"closed\"?");
    CHECK(faults_between(kTwo, "a,b,d\n1,1,1\n") ==
          "study.yaml:2:14: error: only 1 row of \"refits.csv\" can be used\n"
          "    2 | data: {file: refits.csv}\n"
          "      |              ^");
}

TEST_CASE("a column without any answer is a fault that names it, under both row rules", "[data]") {
    for (const char* rule : {"drop", "mean"}) {
        CHECK(faults_between(std::string(kTwo) + "data: {rows: " + rule + "}\n", "a,b,d\n1,,1\n2,,2\n3,,4\n") ==
              "study.yaml:5:27: error: column \"b\" holds no answer in any of the 3 rows that could be used; leave it "
              "out, or "
              "check missing_codes\n"
              "    5 |   skill: {indicators: [a, b], range: [1, 7]}\n"
              "      |                           ^");
    }
}

TEST_CASE("a column that is constant over the rows used is a fault", "[data]") {
    CHECK(faults_between("constructs:\n  skill: {indicators: [a, b], reversed: [b], range: [1, 7]}\n"
                         "  delivery: {indicators: [d]}\n",
                         "a,b,d\n1,2,5\n2,2,5\n,3,4\n") ==
          "study.yaml:5:27: error: column \"b\" of construct \"skill\" is 2 in all 2 rows used; leave it out: a "
          "constant says "
          "nothing about differences\n"
          "    5 |   skill: {indicators: [a, b], reversed: [b], range: [1, 7]}\n"
          "      |                           ^\n"
          "study.yaml:6:27: error: column \"d\" of construct \"delivery\" is 5 in all 2 rows used; leave it out: a "
          "constant "
          "says nothing about differences\n"
          "    6 |   delivery: {indicators: [d]}\n"
          "      |                           ^");
}

TEST_CASE("a column of the target may measure nothing else that is used", "[data]") {
    CHECK(
        faults_between(R"(constructs:
  skill: {indicators: [a, "d*"]}
  pace: {indicators: [d1]}
  sector: {category: d2}
  mood: {indicators: [d1]}
  delivery: {indicators: [d1, d2]}
controls: [pace, sector]
)",
                       "a,d1,d2\n1,1,1\n2,3,4\n", "    constructs: {skill: {indicators: [d2]}}\n") ==
        "study.yaml:5:27: error: column \"d1\" measures the target \"delivery\" and cannot also measure \"skill\": it "
        "would "
        "predict itself\n"
        "    5 |   skill: {indicators: [a, \"d*\"]}\n"
        "      |                           ^\n"
        "study.yaml:5:27: error: column \"d2\" measures the target \"delivery\" and cannot also measure \"skill\": it "
        "would "
        "predict itself\n"
        "    5 |   skill: {indicators: [a, \"d*\"]}\n"
        "      |                           ^\n"
        "study.yaml:6:23: error: column \"d1\" measures the target \"delivery\" and cannot also measure \"pace\": it "
        "would "
        "predict itself\n"
        "    6 |   pace: {indicators: [d1]}\n"
        "      |                       ^\n"
        "study.yaml:7:22: error: column \"d2\" measures the target \"delivery\" and cannot also measure \"sector\": it "
        "would "
        "predict itself\n"
        "    7 |   sector: {category: d2}\n"
        "      |                      ^\n"
        "study.yaml:16:39: error: column \"d2\" measures the target \"delivery\" and cannot also measure \"skill\": it "
        "would predict itself\n"
        "   16 |     constructs: {skill: {indicators: [d2]}}\n"
        "      |                                       ^");
}

TEST_CASE("antecedents may share a column", "[data]") {
    CHECK(faults_between(
              "constructs:\n  skill: {indicators: [a, b]}\n  pace: {indicators: [b]}\n  delivery: {indicators: [d]}\n"
              "controls: [pace]\n",
              "a,b,d\n1,1,1\n2,3,4\n") == "nothing thrown");
}

TEST_CASE("a category needs two levels and at most fifty", "[data]") {
    constexpr const char* kSector =
        "constructs:\n  skill: {indicators: [a]}\n  sector: {category: k}\n  delivery: {indicators: [d]}\ncontrols: "
        "[sector]\n";
    CHECK(faults_between(kSector, "a,d,k\n1,2,navy\n2,3,navy\n3,4,\n") ==
          "study.yaml:6:22: error: category \"k\" is \"navy\" in all 2 rows used; leave it out: one level says nothing "
          "about "
          "differences\n"
          "    6 |   sector: {category: k}\n"
          "      |                      ^");
    const auto data = [](int n_levels) {
        std::string text = "a,d,k\n";
        for (int row = 0; row < n_levels; ++row)
            text += std::to_string(row) + "," + std::to_string(row) + ",ship" + std::to_string(row) + "\n";
        return text;
    };
    CHECK(faults_between(kSector, data(50)) == "nothing thrown");
    CHECK(faults_between(kSector, data(51)) ==
          "study.yaml:6:22: error: category \"k\" has 51 levels, above the limit of 50: it looks like an identifier; "
          "if it is "
          "a number, declare it under indicators\n"
          "    6 |   sector: {category: k}\n"
          "      |                      ^");
}

TEST_CASE("more unknown names than are shown are counted once", "[data]") {
    std::string names;
    for (int i = 0; i < 30; ++i) names += ", pln" + std::to_string(i);
    const std::string message = faults_between(
        "constructs:\n  skill: {indicators: [a" + names + "]}\n  delivery: {indicators: [d]}\n", "a,d\n1,2\n");
    CHECK(message.ends_with("\nand 10 more errors"));
    CHECK(message.find("\"refits.csv\" has no column \"pln19\"\n") != std::string::npos);
    CHECK(message.find("pln20\"\n") == std::string::npos);
}

TEST_CASE("a data file that is not there is faulted where the study names it", "[data]") {
    const TestFolder folder;
    folder.write("refit.csv", "a,b,d\n1,2,3\n");
    const Study study = study_of(kTwo, {}, folder / "study.yaml");
    CHECK(
        faults_of([&] { read_survey(study); }) ==
        (folder / "study.yaml") + ":2:14: error: data file \"" + (folder / "refits.csv") +
            "\": no such file\n    2 | data: {file: refits.csv}\n      |              ^\ndid you mean \"refit.csv\"?");
}

TEST_CASE("faults of the cells name the data file as it was found", "[data]") {
    const TestFolder folder;
    folder.write("refits.csv", "a,b,d\n1,x,3\n");
    const Study study = study_of(kTwo, {}, folder / "study.yaml");
    CHECK(faults_of([&] { read_survey(study); }) ==
          (folder / "refits.csv") +
              ": row 1, column \"b\": \"x\" is not a number; if it means \"no answer\", add it to missing_codes");
}

TEST_CASE("a table without a column that the study needs is a mistake of the caller", "[data]") {
    const Study study = study_of(kTwo);
    const Table table = read_delimited_text("a,b,d\n1,2,3\n", "t.csv", {}, [](const auto&) {
        return ColumnChoice{{0, 1}, {}};
    });
    CHECK_THROWS_WITH(build_survey(study, table), "the table lacks the column \"d\", which survey_columns() names");
}
