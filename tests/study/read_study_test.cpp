// What a well-formed study file becomes.
#include "rivalfold/study/read_study.hpp"
#include "support/catch.hpp"

using namespace rivalfold;

TEST_CASE("a small study gets every default", "[study]") {
    const Study study = read_study_text(R"(study: Small
data: {file: refits.csv}
constructs:
  skill: {indicators: [skl*]}
  delivery: {indicators: [dlv1, dlv2]}
target: delivery
theories:
  - name: additive
    equations: {delivery: [skill]}
  - name: bent
    equations: {delivery: [skill, {square: skill}]}
)", "folder/study.yaml");
    CHECK(study.title == "Small");
    CHECK(study.data.path == "folder/refits.csv");
    CHECK(study.data.file.place.line == 2);
    CHECK(study.data.file.place.column == 14);
    CHECK(study.theories.at(1).equations.at(0).terms.size() == 2);
    CHECK(study.trial.folds == 10);
}
