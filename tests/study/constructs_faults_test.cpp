// Constructs, the target and the controls: what is wrong with them, word for word.
#include "study/changed_study.hpp"

using namespace rivalfold;
using namespace rivalfold::test;

TEST_CASE("an unknown key of a construct", "[study]") {
    CHECK(faults_after({{"indicators: [skl1", "indicator: [skl1"}}) == R"FAULT(
study.yaml:6:11: error: construct "skill" has no key "indicator"; expected indicators, reversed, range, weights or category
    6 |   skill: {indicator: [skl1, skl2]}
      |           ^
did you mean "indicators"?
)FAULT");
}

TEST_CASE("constructs must be names", "[study]") {
    CHECK(faults_after({{"constructs:\n  planning: {indicators: [pln1, pln2], range: [1, 7]}\n  skill: {indicators: "
                         "[skl1, skl2]}\n  sector: {category: sector}\n  delivery: {indicators: [dlv1, dlv2]}\n",
                         "constructs: [a, b]\n"}}) == R"FAULT(
study.yaml:4:13: error: "constructs" must be constructs by name, e.g. skill: {indicators: [skl1, skl2]}, found a list
    4 | constructs: [a, b]
      |             ^
)FAULT");
}

TEST_CASE("a construct must be keys with values", "[study]") {
    CHECK(faults_after({{"{indicators: [skl1, skl2]}", "[skl1, skl2]"}}) == R"FAULT(
study.yaml:6:10: error: construct "skill" must be keys with values (keys: indicators, reversed, range, weights and category), found a list
    6 |   skill: [skl1, skl2]
      |          ^
)FAULT");
}

TEST_CASE("a construct without columns", "[study]") {
    CHECK(faults_after({{"skill: {indicators: [skl1, skl2]}", "skill: {weights: equal}"}}) == R"FAULT(
study.yaml:6:3: error: construct "skill" has neither "indicators" nor "category"; expected one of them
    6 |   skill: {weights: equal}
      |   ^
)FAULT");
}

TEST_CASE("a construct is not both measured and a category", "[study]") {
    CHECK(faults_after({{"{indicators: [skl1, skl2]}", "{indicators: [skl1], category: skl2}"}}) == R"FAULT(
study.yaml:6:31: error: construct "skill" has both "indicators" and "category"; expected one of them
    6 |   skill: {indicators: [skl1], category: skl2}
      |                               ^
)FAULT");
}

