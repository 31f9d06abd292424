// Theories, equations and terms: what is wrong with them, word for word.
#include "study/changed_study.hpp"

using namespace rivalfold;
using namespace rivalfold::test;

TEST_CASE("an unknown construct is faulted with the nearest one", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[planning, skil]"}}) == R"FAULT(
study.yaml:13:38: error: theory "additive" uses the construct "skil", which nothing defines
   13 |     equations: {delivery: [planning, skil]}
      |                                      ^
did you mean "skill"?
)FAULT");
}

TEST_CASE("an unknown outcome is faulted", "[study]") {
    CHECK(faults_after({{"      skill: [planning]", "      skil: [planning]"}}) == R"FAULT(
study.yaml:16:7: error: theory "chain" explains the construct "skil", which nothing defines
   16 |       skil: [planning]
      |       ^
did you mean "skill"?
)FAULT");
}

TEST_CASE("an unknown key of a theory", "[study]") {
    CHECK(faults_after({{"equations: {", "equation: {"}}) == R"FAULT(
study.yaml:13:5: error: theory "additive" has no key "equation"; expected name, claim, equations or constructs
   13 |     equation: {delivery: [planning, skill]}
      |     ^
did you mean "equations"?
)FAULT");
}

TEST_CASE("a theory without a name", "[study]") {
    CHECK(faults_after({{"- name: additive\n    equations", "- equations"}}) == R"FAULT(
study.yaml:12:5: error: theory number 1 needs the key "name": expected a name of its own
   12 |   - equations: {delivery: [planning, skill]}
      |     ^
)FAULT");
}

TEST_CASE("two theories must not share a name", "[study]") {
    CHECK(faults_after({{"name: chain", "name: additive"}}) == R"FAULT(
study.yaml:14:11: error: two theories have the name "additive", the first in line 12; expected a name of its own
   14 |   - name: additive
      |           ^
)FAULT");
}

TEST_CASE("a theory must not take the name of a benchmark", "[study]") {
    CHECK(faults_after({{"name: chain", "name: training mean"}}) == R"FAULT(
study.yaml:14:11: error: the theory "training mean" has the name of a benchmark of every contest; expected another name
   14 |   - name: training mean
      |           ^
)FAULT");
}

TEST_CASE("a contest needs two theories", "[study]") {
    CHECK(faults_after({{"  - name: chain\n    equations:\n      skill: [planning]\n      delivery: [skill]\n", ""}}) ==
          R"FAULT(
study.yaml:12:3: error: "theories" must be a list of two or more theories, found 1; a contest needs a rival
   12 |   - name: additive
      |   ^
)FAULT");
}

TEST_CASE("theories must be a list", "[study]") {
    CHECK(faults_after({{"theories:\n  - name: additive\n    equations: {delivery: [planning, skill]}\n  - name: "
                         "chain\n    equations:\n      skill: [planning]\n      delivery: [skill]\n",
                         "theories: {additive: [skill]}\n"}}) == R"FAULT(
study.yaml:11:11: error: "theories" must be a list of two or more theories, each beginning with - name:, found keys with values
   11 | theories: {additive: [skill]}
      |           ^
)FAULT");
}

TEST_CASE("a theory must be keys with values", "[study]") {
    CHECK(faults_after({{"  - name: chain", "  - chain\n  - name: chain"}}) == R"FAULT(
study.yaml:14:5: error: theory number 2 must be keys with values (keys: name, claim, equations and constructs), found "chain"
   14 |   - chain
      |     ^
)FAULT");
}

TEST_CASE("a claim is a sentence", "[study]") {
    CHECK(faults_after({{"name: chain", "name: chain\n    claim: [a, b]"}}) == R"FAULT(
study.yaml:15:12: error: "claim" of theory "chain" must be a sentence, found a list
   15 |     claim: [a, b]
      |            ^
)FAULT");
}

TEST_CASE("equations must give outcomes", "[study]") {
    CHECK(faults_after({{"{delivery: [planning, skill]}", "[planning, skill]"}}) == R"FAULT(
study.yaml:13:16: error: "equations" of theory "additive" must be outcomes with their terms, e.g. delivery: [planning, skill], found a list
   13 |     equations: [planning, skill]
      |                ^
)FAULT");
}

TEST_CASE("terms must be a list", "[study]") {
    CHECK(faults_after({{"{delivery: [planning, skill]}", "{delivery: planning}"}}) == R"FAULT(
study.yaml:13:27: error: the equation of "delivery" in theory "additive" must be a list of one or more terms, found "planning"
   13 |     equations: {delivery: planning}
      |                           ^
write [planning]
)FAULT");
}

TEST_CASE("terms must not be empty", "[study]") {
    CHECK(faults_after({{"{delivery: [planning, skill]}", "{delivery: []}"}}) == R"FAULT(
study.yaml:13:27: error: the equation of "delivery" in theory "additive" must be a list of one or more terms, found an empty list
   13 |     equations: {delivery: []}
      |                           ^
)FAULT");
}

