// Which segment each row lies in, and what can be wrong with the column that says so.
#include "studies.hpp"
#include "support/catch.hpp"

#include <algorithm>

using namespace rivalfold;
using Texts = std::vector<std::string>;
using Numbers = std::vector<std::size_t>;

namespace {

/// A study of skill and delivery with the given keys of `data`.
Study segmented(const std::string& data_keys) {
    return study_of("constructs:\n  skill: {indicators: [a]}\n  delivery: {indicators: [d]}\ndata: {" + data_keys +
                    "}\n");
}

/// Rows with the given values of `k`, nothing else missing or constant.
std::string rows_of(const Texts& values) {
    std::string data = "a,d,k\n";
    for (std::size_t row = 0; row < values.size(); ++row)
        data += std::to_string(row) + "," + std::to_string(row * row) + "," + values[row] + "\n";
    return data;
}

std::string faults_with(const std::string& data_keys, const Texts& values) {
    return faults_of([&] { survey_of(segmented(data_keys), rows_of(values)); });
}

std::string few_rows(const std::string& name, const std::string& count) {
    return "segment \"" + name + "\" has only " + count +
           " used; with fewer than about 20 a contest rarely tells theories apart (common practice): read it as a "
           "hint, or "
           "join segments";
}

}  // namespace

TEST_CASE("without cuts every value is a segment, words by bytes", "[data]") {
    const Survey survey = survey_of(segmented("segment: k"), rows_of({"simple", "complex", "", "simple", "\" Wide\""}));
    CHECK(survey.segment_names == Texts{"k: Wide", "k: complex", "k: simple"});
    CHECK(survey.segments == std::vector<int>{2, 1, 2, 0});
    CHECK(survey.rows == Numbers{1, 2, 4, 5});
    REQUIRE(survey.dropped.size() == 1);
    CHECK(survey.dropped[0].reason == "missing answer in \"k\"");
    CHECK(survey.dropped[0].rows == Numbers{3});
    CHECK(survey.variables.size() == 2);
    CHECK(survey.advice ==
          Texts{few_rows("k: Wide", "1 row"), few_rows("k: complex", "1 row"), few_rows("k: simple", "2 rows")});
}

TEST_CASE("without cuts numbers are segments by value", "[data]") {
    const Survey survey =
        survey_of(segmented("segment: k, missing_codes: [-9]"), rows_of({"10", "9", "-9", "9.0", "10"}));
    CHECK(survey.segment_names == Texts{"k: 9", "k: 10"});
    CHECK(survey.segments == std::vector<int>{1, 0, 0, 1});
    CHECK(survey.dropped.at(0).reason == "missing answer in \"k\"");
}

TEST_CASE("a value equal to a cut lies below it", "[data]") {
    const Survey survey = survey_of(segmented("segment: {column: k, cuts: [4, 6.5]}, missing_codes: [99]"),
                                    rows_of({"4", "4.01", "6.5", "7", "99", "-1"}));
    CHECK(survey.segment_names == Texts{"k <= 4", "4 < k <= 6.5", "k > 6.5"});
    CHECK(survey.segments == std::vector<int>{0, 1, 1, 2, 0});
    CHECK(survey.rows == Numbers{1, 2, 3, 4, 6});
    CHECK(survey.dropped.at(0).reason == "missing answer in \"k\"");
    CHECK(survey.values.cols() == 2);
}

TEST_CASE("a row without its segment leaves under rows: mean too", "[data]") {
    for (const std::string segment : {"k", "{column: k, cuts: [1]}"}) {
        const Survey survey = survey_of(segmented("rows: mean, segment: " + segment), rows_of({"1", "", "2", "2"}));
        CHECK(survey.rows == Numbers{1, 3, 4});
        CHECK(survey.segments == std::vector<int>{0, 1, 1});
    }
}

TEST_CASE("an indicator may be cut into segments", "[data]") {
    const Survey survey = survey_of(segmented("segment: {column: a, cuts: [1]}"), rows_of({"", "", "", ""}));
    CHECK(survey.segments == std::vector<int>{0, 0, 1, 1});
    CHECK(survey.variables.size() == 2);
    CHECK(survey.values.col(0) == Eigen::Vector4d(0, 1, 2, 3));
}

TEST_CASE("a file gives the same segments as a table in memory", "[data]") {
    const std::string data = rows_of({"3", "5", "", "4", "8"});
    const TestFolder folder;
    folder.write("refits.csv", data);
    const std::string settings =
        "constructs:\n  skill: {indicators: [a]}\n  delivery: {indicators: [d]}\n"
        "data: {segment: {column: k, cuts: [4]}}\n";
    const Survey from_file = read_survey(study_of(settings, {}, folder / "study.yaml"));
    const Survey from_table = survey_of(settings, data);
    CHECK(from_file.segments == std::vector<int>{0, 1, 0, 1});
    CHECK(from_file.segments == from_table.segments);
    CHECK(from_file.values == from_table.values);
    CHECK(from_file.values.cols() == 2);
}