TEST_CASE("a category takes nothing else", "[study]") {
    CHECK(faults_after({{"{category: sector}",
                         "{category: sector, weights: equal, range: [1, 2], reversed: [sector]}"}}) == R"FAULT(
study.yaml:7:30: error: construct "sector" is a category, for which "weights" means nothing; expected "category" alone
    7 |   sector: {category: sector, weights: equal, range: [1, 2], reversed: ...
      |                              ^
study.yaml:7:46: error: construct "sector" is a category, for which "range" means nothing; expected "category" alone
    7 | ... {category: sector, weights: equal, range: [1, 2], reversed: [sector]}
      |                                        ^
study.yaml:7:61: error: construct "sector" is a category, for which "reversed" means nothing; expected "category" alone
    7 | ... {category: sector, weights: equal, range: [1, 2], reversed: [sector]}
      |                                                       ^
)FAULT");
}

TEST_CASE("indicators must be a list", "[study]") {
    CHECK(faults_after({{"{indicators: [skl1, skl2]}", "{indicators: skl1}"}}) == R"FAULT(
study.yaml:6:23: error: "indicators" of construct "skill" must be a list of one or more column names, found "skl1"
    6 |   skill: {indicators: skl1}
      |                       ^
write ["skl1"]
)FAULT");
}

TEST_CASE("indicators must not be empty", "[study]") {
    CHECK(faults_after({{"{indicators: [skl1, skl2]}", "{indicators: []}"}}) == R"FAULT(
study.yaml:6:23: error: "indicators" of construct "skill" must be a list of one or more column names, found an empty list
    6 |   skill: {indicators: []}
      |                       ^
)FAULT");
}

TEST_CASE("an indicator stands once", "[study]") {
    CHECK(faults_after({{"[skl1, skl2]", "[skl1, skl2, skl1]"}}) == R"FAULT(
study.yaml:6:36: error: "indicators" of construct "skill" lists "skl1" twice, first in line 6; expected it once
    6 |   skill: {indicators: [skl1, skl2, skl1]}
      |                                    ^
)FAULT");
}

TEST_CASE("an indicator must be a name", "[study]") {
    CHECK(faults_after({{"[skl1, skl2]", "[skl1, [skl2], null, \"\"]"}}) == R"FAULT(
study.yaml:6:30: error: an item of "indicators" of construct "skill" must be a name, found a list
    6 |   skill: {indicators: [skl1, [skl2], null, ""]}
      |                              ^
study.yaml:6:38: error: an item of "indicators" of construct "skill" must be a name, found "null", which means nothing in YAML
    6 |   skill: {indicators: [skl1, [skl2], null, ""]}
      |                                      ^
in quotes it would be text: "null"
study.yaml:6:44: error: an item of "indicators" of construct "skill" must be a name, found the quoted text ""
    6 |   skill: {indicators: [skl1, [skl2], null, ""]}
      |                                            ^
)FAULT");
}

TEST_CASE("a control character in a name is shown, not sent", "[study]") {
    CHECK(faults_after({{"[skl1, skl2]", "[skl1, \"skl\\e[31m2\"]"}}) == R"FAULT(
study.yaml:6:30: error: an item of "indicators" of construct "skill" must be a name without control characters, found the quoted text "skl\x1b[31m2"
    6 |   skill: {indicators: [skl1, "skl\e[31m2"]}
      |                              ^
)FAULT");
}

TEST_CASE("a construct name holds no control character", "[study]") {
    CHECK(faults_after({{"  skill: {", "  \"sk\\nill\": {"},
                        {"[planning, skill]", "[planning]"},
                        {"      skill: [planning]\n", ""},
                        {"[skill]", "[planning]"}}) == R"FAULT(
study.yaml:6:3: error: the name of a construct must be text without control characters, found the quoted text "sk\nill"
    6 |   "sk\nill": {indicators: [skl1, skl2]}
      |   ^
)FAULT");
}

TEST_CASE("reversed needs a range", "[study]") {
    CHECK(faults_after({{"[skl1, skl2]}", "[skl1, skl2], reversed: [skl1]}"}}) == R"FAULT(
study.yaml:6:37: error: construct "skill" has "reversed" but no "range"; expected the range, because a reversed value is low + high - value
    6 |   skill: {indicators: [skl1, skl2], reversed: [skl1]}
      |                                     ^
)FAULT");
}

TEST_CASE("reversed must be among the indicators", "[study]") {
    CHECK(faults_after({{"range: [1, 7]", "range: [1, 7], reversed: [pln3]"}}) == R"FAULT(
study.yaml:5:66: error: construct "planning" reverses "pln3", which is none of its indicators
    5 | ... planning: {indicators: [pln1, pln2], range: [1, 7], reversed: [pln3]}
      |                                                                    ^
did you mean "pln1"?
)FAULT");
}

TEST_CASE("a reversed glob must fit an indicator", "[study]") {
    CHECK(faults_after({{"range: [1, 7]", "range: [1, 7], reversed: [\"s*\"]"}}) == R"FAULT(
study.yaml:5:66: error: construct "planning" reverses "s*", which is none of its indicators
    5 | ... planning: {indicators: [pln1, pln2], range: [1, 7], reversed: ["s*"]}
      |                                                                    ^
)FAULT");
}

TEST_CASE("a range has two ends", "[study]") {
    CHECK(faults_after({{"range: [1, 7]", "range: [1, 4, 7]"}}) == R"FAULT(
study.yaml:5:47: error: "range" of construct "planning" must be two numbers, the lower first, e.g. [1, 7], found 3 of them
    5 |   planning: {indicators: [pln1, pln2], range: [1, 4, 7]}
      |                                               ^
)FAULT");
}

TEST_CASE("a range is a list", "[study]") {
    CHECK(faults_after({{"range: [1, 7]", "range: 1-7"}}) == R"FAULT(
study.yaml:5:47: error: "range" of construct "planning" must be two numbers, the lower first, e.g. [1, 7], found "1-7"
    5 |   planning: {indicators: [pln1, pln2], range: 1-7}
      |                                               ^
)FAULT");
}

TEST_CASE("a range begins with its lower end", "[study]") {
    CHECK(faults_after({{"range: [1, 7]", "range: [7, 1]"}}) == R"FAULT(
study.yaml:5:47: error: "range" of construct "planning" must be two numbers, the lower first, e.g. [1, 7], found "7" before "1"
    5 |   planning: {indicators: [pln1, pln2], range: [7, 1]}
      |                                               ^
)FAULT");
}

TEST_CASE("the ends of a range are numbers", "[study]") {
    CHECK(faults_after({{"range: [1, 7]", "range: [one, 0x7]"}}) == R"FAULT(
study.yaml:5:48: error: the lower end of "range" of construct "planning" must be a number, found "one"
    5 |   planning: {indicators: [pln1, pln2], range: [one, 0x7]}
      |                                                ^
study.yaml:5:53: error: the upper end of "range" of construct "planning" must be a number, found "0x7"
    5 |   planning: {indicators: [pln1, pln2], range: [one, 0x7]}
      |                                                     ^
write it in decimal digits
)FAULT");
}

TEST_CASE("weights has four words", "[study]") {
    CHECK(faults_after({{"[skl1, skl2]}", "[skl1, skl2], weights: mode_c}"}}) == R"FAULT(
study.yaml:6:46: error: "weights" of construct "skill" must be mode_a, mode_b, equal or principal, found "mode_c"
    6 |   skill: {indicators: [skl1, skl2], weights: mode_c}
      |                                              ^
did you mean "mode_a"?
)FAULT");
}

TEST_CASE("the target must exist", "[study]") {
    CHECK(faults_after({{"target: delivery", "target: delivry"}}) == R"FAULT(
study.yaml:9:9: error: the target "delivry" is no construct of the study; expected one of its constructs
    9 | target: delivry
      |         ^
did you mean "delivery"?
)FAULT");
}

TEST_CASE("the target is no category", "[study]") {
    CHECK(faults_after({{"target: delivery\ncontrols: [sector]", "target: sector"}}) == R"FAULT(
study.yaml:9:9: error: the target "sector" is a category; expected a construct with indicators
    9 | target: sector
      |         ^
)FAULT");
}

TEST_CASE("a control must exist and is not the target", "[study]") {
    CHECK(faults_after({{"controls: [sector]", "controls: [secter, delivery]"}}) == R"FAULT(
study.yaml:10:12: error: the control "secter" is no construct of the study; expected one of its constructs
   10 | controls: [secter, delivery]
      |            ^
did you mean "sector"?
study.yaml:10:20: error: the control "delivery" is the target; expected another construct
   10 | controls: [secter, delivery]
      |                    ^
)FAULT");
}

TEST_CASE("a control is listed once", "[study]") {
    CHECK(faults_after({{"controls: [sector]", "controls: [sector, skill, sector]"}}) == R"FAULT(
study.yaml:10:27: error: "controls" lists "sector" twice, first in line 10; expected it once
   10 | controls: [sector, skill, sector]
      |                           ^
study.yaml:13:38: error: theory "additive" has the control "skill" as a term of the target's equation, where every control stands already; expected it left out
   13 |     equations: {delivery: [planning, skill]}
      |                                      ^
study.yaml:17:18: error: theory "chain" has the control "skill" as a term of the target's equation, where every control stands already; expected it left out
   17 |       delivery: [skill]
      |                  ^
)FAULT");
}

TEST_CASE("controls must be a list", "[study]") {
    CHECK(faults_after({{"controls: [sector]", "controls: sector"}}) == R"FAULT(
study.yaml:10:11: error: "controls" must be a list of construct names, found "sector"
   10 | controls: sector
      |           ^
write ["sector"]
)FAULT");
}