TEST_CASE("a term must be a name or a term", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[planning, [skill]]"}}) == R"FAULT(
study.yaml:13:38: error: a term of the equation of "delivery" in theory "additive" must be a construct name or a term such as {product: [a, b]}, found a list
   13 |     equations: {delivery: [planning, [skill]]}
      |                                      ^
)FAULT");
}

TEST_CASE("a term has one key", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[planning, {product: [planning, skill], square: skill}]"}}) == R"FAULT(
study.yaml:13:38: error: a term of the equation of "delivery" in theory "additive" must have one key (product, crossed, minimum, maximum, square or geometric_mean), found 2
   13 | ...  equations: {delivery: [planning, {product: [planning, skill], square...
      |                                       ^
)FAULT");
}

TEST_CASE("an unknown term is faulted with the nearest one", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[{minimun: [planning, skill]}]"}}) == R"FAULT(
study.yaml:13:29: error: the equation of "delivery" in theory "additive" has a term "minimun"; expected product, crossed, minimum, maximum, square or geometric_mean
   13 |     equations: {delivery: [{minimun: [planning, skill]}]}
      |                             ^
did you mean "minimum"?
)FAULT");
}

TEST_CASE("a product needs two members", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[{product: [planning]}]"}}) == R"FAULT(
study.yaml:13:38: error: "product" in the equation of "delivery" in theory "additive" must be a list of two or more construct names, found one
   13 |     equations: {delivery: [{product: [planning]}]}
      |                                      ^
)FAULT");
}

TEST_CASE("a product names its members in a list", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[{product: planning}]"}}) == R"FAULT(
study.yaml:13:38: error: "product" in the equation of "delivery" in theory "additive" must be a list of two or more construct names, found "planning"
   13 |     equations: {delivery: [{product: planning}]}
      |                                      ^
write ["planning"]
)FAULT");
}

TEST_CASE("a product does not repeat a member", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[{product: [skill, planning, skill]}]"}}) == R"FAULT(
study.yaml:13:56: error: "product" in the equation of "delivery" in theory "additive" lists "skill" twice, first in line 13; expected it once
   13 |     equations: {delivery: [{product: [skill, planning, skill]}]}
      |                                                        ^
)FAULT");
}

TEST_CASE("a square takes one name", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[{square: [planning, skill]}]"}}) == R"FAULT(
study.yaml:13:37: error: "square" in the equation of "delivery" in theory "additive" must be one construct name, found a list
   13 |     equations: {delivery: [{square: [planning, skill]}]}
      |                                     ^
)FAULT");
}

TEST_CASE("a crossed list ends at eight members", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[{crossed: [a, b, c, d, e, f, g, h, i]}]"}}) == R"FAULT(
study.yaml:13:38: error: "crossed" in the equation of "delivery" in theory "additive" has 9 members; expected at most 8, which are 255 terms
   13 |     equations: {delivery: [{crossed: [a, b, c, d, e, f, g, h, i]}]}
      |                                      ^
)FAULT");
}

TEST_CASE("a term is written once", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[planning, skill, planning]"}}) == R"FAULT(
study.yaml:13:45: error: the equation of "delivery" in theory "additive" has the term "planning" twice, first in line 13; expected it once
   13 |     equations: {delivery: [planning, skill, planning]}
      |                                             ^
)FAULT");
}

TEST_CASE("a product in another order is the same term", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[{product: [planning, skill]}, {product: [skill, planning]}]"}}) ==
          R"FAULT(
study.yaml:13:59: error: the equation of "delivery" in theory "additive" has the term "skill x planning" twice, first in line 13; expected it once
   13 | ...elivery: [{product: [planning, skill]}, {product: [skill, planning]}]}
      |                                             ^
)FAULT");
}

TEST_CASE("a crossed list is written once", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[{crossed: [planning, skill]}, {crossed: [skill, planning]}]"}}) ==
          R"FAULT(
study.yaml:13:59: error: the equation of "delivery" in theory "additive" has the term "crossed(skill, planning)" twice, first in line 13; expected it once
   13 | ...elivery: [{crossed: [planning, skill]}, {crossed: [skill, planning]}]}
      |                                             ^
)FAULT");
}

TEST_CASE("a geometric mean needs the response metric", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[{geometric_mean: [planning, skill]}]"}}) == R"FAULT(
study.yaml:13:29: error: theory "additive" has "geometric_mean(planning, skill)", which needs "metric: response", found "metric: standard"
   13 |     equations: {delivery: [{geometric_mean: [planning, skill]}]}
      |                             ^
)FAULT");
}

TEST_CASE("a category stands only in sums and products", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[{minimum: [planning, sector]}, {square: sector}]"}}) == R"FAULT(
study.yaml:13:49: error: theory "additive" has the category "sector" in minimum; expected a category to stand alone, in product or in crossed
   13 | ...uations: {delivery: [{minimum: [planning, sector]}, {square: sector}]}
      |                                              ^
study.yaml:13:68: error: theory "additive" has the category "sector" in square; expected a category to stand alone, in product or in crossed
   13 | ...uations: {delivery: [{minimum: [planning, sector]}, {square: sector}]}
      |                                                                 ^
)FAULT");
}

