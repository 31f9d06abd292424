#include "data/find_columns.hpp"
#include "data/levels.hpp"
#include "data/values.hpp"
#include "reading.hpp"
#include "studies.hpp"
#include "support/catch.hpp"

#include "rivalfold/data/sha256.hpp"

#include <cmath>

using namespace rivalfold;
using Texts = std::vector<std::string>;
using Numbers = std::vector<std::size_t>;

TEST_CASE("constructs become variables in declared order, globs in header order", "[data]") {
    const Survey survey = survey_of(R"(
constructs:
  skill: {indicators: ["s*"], reversed: ["*_r"], range: [1, 7]}
  delivery: {indicators: [d2, d1]}
)",
                                    "s2,d1,id,s1_r,d2\n1,2,x,3,4\n5,6,y,7,1\n");
    REQUIRE(survey.n() == 2);
    REQUIRE(survey.variables.size() == 4);
    CHECK(survey.variables[0].column == "s2");
    CHECK(survey.variables[1].column == "s1_r");
    CHECK(survey.variables[1].reversed);
    CHECK(survey.variables[1].reflect == 8);
    CHECK(survey.variables[2].column == "d2");
    CHECK(survey.variables[3].column == "d1");
    CHECK(survey.values.row(0) == Eigen::RowVector4d(1, 5, 4, 2));
    CHECK(survey.values.row(1) == Eigen::RowVector4d(5, 1, 1, 6));
    CHECK_FALSE(survey.has_missing);
    REQUIRE(survey.measurement(0, "skill") != nullptr);
    CHECK(survey.measurement(0, "skill")->variables == std::vector<int>{0, 1});
    CHECK(survey.measurement(0, "delivery")->variables == std::vector<int>{2, 3});
    CHECK(survey.measurement(0, "speed") == nullptr);
}

TEST_CASE("a column reversed in one construct and not in another is two variables, shared otherwise", "[data]") {
    const Survey survey = survey_of(R"(
constructs:
  skill: {indicators: [a, b], reversed: [b], range: [1, 7]}
  pace: {indicators: [b, a], range: [1, 7]}
  delivery: {indicators: [d]}
controls: [pace]
)",
                                    "a,b,d\n1,2,1\n3,4,2\n");
    CHECK(survey.variables.size() == 4);
    CHECK(survey.measurement(0, "skill")->variables == std::vector<int>{0, 1});
    CHECK(survey.measurement(0, "pace")->variables == std::vector<int>{2, 0});
    CHECK(survey.values.row(0) == Eigen::RowVector4d(1, 6, 2, 1));
}

TEST_CASE("rows leave once, under the first reason: conditions first, then columns in order of use", "[data]") {
    const Survey survey = survey_of(R"(
constructs:
  skill: {indicators: [a, b]}
  delivery: {indicators: [d]}
data: {where: {phase: closed, wave: [1, 2]}, missing_codes: [-9], cluster: yard}
)",
                                    "phase,wave,yard,a,b,d\n"
                                    "closed,1,y1,1,1,1\n"      // 1 stays
                                    "open,3,y1,,1,1\n"         // 2 phase
                                    "closed,3,y1,,1,1\n"       // 3 wave
                                    " closed ,2.0,y2,2,2,2\n"  // 4 stays: numbers equal by value
                                    "closed,1,y1,-9,,1\n"      // 5 a
                                    "closed,1,y1,2,-9.0,\n"    // 6 b
                                    "closed,1,y1,1,1,\n"       // 7 d
                                    "closed,1,,1,1,1\n"        // 8 yard
                                    ",1,y1,1,1,1\n"            // 9 phase: no answer equals nothing
                                    "closed,02,y1,3,0,5\n");   // 10 stays
    CHECK(survey.rows_read == 10);
    CHECK(survey.rows == Numbers{1, 4, 10});
    REQUIRE(survey.dropped.size() == 6);
    CHECK(survey.dropped[0].reason == "where: phase is not closed");
    CHECK(survey.dropped[0].rows == Numbers{2, 9});
    CHECK(survey.dropped[1].reason == "where: wave is not 1 or 2");
    CHECK(survey.dropped[1].rows == Numbers{3});
    CHECK(survey.dropped[2].reason == "missing answer in \"a\"");
    CHECK(survey.dropped[2].rows == Numbers{5});
    CHECK(survey.dropped[3].reason == "missing answer in \"b\"");
    CHECK(survey.dropped[3].rows == Numbers{6});
    CHECK(survey.dropped[4].reason == "missing answer in \"d\"");
    CHECK(survey.dropped[4].rows == Numbers{7});
    CHECK(survey.dropped[5].reason == "missing answer in \"yard\"");
    CHECK(survey.dropped[5].rows == Numbers{8});
    CHECK(survey.cluster_names == Texts{"y1", "y2"});
    CHECK(survey.clusters == std::vector<int>{0, 1, 0});
    CHECK(survey.values.col(0) == Eigen::Vector3d(1, 2, 3));
}

