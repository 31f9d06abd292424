// The keys of the study itself and of data: what is wrong with a value, word for word.
#include "study/changed_study.hpp"

using namespace rivalfold;
using namespace rivalfold::test;

TEST_CASE("an unknown key of the study is faulted with the nearest one", "[study]") {
    CHECK(faults_after({{"theories:", "theory:"}}) == R"FAULT(
study.yaml:1:1: error: a study needs the key "theories": expected two or more rival theories
    1 | study: Refits
      | ^
study.yaml:11:1: error: a study has no key "theory"; expected study, data, constructs, target, controls, metric, theories, trial or verdict
   11 | theory:
      | ^
)FAULT");
}

TEST_CASE("a key in the wrong place is told where it belongs", "[study]") {
    CHECK(faults_after({{"target: delivery", "target: delivery\nfolds: 4"}}) == R"FAULT(
study.yaml:10:1: error: a study has no key "folds"; expected study, data, constructs, target, controls, metric, theories, trial or verdict
   10 | folds: 4
      | ^
"folds" belongs to "trial"
)FAULT");
}

TEST_CASE("a missing required key is named with what it must hold", "[study]") {
    CHECK(faults_after({{"target: delivery\n", ""}}) == R"FAULT(
study.yaml:1:1: error: a study needs the key "target": expected the construct whose indicators every theory must predict
    1 | study: Refits
      | ^
)FAULT");
}

TEST_CASE("a title must be text", "[study]") {
    CHECK(faults_after({{"study: Refits", "study: [Refits]"}}) == R"FAULT(
study.yaml:1:8: error: "study" must be a title, found a list
    1 | study: [Refits]
      |        ^
)FAULT");
}

TEST_CASE("an empty value is nothing, found at its key", "[study]") {
    CHECK(faults_after({{"target: delivery", "target:"}}) == R"FAULT(
study.yaml:9:1: error: "target" must be a construct name, found nothing
    9 | target:
      | ^
)FAULT");
}

TEST_CASE("data without a file", "[study]") {
    CHECK(faults_after({{"  file: refits.csv", "  rows: drop"}}) == R"FAULT(
study.yaml:2:1: error: "data" needs the key "file": expected the name of a data file
    2 | data:
      | ^
)FAULT");
}

TEST_CASE("data must be keys with values", "[study]") {
    CHECK(faults_after({{"data:\n  file: refits.csv", "data: refits.csv"}}) == R"FAULT(
study.yaml:2:7: error: "data" must be keys with values (keys: file, delimiter, missing_codes, rows, where, cluster, segment, holdout and order), found "refits.csv"
    2 | data: refits.csv
      |       ^
)FAULT");
}

TEST_CASE("a colon without a space is pointed out", "[study]") {
    CHECK(faults_after({{"data:\n  file: refits.csv", "data:\n  file:refits.csv"}}) == R"FAULT(
study.yaml:3:3: error: "data" must be keys with values (keys: file, delimiter, missing_codes, rows, where, cluster, segment, holdout and order), found "file:refits.csv"
    3 |   file:refits.csv
      |   ^
a colon after a key needs a space after it
)FAULT");
}

TEST_CASE("a spreadsheet must be saved as CSV", "[study]") {
    CHECK(faults_after({{"refits.csv", "Refits.XLSX"}}) == R"FAULT(
study.yaml:3:9: error: "file" of "data" must be delimited text, found the spreadsheet "Refits.XLSX"; save its sheet as CSV
    3 |   file: Refits.XLSX
      |         ^
)FAULT");
}

TEST_CASE("any other ending is faulted", "[study]") {
    CHECK(faults_after({{"refits.csv", "refits.parquet"}}) == R"FAULT(
study.yaml:3:9: error: "file" of "data" must end in .csv, .tsv or .txt, found "refits.parquet"
    3 |   file: refits.parquet
      |         ^
)FAULT");
}

TEST_CASE("a data file without a name", "[study]") {
    CHECK(faults_after({{"refits.csv", "\"\""}}) == R"FAULT(
study.yaml:3:9: error: "file" of "data" must be the name of a data file, found the quoted text ""
    3 |   file: ""
      |         ^
)FAULT");
}

TEST_CASE("an unknown delimiter is faulted", "[study]") {
    CHECK(faults_after({{"refits.csv", "refits.csv\n  delimiter: \":\""}}) == R"FAULT(
study.yaml:4:14: error: "delimiter" of "data" must be ",", ";", "|" or tab, found the quoted text ":"
    4 |   delimiter: ":"
      |              ^
)FAULT");
}

TEST_CASE("a bare bar as delimiter needs quotes", "[study]") {
    CHECK(faults_after({{"refits.csv", "refits.csv\n  delimiter: |"}}) == R"FAULT(
study.yaml:4:14: error: "delimiter" of "data" must be ",", ";", "|" or tab, found the quoted text ""
    4 |   delimiter: |
      |              ^
a bare | must stand in quotes: "|"
)FAULT");
}

TEST_CASE("a bare comma as delimiter needs quotes", "[study]") {
    CHECK(faults_after({{"refits.csv", "refits.csv\n  delimiter: ,"}}) == R"FAULT(
study.yaml:4:14: error: this line does not fit the keys above it; expected the same indentation, and a colon and a space after each key
    4 |   delimiter: ,
      |              ^
text that begins with , must stand in quotes
)FAULT");
}

