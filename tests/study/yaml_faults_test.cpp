// Text that is YAML but no study file, and text that is not YAML: what is said of it, word for word.
#include "study/changed_study.hpp"

using namespace rivalfold;
using namespace rivalfold::test;

TEST_CASE("a key that stands twice names the first line", "[study]") {
    CHECK(faults_after({{"  folds: 5", "  folds: 5\n  seed: 1\n  folds: 6"}}) == R"FAULT(
study.yaml:21:3: error: the key "folds" stands twice, first in line 19; expected it once
   21 |   folds: 6
      |   ^
)FAULT");
}

TEST_CASE("an anchor is faulted", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "&a [planning, skill]"}}) == R"FAULT(
study.yaml:13:27: error: "&a" is an anchor, which a study file may not hold; expected the plain value
   13 |     equations: {delivery: &a [planning, skill]}
      |                           ^
)FAULT");
}

TEST_CASE("an alias is faulted", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "&a [planning, skill]"},
                        {"      delivery: [skill]", "      delivery: *a"}}) == R"FAULT(
study.yaml:13:27: error: "&a" is an anchor, which a study file may not hold; expected the plain value
   13 |     equations: {delivery: &a [planning, skill]}
      |                           ^
study.yaml:17:17: error: "*a" is an alias, which a study file may not hold; expected the value itself
   17 |       delivery: *a
      |                 ^
text that begins with * must stand in quotes: "*a"
)FAULT");
}

TEST_CASE("an alias without an anchor is probably a glob", "[study]") {
    CHECK(faults_after({{"[skl1, skl2]", "[*skl, skl2]"}}) == R"FAULT(
study.yaml:6:24: error: "*skl" is an alias, which a study file may not hold; expected the value itself
    6 |   skill: {indicators: [*skl, skl2]}
      |                        ^
text that begins with * must stand in quotes: "*skl"
)FAULT");
}

TEST_CASE("a cyclic alias is faulted", "[study]") {
    CHECK(faults_after({{"[planning, skill]", "&a [*a]"}}) == R"FAULT(
study.yaml:13:27: error: "&a" is an anchor, which a study file may not hold; expected the plain value
   13 |     equations: {delivery: &a [*a]}
      |                           ^
study.yaml:13:31: error: "*a" is an alias, which a study file may not hold; expected the value itself
   13 |     equations: {delivery: &a [*a]}
      |                               ^
text that begins with * must stand in quotes: "*a"
)FAULT");
}

TEST_CASE("a tag is faulted", "[study]") {
    CHECK(faults_after({{"study: Refits", "study: !!str Refits"}}) == R"FAULT(
study.yaml:1:8: error: "!!str" is a tag, which a study file may not hold; expected the plain value
    1 | study: !!str Refits
      |        ^
)FAULT");
}

TEST_CASE("a short tag is faulted", "[study]") {
    CHECK(faults_after({{"study: Refits", "study: ! Refits"}}) == R"FAULT(
study.yaml:1:8: error: "!" is a tag, which a study file may not hold; expected the plain value
    1 | study: ! Refits
      |        ^
)FAULT");
}

TEST_CASE("a tag and an anchor are faulted once", "[study]") {
    CHECK(faults_after({{"study: Refits", "study: !t &a Refits"}}) == R"FAULT(
study.yaml:1:8: error: "!t" is a tag, which a study file may not hold; expected the plain value
    1 | study: !t &a Refits
      |        ^
)FAULT");
}

TEST_CASE("a merge key is faulted", "[study]") {
    CHECK(faults_after({{"  folds: 5", "  <<: {folds: 5}"}}) == R"FAULT(
study.yaml:19:3: error: "<<" is a merge key, which a study file may not hold; expected the keys themselves
   19 |   <<: {folds: 5}
      |   ^
)FAULT");
}

TEST_CASE("a key must be text", "[study]") {
    CHECK(faults_after({{"  folds: 5", "  folds: 5\n  [a]: 6\n  : 7"}}) == R"FAULT(
study.yaml:20:3: error: a list or a group of keys stands where a key was expected; expected a name before the colon
   20 |   [a]: 6
      |   ^
study.yaml:21:3: error: a key is missing here; expected a name before the colon
   21 |   : 7
      |   ^
)FAULT");
}

TEST_CASE("a double quote that is never closed is faulted where it opens", "[study]") {
    CHECK(faults_after({{"study: Refits", "study: \"Refits"}}) == R"FAULT(
study.yaml:1:8: error: the text "Refits" has no closing quote; expected " at its end
    1 | study: "Refits
      |        ^
)FAULT");
}

TEST_CASE("a single quote that is never closed is faulted where it opens", "[study]") {
    CHECK(faults_after({{"  folds: 5", "  folds: '5"}}) == R"FAULT(
study.yaml:19:10: error: the text "5" has no closing quote; expected ' at its end
   19 |   folds: '5
      |          ^
)FAULT");
}

