#include "rivalfold/contest.hpp"
#include "rivalfold/data/sha256.hpp"
#include "rivalfold/report/results_folder.hpp"
#include "rivalfold/verdict/advice.hpp"

#include <fmt/chrono.h>
#include <fmt/format.h>

#include <chrono>
#include <ctime>
#include <thread>

namespace rivalfold {
namespace {

RunRecord open_record(const Study& study, const RunSettings& settings) {
    RunRecord record;
    record.version = RIVALFOLD_VERSION;
    record.started = fmt::format("{:%Y-%m-%dT%H:%M:%SZ}", fmt::gmtime(std::time(nullptr)));
    record.threads = settings.threads > 0 ? settings.threads : std::max(1U, std::thread::hardware_concurrency());
    record.study_sha256 = sha256_hex(study.source);
    return record;
}

std::vector<Reliability> measure_reliabilities(const Study& study, const Survey& survey, const Sample& sample) {
    std::vector<Reliability> out;
    for (const Measurement& measurement : survey.measurements) {
        if (!measurement.used || measurement.category >= 0) continue;
        const bool shared = measurement.theory == Measurement::kEveryTheory;
        out.push_back({measurement.construct, shared ? "" : study.theories[measurement.theory].name.text,
                       static_cast<int>(measurement.variables.size()), cronbach_alpha(sample, measurement.variables)});
    }
    return out;
}

/// Every stage in order, its locals the stages' results.
Outcome run_stages(const Study& study, const RunSettings& settings, bool with_contest) {
    const auto begun = std::chrono::steady_clock::now();
    Outcome outcome;
    outcome.run = open_record(study, settings);
    outcome.study = study;
    outcome.survey = read_survey(study);
    outcome.sample = std::make_shared<Sample>(build_sample(outcome.survey));
    outcome.survey.values.resize(0, 0);
    outcome.plan = plan_folds(study, outcome.survey);
    outcome.reliabilities = measure_reliabilities(study, outcome.survey, *outcome.sample);
    outcome.trial = with_contest ? run_trial(study, outcome.survey, *outcome.sample, outcome.plan, outcome.run.threads, settings.progress)
                                 : fit_all_rows(study, outcome.survey, *outcome.sample, outcome.run.threads);
    outcome.advice = advise_on_study(study, outcome.survey, *outcome.sample, outcome.plan, outcome.trial);
    if (with_contest) {
        outcome.verdict = reach_verdict(study, outcome.survey, outcome.trial);
        const std::vector<std::string> more = advise_on_outcome(study, outcome.survey, outcome.trial, outcome.verdict);
        outcome.advice.insert(outcome.advice.end(), more.begin(), more.end());
    }
    outcome.run.seconds = std::chrono::duration<double>(std::chrono::steady_clock::now() - begun).count();
    return outcome;
}

}  // namespace

Outcome run_contest(const Study& study, const RunSettings& settings) { return run_stages(study, settings, true); }

Outcome check_contest(const Study& study, const RunSettings& settings) { return run_stages(study, settings, false); }

void save_contest(const Outcome& outcome, const std::string& folder) { save_results(outcome, folder); }

}  // namespace rivalfold
