#include "rivalfold/contest.hpp"
#include "rivalfold/data/sha256.hpp"
#include "rivalfold/report/results_folder.hpp"
#include "rivalfold/verdict/advice.hpp"
#include "rivalfold/verdict/completeness.hpp"
#include "rivalfold/verdict/reversals.hpp"

#include <fmt/chrono.h>
#include <fmt/format.h>

#include <algorithm>
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

/// What holds in a segment but not in the whole sample, under the segment's name.
void add_segment_advice(Outcome& outcome) {
    for (const Outcome& segment : outcome.segments)
        for (const std::string& item : segment.advice)
            if (std::find(outcome.advice.begin(), outcome.advice.end(), item) == outcome.advice.end())
                outcome.advice.push_back(fmt::format("Segment \"{}\": {}", segment.segment_name, item));
}

/// From a survey to its verdict: every stage in order. `outcome` holds study, run and survey; the rest is filled in.
void run_stages(Outcome& outcome, const RunSettings& settings, bool with_contest) {
    const Study& study = outcome.study;
    outcome.sample = std::make_shared<Sample>(build_sample(outcome.survey));
    outcome.survey.values.resize(0, 0);
    outcome.plan = plan_folds(study, outcome.survey);
    outcome.reliabilities = measure_reliabilities(study, outcome.survey, *outcome.sample);
    outcome.trial = with_contest ? run_trial(study, outcome.survey, *outcome.sample, outcome.plan, outcome.run.threads,
                                             settings.progress)
                                 : fit_all_rows(study, outcome.survey, *outcome.sample, outcome.run.threads);
    outcome.advice = advise_on_study(study, outcome.survey, *outcome.sample, outcome.plan, outcome.trial);
    if (!with_contest) return;
    outcome.verdict = reach_verdict(study, outcome.survey, *outcome.sample, outcome.trial);
    if (study.verdict.completeness)
        outcome.completeness = measure_completeness(study, outcome.survey, *outcome.sample, outcome.plan, outcome.trial,
                                                    outcome.run.threads);
    const std::vector<std::string> more =
        advise_on_outcome(study, outcome.survey, outcome.plan, outcome.trial, outcome.verdict);
    outcome.advice.insert(outcome.advice.end(), more.begin(), more.end());
}

/// The same contest within one segment; faults and advice say which.
Outcome run_segment(const Outcome& whole, Survey survey, const std::string& name, const RunSettings& settings,
                    bool with_contest) {
    Outcome segment;
    segment.study = whole.study;
    segment.run = whole.run;
    segment.segment_name = name;
    segment.survey = std::move(survey);
    try {
        run_stages(segment, settings, with_contest);
    } catch (const FaultError& error) {
        std::vector<Fault> faults = error.faults();
        for (Fault& fault : faults) fault.message = fmt::format("in the segment \"{}\": {}", name, fault.message);
        throw FaultError(std::move(faults));
    }
    return segment;
}

Outcome run_study(const Study& study, const RunSettings& settings, bool with_contest) {
    const auto begun = std::chrono::steady_clock::now();
    Outcome outcome;
    outcome.run = open_record(study, settings);
    outcome.study = study;
    outcome.survey = read_survey(study);
    std::vector<Survey> parts;
    for (std::size_t s = 0; s < outcome.survey.segment_names.size(); ++s)
        parts.push_back(survey_of_segment(study, outcome.survey, s));
    run_stages(outcome, settings, with_contest);
    for (std::size_t s = 0; s < parts.size(); ++s)
        outcome.segments.push_back(
            run_segment(outcome, std::move(parts[s]), outcome.survey.segment_names[s], settings, with_contest));
    add_segment_advice(outcome);
    if (with_contest) outcome.reversals = find_reversals(outcome);
    outcome.run.seconds = std::chrono::duration<double>(std::chrono::steady_clock::now() - begun).count();
    return outcome;
}

}  // namespace

Outcome run_contest(const Study& study, const RunSettings& settings) { return run_study(study, settings, true); }

Outcome check_contest(const Study& study, const RunSettings& settings) { return run_study(study, settings, false); }

void save_contest(const Outcome& outcome, const std::string& folder) { save_results(outcome, folder); }

}  // namespace rivalfold
