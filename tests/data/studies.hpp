// Short studies over data in memory: two theories, skill explains delivery.
#pragma once

#include "rivalfold/data/survey.hpp"
#include "rivalfold/study/read_study.hpp"

#include "reading.hpp"

#include <string>

namespace rivalfold {

/// A study from its constructs and settings. A `data:` line of them keeps its other keys; `own` is appended to the
/// second theory.
inline Study study_of(std::string settings, const std::string& own = {}, const std::string& path = "study.yaml") {
    std::string data = "data: {file: refits.csv}\n";
    if (const std::size_t at = settings.find("data: {"); at != std::string::npos) {
        const std::size_t end = settings.find('\n', at);
        data = "data: {file: refits.csv, " + settings.substr(at + 7, end - at - 7) + "\n";
        settings.erase(at, end - at + 1);
    }
    return read_study_text("study: refits\n" + data + "target: delivery\n" + settings + R"(theories:
  - name: one
    equations: {delivery: [skill]}
  - name: two
    equations: {delivery: [{square: skill}]}
)" + own,
                           path);
}

inline Survey survey_of(const Study& study, const std::string& data) {
    const ReadRules rules{study.data.delimiter, study.data.missing_codes};
    const Table table = read_delimited_text(data, "refits.csv", rules, [&](const std::vector<std::string>& header) {
        return survey_columns(study, header);
    });
    return build_survey(study, table);
}

inline Survey survey_of(const std::string& settings, const std::string& data, const std::string& own = {}) {
    return survey_of(study_of(settings, own), data);
}

}  // namespace rivalfold
