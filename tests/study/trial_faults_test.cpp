// The keys of trial and verdict: what is wrong with a value, word for word.
#include "study/changed_study.hpp"

using namespace rivalfold;
using namespace rivalfold::test;

TEST_CASE("folds must be a whole number of at least two", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds: 1"}}) == R"FAULT(
study.yaml:19:10: error: "folds" of "trial" must be a whole number of 2 or more, found "1"
   19 |   folds: 1
      |          ^
)FAULT");
}

TEST_CASE("a number in words is no number", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds: ten"}}) == R"FAULT(
study.yaml:19:10: error: "folds" of "trial" must be a whole number of 2 or more, found "ten"
   19 |   folds: ten
      |          ^
)FAULT");
}

TEST_CASE("a quoted number is no number", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds: \"10\""}}) == R"FAULT(
study.yaml:19:10: error: "folds" of "trial" must be a whole number of 2 or more, found the quoted text "10"
   19 |   folds: "10"
      |          ^
leave out the quotes
)FAULT");
}

TEST_CASE("a hexadecimal number is faulted", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds: 0x10"}}) == R"FAULT(
study.yaml:19:10: error: "folds" of "trial" must be a whole number of 2 or more, found "0x10"
   19 |   folds: 0x10
      |          ^
write it in decimal digits
)FAULT");
}

TEST_CASE("an octal number is faulted", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds: 0o17"}}) == R"FAULT(
study.yaml:19:10: error: "folds" of "trial" must be a whole number of 2 or more, found "0o17"
   19 |   folds: 0o17
      |          ^
write it in decimal digits
)FAULT");
}

TEST_CASE("a number with an exponent is not whole", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds: 1e2"}}) == R"FAULT(
study.yaml:19:10: error: "folds" of "trial" must be a whole number of 2 or more, found "1e2"
   19 |   folds: 1e2
      |          ^
)FAULT");
}

TEST_CASE("a list is no number", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds: [5]"}}) == R"FAULT(
study.yaml:19:10: error: "folds" of "trial" must be a whole number of 2 or more, found a list
   19 |   folds: [5]
      |          ^
)FAULT");
}

TEST_CASE("underscores in a number are faulted", "[study]") {
    CHECK(faults_after({{"folds: 5", "repeats: 1_000"}}) == R"FAULT(
study.yaml:19:12: error: "repeats" of "trial" must be a whole number from 1 to 10000, or auto, found "1_000"
   19 |   repeats: 1_000
      |            ^
write it without underscores
)FAULT");
}

TEST_CASE("repeats end at 10000", "[study]") {
    CHECK(faults_after({{"folds: 5", "repeats: 10001"}}) == R"FAULT(
study.yaml:19:12: error: "repeats" of "trial" must be a whole number from 1 to 10000, or auto, found "10001"
   19 |   repeats: 10001
      |            ^
)FAULT");
}

TEST_CASE("repeats knows one word", "[study]") {
    CHECK(faults_after({{"folds: 5", "repeats: automatic"}}) == R"FAULT(
study.yaml:19:12: error: "repeats" of "trial" must be a whole number from 1 to 10000, or auto, found "automatic"
   19 |   repeats: automatic
      |            ^
)FAULT");
}

TEST_CASE("repeats: auto stands beside no folds_file either", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds_file: splits.csv\n  repeats: auto"}}) == R"FAULT(
study.yaml:20:3: error: "repeats" stands beside "folds_file", which is given instead of folds, repeats and seed; expected one or the other
   20 |   repeats: auto
      |   ^
)FAULT");
}

TEST_CASE("a negative seed is faulted", "[study]") {
    CHECK(faults_after({{"folds: 5", "seed: -1"}}) == R"FAULT(
study.yaml:19:9: error: "seed" of "trial" must be a whole number from 0 to 18446744073709551615, found "-1"
   19 |   seed: -1
      |         ^
)FAULT");
}

