// Contests from texts in memory: a study, a delimited table, and what the rooms make of them. Invented data come from
// the program's own generator, so that they are the same everywhere.
#pragma once

#include "rivalfold/data/read_delimited.hpp"
#include "rivalfold/data/survey.hpp"
#include "rivalfold/folds/fold_plan.hpp"
#include "rivalfold/folds/random.hpp"
#include "rivalfold/study/read_study.hpp"
#include "rivalfold/theory/sample.hpp"

#include <fmt/format.h>

#include <Eigen/Core>

#include <algorithm>
#include <cmath>
#include <fstream>
#include <memory>
#include <sstream>
#include <stdexcept>
#include <string>
#include <vector>

namespace rivalfold {

struct SmallContest {
    Study study;
    Survey survey;
    std::unique_ptr<Sample> sample;  ///< a trial's contestants refer to it
    FoldPlan plan;
};

inline Survey survey_from(const Study& study, const std::string& data) {
    const ReadRules rules{study.data.delimiter, study.data.missing_codes};
    const Table table =
        read_delimited_text(data, study.data.file.text, rules,
                            [&](const std::vector<std::string>& header) { return survey_columns(study, header); });
    return build_survey(study, table);
}

/// Everything before the contest itself.
inline SmallContest prepare(const std::string& study, const std::string& data, const std::string& path = "study.yaml") {
    SmallContest contest;
    contest.study = read_study_text(study, path);
    contest.survey = survey_from(contest.study, data);
    contest.sample = std::make_unique<Sample>(build_sample(contest.survey));
    contest.plan = plan_folds(contest.study, contest.survey);
    return contest;
}

/// A table of numbers with a name per column, changed cell by cell and written as delimited text.
struct Answers {
    std::vector<std::string> names;
    Eigen::MatrixXd values;  ///< NaN = no answer

    Eigen::Index at(const std::string& name) const {
        const auto found = std::find(names.begin(), names.end(), name);
        if (found == names.end()) throw std::logic_error("no column " + name);
        return found - names.begin();
    }
    auto column(const std::string& name) { return values.col(at(name)); }
    std::string csv() const {
        std::string text = fmt::format("{}\n", fmt::join(names, ","));
        for (Eigen::Index i = 0; i < values.rows(); ++i)
            for (Eigen::Index j = 0; j < values.cols(); ++j)
                text += fmt::format("{}{}", std::isnan(values(i, j)) ? "" : fmt::format("{}", values(i, j)),
                                    j + 1 == values.cols() ? '\n' : ',');
        return text;
    }
};

/// Roughly normal with standard deviation 1: a sum of twelve uniforms, free of library functions that differ between
/// machines.
inline double bell(RandomStream& stream) {
    double sum = -6;
    for (int k = 0; k < 12; ++k) sum += stream.unit();
    return sum;
}

/// Invented seven-point answers: planning, skill and supply (pln1-3, skl1-3, sup1-2) and delivery (dlv1-3), which
/// depends on them and on planning x skill.
inline Answers invented_answers(Eigen::Index n, std::uint64_t seed = 7) {
    RandomStream stream(seed, Purpose::simulation, 0);
    Answers out;
    out.names = {"pln1", "pln2", "pln3", "skl1", "skl2", "skl3", "sup1", "sup2", "dlv1", "dlv2", "dlv3"};
    out.values.resize(n, 11);
    const auto answer = [&](double latent) {
        return std::clamp(std::round(4 + 1.2 * (0.8 * latent + 0.6 * bell(stream))), 1.0, 7.0);
    };
    for (Eigen::Index i = 0; i < n; ++i) {
        const double common = bell(stream);
        const double planning = 0.6 * common + 0.8 * bell(stream);
        const double skill = 0.6 * common + 0.8 * bell(stream);
        const double supply = 0.4 * skill + 0.9 * bell(stream);
        const double delivery =
            0.4 * planning + 0.3 * skill + 0.3 * supply + 0.2 * planning * skill + 0.6 * bell(stream);
        const double latent[] = {planning, planning, planning, skill,    skill,   skill,
                                 supply,   supply,   delivery, delivery, delivery};
        for (Eigen::Index j = 0; j < 11; ++j) out.values(i, j) = answer(latent[j]);
    }
    return out;
}

/// Cells of a comma-separated file of this folder without quoted cells: one vector of texts per line, the header first.
inline std::vector<std::vector<std::string>> frozen_cells(const std::string& path_below_tests) {
    std::ifstream in(std::string(RIVALFOLD_TESTS) + "/" + path_below_tests);
    if (!in) throw std::runtime_error("cannot open tests/" + path_below_tests);
    std::vector<std::vector<std::string>> lines;
    for (std::string line; std::getline(in, line);) {
        lines.emplace_back();
        std::istringstream cells(line);
        for (std::string cell; std::getline(cells, cell, ',');) lines.back().push_back(cell);
    }
    return lines;
}

inline std::string file_text(const std::string& path_below_tests) {
    std::ifstream in(std::string(RIVALFOLD_TESTS) + "/" + path_below_tests, std::ios::binary);
    if (!in) throw std::runtime_error("cannot open tests/" + path_below_tests);
    std::ostringstream text;
    text << in.rdbuf();
    return text.str();
}

/// The message of the FaultError that `act` throws; "nothing thrown" if it does not.
template <class Act>
std::string fault_of(const Act& act) {
    try {
        act();
    } catch (const FaultError& error) {
        return error.what();
    }
    return "nothing thrown";
}

}  // namespace rivalfold