TEST_CASE("rows: mean keeps missing predictors and drops rows without an outcome, a category or a cluster", "[data]") {
    const Survey survey = survey_of(R"(
constructs:
  skill: {indicators: [a, b], reversed: [b], range: [1, 7]}
  sector: {category: kind}
  delivery: {indicators: [d]}
controls: [sector]
data: {rows: mean, cluster: yard}
)",
                                    "a,b,kind,yard,d\n1,,x,1,1\n,2,y,1,2\n3,3,,1,3\n4,4,x,,4\n5,5,y,2,\n6,6,x,2,6\n");
    CHECK(survey.rows == Numbers{1, 2, 6});
    CHECK(survey.has_missing);
    CHECK(std::isnan(survey.values(0, 1)));
    CHECK(std::isnan(survey.values(1, 0)));
    CHECK(survey.values(2, 1) == 2);
    REQUIRE(survey.dropped.size() == 3);
    CHECK(survey.dropped[0].reason == "missing answer in \"kind\"");
    CHECK(survey.dropped[1].reason == "missing answer in \"d\"");
    CHECK(survey.dropped[2].reason == "missing answer in \"yard\"");
}

TEST_CASE("categories list their levels: numbers by value, words by bytes", "[data]") {
    const Survey survey = survey_of(R"(
constructs:
  skill: {indicators: [a]}
  sector: {category: kind}
  wave: {category: wave}
  delivery: {indicators: [d]}
controls: [sector, wave]
)",
                                    "a,kind,wave,d\n1,navy,10,1\n2,Cargo,9,2\n3,cargo,2,4\n4,navy,10.0,3\n");
    REQUIRE(survey.categories.size() == 2);
    CHECK(survey.categories[0].column == "kind");
    CHECK(survey.categories[0].levels == Texts{"Cargo", "cargo", "navy"});
    CHECK(survey.categories[0].codes == std::vector<int>{2, 0, 1, 2});
    CHECK(survey.categories[1].levels == Texts{"2", "9", "10"});
    CHECK(survey.categories[1].codes == std::vector<int>{2, 1, 0, 2});
    CHECK(survey.measurement(1, "sector")->category == 0);
    CHECK(survey.measurement(1, "wave")->category == 1);
    CHECK(survey.measurement(1, "wave")->variables.empty());
}

TEST_CASE("a theory's own measurement stands beside the study's", "[data]") {
    const Survey survey =
        survey_of(R"(
constructs:
  skill: {indicators: [a, b]}
  delivery: {indicators: [d]}
)",
                  "a,b,d\n1,2,3\n4,5,5\n", "    constructs: {skill: {indicators: [b], weights: equal}}\n");
    REQUIRE(survey.measurements.size() == 3);
    CHECK(survey.measurement(0, "skill")->theory == Measurement::kEveryTheory);
    CHECK(survey.measurement(0, "skill")->variables == std::vector<int>{0, 1});
    CHECK(survey.measurement(1, "skill")->theory == 1);
    CHECK(survey.measurement(1, "skill")->variables == std::vector<int>{1});
    CHECK(survey.measurement(1, "skill")->weights == Weights::equal);
}

TEST_CASE("constructs that no theory uses cost no rows and give advice", "[data]") {
    const Survey survey = survey_of(R"(
constructs:
  skill: {indicators: [a]}
  mood: {indicators: [m], range: [1, 3]}
  delivery: {indicators: [d]}
)",
                                    "a,m,d\n1,,1\n2,9,2\n");
    CHECK(survey.n() == 2);
    CHECK(survey.variables.size() == 2);
    CHECK_FALSE(survey.measurement(0, "mood")->used);
    CHECK(survey.measurement(0, "mood")->variables.empty());
    CHECK(survey.measurement(0, "skill")->used);
    CHECK(survey.advice ==
          Texts{"construct \"mood\" is used by no theory; its columns do not decide which rows are used"});
}