TEST_CASE("twenty rows in a segment give no advice", "[data]") {
    const Survey survey = survey_of(segmented("segment: k"), rows_of([] {
                                        Texts values(39, "one");
                                        std::fill(values.begin(), values.begin() + 20, "two");
                                        return values;
                                    }()));
    CHECK(survey.advice == Texts{few_rows("k: one", "19 rows")});
}

TEST_CASE("a segment column that the file lacks is faulted with the nearest name", "[data]") {
    CHECK(faults_with("segment: {column: kk, cuts: [4]}", {"1", "5"}) ==
          "study.yaml:2:44: error: \"refits.csv\" has no column \"kk\"\n"
          "    2 | data: {file: refits.csv, segment: {column: kk, cuts: [4]}}\n"
          "      |                                            ^");
}

TEST_CASE("an indicator of the target makes no segments", "[data]") {
    CHECK(faults_with("segment: {column: d, cuts: [4]}", {"1", "5"}) ==
          "study.yaml:2:44: error: the segment column \"d\" measures the target \"delivery\"; expected another column: "
          "segments cut by the outcome hide what is to be predicted\n"
          "    2 | data: {file: refits.csv, segment: {column: d, cuts: [4]}}\n"
          "      |                                            ^");
}

TEST_CASE("text in a column that is cut is a fault, in one that is not cut it is a segment", "[data]") {
    CHECK(
        faults_with("segment: {column: k, cuts: [4]}", {"1", "low", "5"}) ==
        "refits.csv: row 2, column \"k\": \"low\" is not a number; if it means \"no answer\", add it to missing_codes");
    CHECK(faults_with("segment: k", {"1", "low", "5"}) == "nothing thrown");
}

TEST_CASE("one value alone makes no segments", "[data]") {
    CHECK(faults_with("segment: k", {"x", "x", ""}) ==
          "study.yaml:2:35: error: the segment column \"k\" is \"x\" in all 2 rows used; expected two values or more\n"
          "    2 | data: {file: refits.csv, segment: k}\n"
          "      |                                   ^");
    CHECK(faults_with("where: {k: x}, segment: k", {"x", "x", "y"}) ==
          "study.yaml:2:50: error: the segment column \"k\" is \"x\" in all 2 rows used; expected two values or more\n"
          "    2 | data: {file: refits.csv, where: {k: x}, segment: k}\n"
          "      |                                                  ^\n"
          "\"where\" keeps this value alone");
}

TEST_CASE("more than ten values are too many, and a cut is suggested", "[data]") {
    Texts values;
    for (int i = 0; i < 11; ++i) values.push_back(std::to_string(i * 2));
    CHECK(faults_with("segment: k", Texts(values.begin(), values.end() - 1)) == "nothing thrown");
    CHECK(faults_with("segment: k", values) ==
          "study.yaml:2:35: error: the segment column \"k\" has 11 different values in the rows used; expected 10 at "
          "most\n"
          "    2 | data: {file: refits.csv, segment: k}\n"
          "      |                                   ^\n"
          "cut it, e.g. {column: k, cuts: [10]}");
    Texts high = values;
    high.insert(high.end(), 40, "20");
    CHECK(faults_with("segment: k", high) ==
          "study.yaml:2:35: error: the segment column \"k\" has 11 different values in the rows used; expected 10 at "
          "most\n"
          "    2 | data: {file: refits.csv, segment: k}\n"
          "      |                                   ^\n"
          "cut it, e.g. {column: k, cuts: [18]}");
    for (std::string& value : values) value = "yard " + value;
    CHECK(faults_with("segment: k", values) ==
          "study.yaml:2:35: error: the segment column \"k\" has 11 different values in the rows used; expected 10 at "
          "most\n"
          "    2 | data: {file: refits.csv, segment: k}\n"
          "      |                                   ^\n"
          "keep ten of them or fewer with \"where\", or name another column");
}

TEST_CASE("a segment between cuts without rows is a fault", "[data]") {
    CHECK(
        faults_with("segment: {column: k, cuts: [4, 6]}", {"1", "4", "7.5", ""}) ==
        "study.yaml:2:44: error: the segment \"4 < k <= 6\" holds no row; \"k\" runs from 1 to 7.5 in the 3 rows used: "
        "expected rows in every segment\n"
        "    2 | data: {file: refits.csv, segment: {column: k, cuts: [4, 6]}}\n"
        "      |                                            ^");
    CHECK(faults_with("segment: {column: k, cuts: [10, 20]}", {"1", "4"}) ==
          "study.yaml:2:44: error: the segments \"10 < k <= 20\" and \"k > 20\" hold no row; \"k\" runs from 1 to 4 in "
          "the 2 "
          "rows used: expected rows in every segment\n"
          "    2 | data: {file: refits.csv, segment: {column: k, cuts: [10, 20]}}\n"
          "      |                                            ^");
}
