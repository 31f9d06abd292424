// One segment's rows as a survey of its own.
#include "studies.hpp"
#include "support/catch.hpp"

#include <algorithm>
#include <cmath>
#include <random>

using namespace rivalfold;
using Texts = std::vector<std::string>;
using Numbers = std::vector<std::size_t>;

namespace {

Study study_with(const std::string& data_keys) {
    return study_of(R"(constructs:
  skill: {indicators: [a, b], reversed: [b], range: [1, 7]}
  sector: {category: trade}
  delivery: {indicators: [d]}
controls: [sector]
data: {)" + data_keys +
                    "}\n");
}

constexpr const char* kRows =
    "a,b,trade,d,yard,kind\n"
    "1,2,navy,1,y1,simple\n"
    "2,3,cargo,2,y3,complex\n"
    "3,,ferry,3,y2,simple\n"
    "4,5,ferry,4,y3,complex\n"
    "5,6,navy,,y1,simple\n"
    "6,7,cargo,6,y2,complex\n"
    "7,1,ferry,7,y1,simple\n";

std::string faults_in_segment(const Study& study, const std::string& rows, std::size_t segment) {
    const Survey whole = survey_of(study, rows);
    return faults_of([&] { survey_of_segment(study, whole, segment); });
}

}  // namespace

TEST_CASE("a segment keeps its rows and only the levels and clusters that occur in it", "[data]") {
    const Study study = study_with("rows: mean, cluster: yard, segment: kind");
    Survey whole = survey_of(study, kRows);
    whole.sha256 = "f00";
    CHECK(whole.segments == std::vector<int>{1, 0, 1, 0, 0, 1});
    const Survey complex = survey_of_segment(study, whole, 0);
    CHECK(complex.rows_read == 7);
    CHECK(complex.rows == Numbers{2, 4, 6});
    CHECK(complex.values == (Eigen::MatrixXd(3, 3) << 2, 5, 2, 4, 3, 4, 6, 1, 6).finished());
    CHECK_FALSE(complex.has_missing);
    CHECK(complex.categories.at(0).column == "trade");
    CHECK(complex.categories[0].levels == Texts{"cargo", "ferry"});
    CHECK(complex.categories[0].codes == std::vector<int>{0, 1, 0});
    CHECK(complex.cluster_names == Texts{"y2", "y3"});
    CHECK(complex.clusters == std::vector<int>{1, 1, 0});
    CHECK(complex.segments.empty());
    CHECK(complex.segment_names.empty());
    CHECK(complex.advice.empty());
    CHECK(complex.sha256 == "f00");
    CHECK(complex.dropped.at(0).reason == "missing answer in \"d\"");
    CHECK(complex.dropped[0].rows == Numbers{5});
    REQUIRE(complex.measurements.size() == 3);
    CHECK(complex.measurement(0, "skill")->variables == std::vector<int>{0, 1});
    CHECK(complex.measurement(0, "sector")->category == 0);
    CHECK(complex.variables.at(1).reversed);

    const Survey simple = survey_of_segment(study, whole, 1);
    CHECK(simple.rows == Numbers{1, 3, 7});
    CHECK(simple.has_missing);
    CHECK(std::isnan(simple.values(1, 1)));
    CHECK(simple.categories.at(0).levels == Texts{"ferry", "navy"});
    CHECK(simple.categories[0].codes == std::vector<int>{1, 0, 0});
    CHECK(simple.cluster_names == Texts{"y1", "y2"});
    CHECK(simple.clusters == std::vector<int>{0, 1, 0});
}

TEST_CASE("a segment without clusters has none", "[data]") {
    const Study study = study_with("segment: kind");
    const Survey part = survey_of_segment(study, survey_of(study, kRows), 0);
    CHECK(part.clusters.empty());
    CHECK(part.cluster_names.empty());
    CHECK(part.rows == Numbers{2, 4, 6});
}

TEST_CASE("what does not vary within a segment is a fault that names it, raw values, all at once", "[data]") {
    const Study study = study_with("segment: kind");
    const std::string rows =
        "a,b,trade,d,kind\n1,2,navy,1,x\n2,2,navy,1,x\n3,2,navy,1,x\n3,1,cargo,4,y\n4,5,ferry,4,y\n";
    CHECK(faults_in_segment(study, rows, 0) ==
          "study.yaml:5:27: error: column \"b\" of construct \"skill\" is 2 in all 3 rows of the segment \"kind: x\"; "
          "leave it "
          "out or choose other segments: a constant says nothing about differences\n"
          "    5 |   skill: {indicators: [a, b], reversed: [b], range: [1, 7]}\n"
          "      |                           ^\n"
          "study.yaml:7:27: error: column \"d\" of construct \"delivery\" is 1 in all 3 rows of the segment \"kind: "
          "x\"; leave "
          "it out or choose other segments: a constant says nothing about differences\n"
          "    7 |   delivery: {indicators: [d]}\n"
          "      |                           ^\n"
          "study.yaml:6:22: error: category \"trade\" is \"navy\" in all 3 rows of the segment \"kind: x\"; leave it "
          "out or "
          "choose other segments: one level says nothing about differences\n"
          "    6 |   sector: {category: trade}\n"
          "      |                      ^");
    CHECK(faults_in_segment(study, rows, 1) ==
          "study.yaml:7:27: error: column \"d\" of construct \"delivery\" is 4 in all 2 rows of the segment \"kind: "
          "y\"; leave "
          "it out or choose other segments: a constant says nothing about differences\n"
          "    7 |   delivery: {indicators: [d]}\n"
          "      |                           ^");
}