TEST_CASE("a measurement of its own that a theory never meets gives advice", "[data]") {
    const Survey survey = survey_of(R"(
constructs:
  skill: {indicators: [a]}
  pace: {indicators: [b]}
  delivery: {indicators: [d]}
)",
                                    "a,b,d\n1,,1\n2,2,2\n", "    constructs: {pace: {indicators: [b]}}\n");
    CHECK(survey.n() == 2);
    CHECK(survey.advice ==
          Texts{"construct \"pace\" is used by no theory; its columns do not decide which rows are used",
                "theory \"two\" measures construct \"pace\" its own way but does not use it"});
}

TEST_CASE("a file and its table in memory give the same survey", "[data]") {
    const std::string data = "id,b,a,d,k\n1,2,1,3,x\n2,,4,4,y\n3,6,5,5,x\n4,1,1,1,y\n";
    for (const std::string reversed : {"", ", reversed: [b], range: [1, 7]"}) {
        for (const std::string order : {"a, b", "b, a"}) {
            const std::string constructs =
                "constructs:\n  skill: {indicators: [" + order + "]" + reversed +
                "}\n  sector: {category: k}\n  delivery: {indicators: [d]}\ncontrols: [sector]\n";
            const TestFolder folder;
            folder.write("refits.csv", data);
            const Study study = study_of(constructs, {}, folder / "study.yaml");
            const Survey from_file = read_survey(study);
            const Survey from_table = survey_of(constructs, data);
            CHECK(from_file.values == from_table.values);
            CHECK(from_file.rows == Numbers{1, 3, 4});
            CHECK(from_file.rows == from_table.rows);
            CHECK(from_file.categories[0].codes == from_table.categories[0].codes);
            CHECK(from_file.sha256 == sha256_hex(data));
            CHECK(from_table.sha256.empty());
        }
    }
}

TEST_CASE("globs: a star stands for any characters or none", "[data]") {
    CHECK(glob_matches("pln*", "pln"));
    CHECK(glob_matches("pln*", "pln12"));
    CHECK(glob_matches("*ln*2", "pln12"));
    CHECK(glob_matches("*", "x"));
    CHECK(glob_matches("a*b*c", "aXbYbZc"));
    CHECK_FALSE(glob_matches("pln*", "xpln1"));
    CHECK_FALSE(glob_matches("PLN*", "pln1"));
    CHECK_FALSE(glob_matches("a*b", "a"));
    CHECK(glob_matches(std::string(500, '*') + "b", std::string(20000, 'a') + "b"));
}

TEST_CASE("levels do not depend on the order of the rows", "[data]") {
    const Texts cells = {"3", "1.0", "1", "20", "x"};
    const Numbers some = {3, 0, 2, 1};
    const Levels numeric = code_levels(cells, some);
    CHECK(numeric.names == Texts{"1", "3", "20"});
    CHECK(numeric.codes == std::vector<int>{2, 1, 0, 0});
    const Numbers all = {0, 1, 2, 3, 4};
    CHECK(code_levels(cells, all).names == Texts{"1", "1.0", "20", "3", "x"});
}

TEST_CASE("values taken in place equal values copied", "[data]") {
    Eigen::MatrixXd source(5, 3);
    for (Eigen::Index i = 0; i < source.size(); ++i) source(i) = static_cast<double>(i);
    source(3, 1) = std::nan("");
    const std::vector<std::vector<ValueColumn>> choices = {{{0, false, 0}, {1, true, 8}, {2, false, 0}},
                                                           {{0, false, 0}, {1, true, 8}},
                                                           {},
                                                           {{0, false, 0}, {2, true, 1}},
                                                           {{1, false, 0}, {0, false, 0}, {1, true, 3}}};
    for (const auto& columns : choices) {
        for (const Numbers& rows : {Numbers{0, 1, 2, 3, 4}, Numbers{1, 3}, Numbers{4}, Numbers{}}) {
            Eigen::MatrixXd moved = source;
            const Eigen::MatrixXd copied = gather_values(source, rows, columns);
            const Eigen::MatrixXd taken = take_values(std::move(moved), rows, columns);
            REQUIRE(taken.rows() == copied.rows());
            REQUIRE(taken.cols() == copied.cols());
            CHECK((taken.array() == copied.array() || (taken.array().isNaN() && copied.array().isNaN())).all());
        }
    }
}