TEST_CASE("a category is no outcome", "[study]") {
    CHECK(faults_after({{"      skill: [planning]", "      sector: [planning]"}}) == R"FAULT(
study.yaml:16:7: error: theory "chain" explains the category "sector"; expected an outcome with indicators
   16 |       sector: [planning]
      |       ^
)FAULT");
}

TEST_CASE("a theory needs an equation for the target", "[study]") {
    CHECK(faults_after({{"{delivery: [planning, skill]}", "{skill: [planning]}"}}) == R"FAULT(
study.yaml:12:11: error: theory "additive" has no equation for the target "delivery"; expected one
   12 |   - name: additive
      |           ^
)FAULT");
}

TEST_CASE("an outcome does not explain itself", "[study]") {
    CHECK(faults_after({{"      skill: [planning]", "      skill: [skill]"}}) == R"FAULT(
study.yaml:16:15: error: theory "chain" explains "skill" by itself; expected other constructs
   16 |       skill: [skill]
      |               ^
)FAULT");
}

TEST_CASE("the target explains nothing", "[study]") {
    CHECK(faults_after({{"      skill: [planning]", "      skill: [delivery]"}}) == R"FAULT(
study.yaml:16:15: error: theory "chain" explains "skill" by the target "delivery"; expected the target as an outcome only
   16 |       skill: [delivery]
      |               ^
)FAULT");
}

TEST_CASE("an outcome has one equation", "[study]") {
    CHECK(faults_after({{"      skill: [planning]", "      skill: [planning]\n      skill: [planning]"}}) == R"FAULT(
study.yaml:17:7: error: the key "skill" stands twice, first in line 16; expected it once
   17 |       skill: [planning]
      |       ^
)FAULT");
}

TEST_CASE("a cycle is named", "[study]") {
    CHECK(faults_after({{"      skill: [planning]", "      skill: [planning]\n      planning: [{square: skill}]"}}) ==
          R"FAULT(
study.yaml:16:7: error: theory "chain" explains "skill" in a circle, skill -> planning -> skill; expected no cycles
   16 |       skill: [planning]
      |       ^
)FAULT");
}

TEST_CASE("a long cycle is named in the direction of effects", "[study]") {
    CHECK(faults_after({{"  skill: {indicators: [skl1, skl2]}",
                         "  skill: {indicators: [skl1, skl2]}\n  supply: {indicators: [sup1]}"},
                        {"      skill: [planning]",
                         "      skill: [planning]\n      planning: [supply]\n      supply: [skill]"}}) == R"FAULT(
study.yaml:17:7: error: theory "chain" explains "skill" in a circle, skill -> supply -> planning -> skill; expected no cycles
   17 |       skill: [planning]
      |       ^
)FAULT");
}

TEST_CASE("a control is no term of the target's equation", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[planning, sector]"}}) == R"FAULT(
study.yaml:13:38: error: theory "additive" has the control "sector" as a term of the target's equation, where every control stands already; expected it left out
   13 |     equations: {delivery: [planning, sector]}
      |                                      ^
)FAULT");
}

TEST_CASE("controls alone are no theory", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "[{crossed: [sector]}]"}}) == R"FAULT(
study.yaml:13:17: error: theory "additive" explains the target "delivery" by controls alone; expected a term of its own
   13 |     equations: {delivery: [{crossed: [sector]}]}
      |                 ^
)FAULT");
}

TEST_CASE("a theory never measures the target", "[study]") {
    CHECK(faults_after({{"      delivery: [skill]",
                         "      delivery: [skill]\n    constructs:\n      delivery: {indicators: [dlv1]}"}}) == R"FAULT(
study.yaml:19:7: error: theory "chain" measures the target "delivery" its own way; expected one measurement of the target for all theories
   19 |       delivery: {indicators: [dlv1]}
      |       ^
)FAULT");
}

TEST_CASE("faults of a theory's own construct name the theory", "[study]") {
    CHECK(faults_after({{"      delivery: [skill]",
                         "      delivery: [skill]\n    constructs:\n      skill: {indicator: [dlv1]}"}}) == R"FAULT(
study.yaml:19:15: error: construct "skill" of theory "chain" has no key "indicator"; expected indicators, reversed, range, weights or category
   19 |       skill: {indicator: [dlv1]}
      |               ^
did you mean "indicators"?
)FAULT");
}

TEST_CASE("a category of a theory's own is a category", "[study]") {
    CHECK(faults_after({{"      delivery: [skill]",
                         "      delivery: [skill]\n    constructs:\n      planning: {category: plan}"},
                        {"skill: [planning]", "skill: [{maximum: [planning, skill]}]"}}) == R"FAULT(
study.yaml:16:26: error: theory "chain" has the category "planning" in maximum; expected a category to stand alone, in product or in crossed
   16 |       skill: [{maximum: [planning, skill]}]
      |                          ^
study.yaml:16:36: error: theory "chain" explains "skill" by itself; expected other constructs
   16 |       skill: [{maximum: [planning, skill]}]
      |                                    ^
)FAULT");
}
