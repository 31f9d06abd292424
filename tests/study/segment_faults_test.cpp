// What can be wrong with the segments that a study declares, word for word.
#include "study/changed_study.hpp"

using namespace rivalfold;
using namespace rivalfold::test;

namespace {

std::string faults_with(const std::string& segment) {
    return faults_after({{"refits.csv", "refits.csv\n  segment: " + segment}});
}

}  // namespace

TEST_CASE("a segment must be a column or a column with its cuts", "[study]") {
    CHECK(faults_with("[complexity]") == R"FAULT(
study.yaml:4:12: error: "segment" of "data" must be a column name, or {column: complexity, cuts: [4]}, found a list
    4 |   segment: [complexity]
      |            ^
)FAULT");
    CHECK(faults_with("") == R"FAULT(
study.yaml:4:3: error: "segment" of "data" must be a column name, or {column: complexity, cuts: [4]}, found nothing
    4 |   segment:
      |   ^
)FAULT");
}

TEST_CASE("the keys of a segment are known", "[study]") {
    CHECK(faults_with("{colum: complexity, cuts: [4], cluster: yard}") == R"FAULT(
study.yaml:4:13: error: "segment" of "data" has no key "colum"; expected column or cuts
    4 |   segment: {colum: complexity, cuts: [4], cluster: yard}
      |             ^
did you mean "column"?
study.yaml:4:43: error: "segment" of "data" has no key "cluster"; expected column or cuts
    4 |   segment: {colum: complexity, cuts: [4], cluster: yard}
      |                                           ^
"cluster" belongs to "data"
)FAULT");
    CHECK(faults_with("{cuts: [4]}") == R"FAULT(
study.yaml:4:3: error: "segment" of "data" needs the key "column": expected a column name
    4 |   segment: {cuts: [4]}
      |   ^
)FAULT");
    CHECK(faults_after({{"refits.csv", "refits.csv\n  cuts: [4]"}}) == R"FAULT(
study.yaml:4:3: error: "data" has no key "cuts"; expected file, delimiter, missing_codes, rows, where, cluster, segment, holdout or order
    4 |   cuts: [4]
      |   ^
"cuts" belongs to "segment" of "data"
)FAULT");
}

TEST_CASE("a segment's column must be a name", "[study]") {
    CHECK(faults_with("{column: [a, b], cuts: [4]}") == R"FAULT(
study.yaml:4:21: error: "column" of "segment" of "data" must be a column name, found a list
    4 |   segment: {column: [a, b], cuts: [4]}
      |                     ^
)FAULT");
}

TEST_CASE("cuts must be a list of one to nine numbers", "[study]") {
    CHECK(faults_with("{column: complexity, cuts: 4}") == R"FAULT(
study.yaml:4:39: error: "cuts" of "segment" of "data" must be a list of 1 to 9 ascending numbers, found "4"
    4 |   segment: {column: complexity, cuts: 4}
      |                                       ^
write [4]
)FAULT");
    CHECK(faults_with("{column: complexity, cuts: []}") == R"FAULT(
study.yaml:4:39: error: "cuts" of "segment" of "data" must be a list of 1 to 9 ascending numbers, found an empty list
    4 |   segment: {column: complexity, cuts: []}
      |                                       ^
)FAULT");
    CHECK(faults_with("{column: complexity, cuts: [1, 2, 3, 4, 5, 6, 7, 8, 9, 10]}") == R"FAULT(
study.yaml:4:39: error: "cuts" of "segment" of "data" must be a list of 1 to 9 ascending numbers, found 10
    4 |   segment: {column: complexity, cuts: [1, 2, 3, 4, 5, 6, 7, 8, 9, 10]}
      |                                       ^
)FAULT");
}

TEST_CASE("cuts must be finite numbers that ascend", "[study]") {
    CHECK(faults_with("{column: complexity, cuts: [4, low, .inf, 4.0, 3]}") == R"FAULT(
study.yaml:4:43: error: an item of "cuts" of "segment" of "data" must be a number, found "low"
    4 |   segment: {column: complexity, cuts: [4, low, .inf, 4.0, 3]}
      |                                           ^
study.yaml:4:48: error: an item of "cuts" of "segment" of "data" must be a number, found ".inf"
    4 |   segment: {column: complexity, cuts: [4, low, .inf, 4.0, 3]}
      |                                                ^
study.yaml:4:54: error: "cuts" of "segment" of "data" must ascend, found 4.0 after 4
    4 |   segment: {column: complexity, cuts: [4, low, .inf, 4.0, 3]}
      |                                                      ^
study.yaml:4:59: error: "cuts" of "segment" of "data" must ascend, found 3 after 4
    4 |   segment: {column: complexity, cuts: [4, low, .inf, 4.0, 3]}
      |                                                           ^
)FAULT");
}

TEST_CASE("the segment column is not the cluster column", "[study]") {
    CHECK(faults_after({{"refits.csv", "refits.csv\n  segment: {column: yard, cuts: [4]}\n  cluster: yard"}}) ==
          R"FAULT(
study.yaml:4:21: error: the segment column "yard" is the cluster column too; expected another column: a cluster would be a segment of its own
    4 |   segment: {column: yard, cuts: [4]}
      |                     ^
)FAULT");
}

TEST_CASE("the flexible benchmark keeps its name", "[study]") {
    CHECK(faults_after({{"name: chain", "name: flexible benchmark"}}) == R"FAULT(
study.yaml:14:11: error: the theory "flexible benchmark" has the name of a benchmark of every contest; expected another name
   14 |   - name: flexible benchmark
      |           ^
)FAULT");
}