TEST_CASE("missing_codes must be a list", "[study]") {
    CHECK(faults_after({{"refits.csv", "refits.csv\n  missing_codes: -9"}}) == R"FAULT(
study.yaml:4:18: error: "missing_codes" of "data" must be a list of cell values, found "-9"
    4 |   missing_codes: -9
      |                  ^
write [-9]
)FAULT");
}

TEST_CASE("a null among missing_codes needs quotes", "[study]") {
    CHECK(faults_after({{"refits.csv", "refits.csv\n  missing_codes: [-9, NULL]"}}) == R"FAULT(
study.yaml:4:23: error: an item of "missing_codes" of "data" must be a cell value, found "NULL", which means nothing in YAML
    4 |   missing_codes: [-9, NULL]
      |                       ^
in quotes it would be text: "NULL"
)FAULT");
}

TEST_CASE("rows: regression is not supported yet", "[study]") {
    CHECK(faults_after({{"refits.csv", "refits.csv\n  rows: regression"}}) == R"FAULT(
study.yaml:4:9: error: "rows: regression" is not supported yet; expected drop or mean
    4 |   rows: regression
      |         ^
)FAULT");
}

TEST_CASE("rows has two words", "[study]") {
    CHECK(faults_after({{"refits.csv", "refits.csv\n  rows: mena"}}) == R"FAULT(
study.yaml:4:9: error: "rows" of "data" must be drop or mean, found "mena"
    4 |   rows: mena
      |         ^
did you mean "mean"?
)FAULT");
}

TEST_CASE("where must give columns with values", "[study]") {
    CHECK(faults_after({{"refits.csv", "refits.csv\n  where: closed"}}) == R"FAULT(
study.yaml:4:10: error: "where" of "data" must be columns with the values to keep, e.g. {phase: closed}, found "closed"
    4 |   where: closed
      |          ^
)FAULT");
}

TEST_CASE("where needs a value for each column", "[study]") {
    CHECK(faults_after({{"refits.csv", "refits.csv\n  where: {phase: [], wave: {a: b}, yard: }"}}) == R"FAULT(
study.yaml:4:18: error: "phase" in "where" of "data" must be a cell value or a list of one or more, found an empty list
    4 |   where: {phase: [], wave: {a: b}, yard: }
      |                  ^
study.yaml:4:28: error: "wave" in "where" of "data" must be a cell value or a list of one or more, found keys with values
    4 |   where: {phase: [], wave: {a: b}, yard: }
      |                            ^
study.yaml:4:36: error: "yard" in "where" of "data" must be a cell value or a list of one or more, found nothing
    4 |   where: {phase: [], wave: {a: b}, yard: }
      |                                    ^
)FAULT");
}

TEST_CASE("cluster must be a column name", "[study]") {
    CHECK(faults_after({{"refits.csv", "refits.csv\n  cluster: [yard]"}}) == R"FAULT(
study.yaml:4:12: error: "cluster" of "data" must be a column name, found a list
    4 |   cluster: [yard]
      |            ^
)FAULT");
}

TEST_CASE("holdout and order are not supported yet", "[study]") {
    CHECK(faults_after({{"refits.csv", "refits.csv\n  holdout: {share: 0.25}\n  order: date"}}) == R"FAULT(
study.yaml:4:3: error: "holdout" is not supported yet; leave the key out
    4 |   holdout: {share: 0.25}
      |   ^
study.yaml:5:3: error: "order" is not supported yet; leave the key out
    5 |   order: date
      |   ^
)FAULT");
}

TEST_CASE("metric has two words", "[study]") {
    CHECK(faults_after({{"target:", "metric: standart\ntarget:"}}) == R"FAULT(
study.yaml:9:9: error: "metric" must be standard or response, found "standart"
    9 | metric: standart
      |         ^
did you mean "standard"?
)FAULT");
}

TEST_CASE("the study must be keys with values", "[study]") {
    CHECK(faults_in("just text\n") == R"FAULT(
study.yaml:1:1: error: a study must be keys with values (keys: study, data, constructs, target, controls, metric, theories, trial and verdict), found "just text"
    1 | just text
      | ^
)FAULT");
}

TEST_CASE("an empty file holds no study", "[study]") {
    CHECK(faults_in("") == R"FAULT(
study.yaml:1:1: error: a study must be keys with values (keys: study, data, constructs, target, controls, metric, theories, trial and verdict), found nothing
)FAULT");
}

TEST_CASE("a list is no study", "[study]") {
    CHECK(faults_in("- a\n- b\n") == R"FAULT(
study.yaml:1:1: error: a study must be keys with values (keys: study, data, constructs, target, controls, metric, theories, trial and verdict), found a list
    1 | - a
      | ^
)FAULT");
}

TEST_CASE("the files of statistics packages are not supported yet", "[study]") {
    for (const std::string ending : {".sav", ".zsav", ".por", ".dta", ".sas7bdat", ".xpt", ".SAV"}) {
        std::string lower = ending == ".SAV" ? ".sav" : ending;
        CHECK(faults_after({{"refits.csv", "refits" + ending}}) ==
              "\nstudy.yaml:3:9: error: \"file\" ending in " + lower + " is not supported yet, found \"refits" +
                  ending + "\"; save it as CSV\n    3 |   file: refits" + ending + "\n      |         ^\n");
    }
}
