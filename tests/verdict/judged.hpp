// A contest from texts, run and judged; and the frozen tables of tests/reference that this room is compared with.
#pragma once

#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include "rivalfold/verdict/advice.hpp"
#include "rivalfold/verdict/verdict.hpp"

#include <map>

namespace rivalfold {

struct Judged {
    SmallContest contest;
    Trial trial;
    Verdict verdict;
};

inline Verdict judge(const SmallContest& contest, const Trial& trial) {
    return reach_verdict(contest.study, contest.survey, *contest.sample, trial);
}

inline Judged run_and_judge(const std::string& study, const std::string& data, const std::string& path = "study.yaml") {
    Judged out;
    out.contest = prepare(study, data, path);
    out.trial = run_trial(out.contest.study, out.contest.survey, *out.contest.sample, out.contest.plan, 1);
    out.verdict = judge(out.contest, out.trial);
    return out;
}

/// A study of tests/reference on its own data and splits.
inline Judged run_reference(const std::string& folder, const std::string& study = "study.yaml",
                            const std::string& data = "data.csv") {
    return run_and_judge(file_text(folder + "/" + study), file_text(folder + "/" + data),
                         std::string(RIVALFOLD_TESTS) + "/" + folder + "/" + study);
}

/// The lines of a frozen table as texts by column name.
inline std::vector<std::map<std::string, std::string>> frozen_table(const std::string& path_below_tests) {
    const auto cells = frozen_cells(path_below_tests);
    std::vector<std::map<std::string, std::string>> table;
    for (std::size_t line = 1; line < cells.size(); ++line) {
        table.emplace_back();
        for (std::size_t c = 0; c < cells[line].size(); ++c) table.back()[cells[0].at(c)] = cells[line][c];
    }
    REQUIRE_FALSE(table.empty());
    return table;
}

inline double number(const std::map<std::string, std::string>& line, const std::string& column) {
    return std::stod(line.at(column));
}

}  // namespace rivalfold