TEST_CASE("a column without an answer within a segment is a fault under rows: mean", "[data]") {
    const Study study = study_with("rows: mean, segment: kind");
    CHECK(faults_in_segment(study, "a,b,trade,d,kind\n1,,navy,1,x\n2,,cargo,2,x\n3,2,navy,3,y\n3,1,cargo,4,y\n", 0) ==
          "study.yaml:5:27: error: column \"b\" of construct \"skill\" holds no answer in any of the 2 rows of the "
          "segment "
          "\"kind: x\"; leave it out or choose other segments\n"
          "    5 |   skill: {indicators: [a, b], reversed: [b], range: [1, 7]}\n"
          "      |                           ^");
}

TEST_CASE("a column that a theory measures its own way is faulted where that theory names it", "[data]") {
    const Study study = study_of(
        "constructs:\n  skill: {indicators: [a]}\n  delivery: {indicators: [d]}\n"
        "data: {segment: {column: k, cuts: [2]}}\n",
        "    constructs: {skill: {indicators: [\"b*\"]}}\n");
    CHECK(faults_in_segment(study, "a,b1,d,k\n1,2,1,1\n2,2,2,2\n3,3,4,3\n4,4,5,4\n", 0) ==
          "study.yaml:12:39: error: column \"b1\" of construct \"skill\" is 2 in all 2 rows of the segment \"k <= 2\"; "
          "leave it "
          "out or choose other segments: a constant says nothing about differences\n"
          "   12 |     constructs: {skill: {indicators: [\"b*\"]}}\n"
          "      |                                       ^");
}

TEST_CASE("a segment of one row is faulted as that alone", "[data]") {
    const Study study = study_with("segment: kind");
    CHECK(faults_in_segment(study, "a,b,trade,d,kind\n1,2,navy,1,x\n2,3,cargo,2,x\n3,4,navy,3,y\n", 1) ==
          "study.yaml:2:35: error: the segment \"kind: y\" has 1 of the rows used; expected two or more\n"
          "    2 | data: {file: refits.csv, segment: kind}\n"
          "      |                                   ^");
}

TEST_CASE("a segment that the survey does not have is a mistake of the caller", "[data]") {
    const Study study = study_with("segment: kind");
    Survey whole = survey_of(study, kRows);
    CHECK_THROWS_WITH(survey_of_segment(study, whole, 2),
                      "segment 2 of a survey with 2 segments, 5 rows and 5 rows of values");
    whole.values.resize(0, 0);
    CHECK_THROWS_WITH(survey_of_segment(study, whole, 0),
                      "segment 0 of a survey with 2 segments, 5 rows and 0 rows of values");
}

TEST_CASE("whatever the bytes, the segments of a survey share out its rows", "[data]") {
    const std::string start = kRows;
    for (const std::string segment : {"kind", "{column: a, cuts: [2, 4]}"}) {
        const Study study = study_with("rows: mean, cluster: yard, segment: " + segment);
        std::mt19937 random(11);
        int n_parts = 0;
        for (int trial = 0; trial < 2000; ++trial) {
            std::string text = start;
            for (std::size_t edits = 1 + random() % 3; edits > 0; --edits)
                text[25 + random() % (text.size() - 25)] = start[random() % start.size()];
            Survey whole;
            if (faults_of([&] { whole = survey_of(study, text); }) != "nothing thrown") continue;
            REQUIRE(whole.segments.size() == whole.n());
            Numbers rows;
            bool all = true;
            for (std::size_t i = 0; i < whole.segment_names.size(); ++i) {
                Survey part;
                if (faults_of([&] { part = survey_of_segment(study, whole, i); }) != "nothing thrown") {
                    all = false;
                    continue;
                }
                ++n_parts;
                rows.insert(rows.end(), part.rows.begin(), part.rows.end());
                REQUIRE(part.clusters.size() == part.n());
                for (const int code : part.categories[0].codes)
                    REQUIRE(static_cast<std::size_t>(code) < part.categories[0].levels.size());
            }
            std::sort(rows.begin(), rows.end());
            if (all) REQUIRE(rows == whole.rows);
        }
        CHECK(n_parts > 300);
    }
}
