// A valid study and its faulty variants: one change, one whole message. The study is invented.
#pragma once

#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "rivalfold/study/read_study.hpp"
#include "support/catch.hpp"

namespace rivalfold::test {

inline const std::string kStudy = R"(study: Refits
data:
  file: refits.csv
constructs:
  planning: {indicators: [pln1, pln2], range: [1, 7]}
  skill: {indicators: [skl1, skl2]}
  sector: {category: sector}
  delivery: {indicators: [dlv1, dlv2]}
target: delivery
controls: [sector]
theories:
  - name: additive
    equations: {delivery: [planning, skill]}
  - name: chain
    equations:
      skill: [planning]
      delivery: [skill]
trial:
  folds: 5
)";

/// The text with the first `from` of each change replaced by its `to`; a `from` that is not there fails the test.
inline std::string changed(std::string text, const std::vector<std::pair<std::string, std::string>>& changes) {
    for (const auto& [from, to] : changes) {
        const std::size_t at = text.find(from);
        INFO("change of: " << from);
        REQUIRE(at != std::string::npos);
        text.replace(at, from.size(), to);
    }
    return text;
}

/// Everything that reading the text as study.yaml says, after a line break so that tests can show it as a block.
inline std::string faults_in(std::string_view text) {
    try {
        read_study_text(text, "study.yaml");
    } catch (const FaultError& error) {
        return std::string("\n") + error.what() + "\n";
    }
    return "no fault";
}

/// The same for the valid study with changes.
inline std::string faults_after(const std::vector<std::pair<std::string, std::string>>& changes) {
    return faults_in(changed(kStudy, changes));
}

}  // namespace rivalfold::test