TEST_CASE("a seed beyond 64 bits is faulted", "[study]") {
    CHECK(faults_after({{"folds: 5", "seed: 18446744073709551616"}}) == R"FAULT(
study.yaml:19:9: error: "seed" of "trial" must be a whole number from 0 to 18446744073709551615, found "18446744073709551616"
   19 |   seed: 18446744073709551616
      |         ^
)FAULT");
}

TEST_CASE("folds_file stands instead of folds, repeats and seed", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds_file: splits.csv\n  folds: 5\n  seed: 2"}}) == R"FAULT(
study.yaml:20:3: error: "folds" stands beside "folds_file", which is given instead of folds, repeats and seed; expected one or the other
   20 |   folds: 5
      |   ^
study.yaml:21:3: error: "seed" stands beside "folds_file", which is given instead of folds, repeats and seed; expected one or the other
   21 |   seed: 2
      |   ^
)FAULT");
}

TEST_CASE("loss has two words", "[study]") {
    CHECK(faults_after({{"folds: 5", "loss: square"}}) == R"FAULT(
study.yaml:19:9: error: "loss" of "trial" must be squared or absolute, found "square"
   19 |   loss: square
      |         ^
did you mean "squared"?
)FAULT");
}

TEST_CASE("mediators has two words", "[study]") {
    CHECK(faults_after({{"folds: 5", "mediators: Predicted"}}) == R"FAULT(
study.yaml:19:14: error: "mediators" of "trial" must be measured or predicted, found "Predicted"
   19 |   mediators: Predicted
      |              ^
did you mean "predicted"?
)FAULT");
}

TEST_CASE("level must be between its ends", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds: 5\nverdict: {level: 0.5, margin: 1}"}}) == R"FAULT(
study.yaml:20:18: error: "level" of "verdict" must be a number above 0 and below 0.5, found "0.5"
   20 | verdict: {level: 0.5, margin: 1}
      |                  ^
study.yaml:20:31: error: "margin" of "verdict" must be a number from 0 to below 1, found "1"
   20 | verdict: {level: 0.5, margin: 1}
      |                               ^
)FAULT");
}

TEST_CASE("a huge number is faulted", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds: 5\nverdict: {level: 1e400, margin: -0.1}"}}) == R"FAULT(
study.yaml:20:18: error: "level" of "verdict" must be a number above 0 and below 0.5, found "1e400"
   20 | verdict: {level: 1e400, margin: -0.1}
      |                  ^
a number this large or this close to 0 cannot be held exactly enough
study.yaml:20:33: error: "margin" of "verdict" must be a number from 0 to below 1, found "-0.1"
   20 | verdict: {level: 1e400, margin: -0.1}
      |                                 ^
)FAULT");
}

TEST_CASE("infinity and half numbers are no numbers", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds: 5\nverdict: {level: .inf, margin: .5abc}"}}) == R"FAULT(
study.yaml:20:18: error: "level" of "verdict" must be a number above 0 and below 0.5, found ".inf"
   20 | verdict: {level: .inf, margin: .5abc}
      |                  ^
study.yaml:20:32: error: "margin" of "verdict" must be a number from 0 to below 1, found ".5abc"
   20 | verdict: {level: .inf, margin: .5abc}
      |                                ^
)FAULT");
}

TEST_CASE("a decimal comma is pointed out", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds: 5\nverdict:\n  margin: 0,02"}}) == R"FAULT(
study.yaml:21:11: error: "margin" of "verdict" must be a number from 0 to below 1, found "0,02"
   21 |   margin: 0,02
      |           ^
write 0.02 with a decimal point
)FAULT");
}

TEST_CASE("yes is not true", "[study]") {
    CHECK(faults_after({{"folds: 5", "folds: 5\nverdict: {completeness: yes}"}}) == R"FAULT(
study.yaml:20:25: error: "completeness" of "verdict" must be true or false, found "yes"
   20 | verdict: {completeness: yes}
      |                         ^
)FAULT");
}