TEST_CASE("an open quote in brackets", "[study]") {
    CHECK(faults_after({{"[skl1, skl2]", "[skl1, \"skl2]"}}) == R"FAULT(
study.yaml:6:30: error: the text "skl2]}" has no closing quote; expected " at its end
    6 |   skill: {indicators: [skl1, "skl2]}
      |                              ^
)FAULT");
}

TEST_CASE("a second document is faulted", "[study]") {
    CHECK(faults_after({{"trial:\n", "---\ntrial:\n"}}) == R"FAULT(
study.yaml:18:1: error: a second document begins here; a study file holds one
   18 | ---
      | ^
)FAULT");
}

TEST_CASE("text after the end of the document is faulted", "[study]") {
    CHECK(faults_after({{"trial:\n  folds: 5", "...\ntrial:\n  folds: 5"}}) == R"FAULT(
study.yaml:19:1: error: "trial:" stands after the end of the study; expected nothing more
   19 | trial:
      | ^
check the indentation and the brackets before it
)FAULT");
}

TEST_CASE("a stray bracket is faulted", "[study]") {
    CHECK(faults_after({{"trial:\n", "}\ntrial:\n"}}) == R"FAULT(
study.yaml:18:1: error: a bracket closes here that was never opened
   18 | }
      | ^
)FAULT");
}

TEST_CASE("a bracket that is never closed is faulted where it opens", "[study]") {
    CHECK(faults_after({{"[planning, skill]}", "[planning, skill"}}) == R"FAULT(
study.yaml:13:27: error: the bracket "[" is not closed by line 14; expected "]" or a comma
   13 |     equations: {delivery: [planning, skill
      |                           ^
)FAULT");
}

TEST_CASE("a brace that is never closed is faulted where it opens", "[study]") {
    CHECK(faults_after({{"  folds: 5\n", "  {folds: 5"}}) == R"FAULT(
study.yaml:19:3: error: the bracket "{" is not closed by line 19; expected "}" or a comma
   19 |   {folds: 5
      |   ^
)FAULT");
}

TEST_CASE("a tab that indents is faulted", "[study]") {
    CHECK(faults_after({{"  folds: 5", "\tfolds: 5"}}) == R"FAULT(
study.yaml:19:1: error: a tab indents this line; expected spaces
   19 |     folds: 5
      | ^
)FAULT");
}

TEST_CASE("wrong indentation is faulted", "[study]") {
    CHECK(faults_after({{"  file: refits.csv", "  file: refits.csv\n   rows: drop"}}) == R"FAULT(
study.yaml:4:4: error: the key "rows" does not fit the lines above it; expected the same indentation as its neighbours, and a colon and a space after each key
    4 |    rows: drop
      |    ^
)FAULT");
}

TEST_CASE("a line without a colon", "[study]") {
    CHECK(faults_after({{"target: delivery", "target delivery"}}) == R"FAULT(
study.yaml:10:1: error: the key "controls" does not fit the lines above it; expected the same indentation as its neighbours, and a colon and a space after each key
   10 | controls: [sector]
      | ^
)FAULT");
}

TEST_CASE("a line without a value among keys", "[study]") {
    CHECK(faults_after({{"trial:\n  folds: 5", "trial:\n  folds: 5\n  seed"}}) == R"FAULT(
study.yaml:20:3: error: "seed" of "trial" must be a whole number from 0 to 18446744073709551615, found nothing
   20 |   seed
      |   ^
)FAULT");
}

TEST_CASE("two colons in a line", "[study]") {
    CHECK(faults_after({{"study: Refits", "study: Refits: ships"}}) == R"FAULT(
study.yaml:1:14: error: a colon followed by a space makes a key here, where none can stand; expected text that holds one to stand in quotes
    1 | study: Refits: ships
      |              ^
)FAULT");
}

TEST_CASE("a reserved character needs quotes", "[study]") {
    CHECK(faults_after({{"study: Refits", "study: @Refits"}}) == R"FAULT(
study.yaml:1:8: error: "@Refits" begins with a character that can begin no value
    1 | study: @Refits
      |        ^
text that begins with @ must stand in quotes
)FAULT");
}

TEST_CASE("a leading percent sign needs quotes", "[study]") {
    CHECK(faults_after({{"study: Refits", "study: %Refits"}}) == R"FAULT(
study.yaml:1:8: error: "%Refits" begins with a character that can begin no value
    1 | study: %Refits
      |        ^
text that begins with % must stand in quotes
)FAULT");
}

TEST_CASE("a backslash in double quotes needs a known letter", "[study]") {
    CHECK(faults_after({{"study: Refits", "study: \"C:\\qdata\""}}) == R"FAULT(
study.yaml:1:13: error: the backslash here starts no known escape; expected text with a backslash to be in single quotes
    1 | study: "C:\qdata"
      |             ^
)FAULT");
}

TEST_CASE("a list begins on a line of its own", "[study]") {
    CHECK(faults_after({{"target: delivery", "target: - delivery"}}) == R"FAULT(
study.yaml:9:9: error: a list item cannot stand here; expected the dash on a line of its own
    9 | target: - delivery
      |         ^
)FAULT");
}

TEST_CASE("an item must stand under the item before it", "[study]") {
    CHECK(faults_after({{"  - name: chain", " - name: chain"}}) == R"FAULT(
study.yaml:14:2: error: this line does not fit the keys above it; expected the same indentation, and a colon and a space after each key
   14 |  - name: chain
      |  ^
)FAULT");
}

TEST_CASE("a YAML version to come is no study", "[study]") {
    CHECK(faults_after({{"study: Refits", "%YAML 3.0\n---\nstudy: Refits"}}) == R"FAULT(
study.yaml:1:1: error: this is not YAML: YAML major version too large
    1 | %YAML 3.0
      | ^
)FAULT");
}
