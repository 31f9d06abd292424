// The sections of a study file, each read into its plain struct. Rules within one section are checked here;
// rules across sections are check_study's.
#pragma once

#include "rivalfold/study/study.hpp"
#include "study/fault_list.hpp"
#include "study/yaml_tree.hpp"

#include <string>
#include <vector>

namespace rivalfold {

/// A path written in a study file, resolved against the folder of the study file.
std::string resolve(const std::string& study_path, const std::string& written);

/// Each takes the section's node and the place of its key.
DataSource read_data(const Node& node, Place place, const std::string& study_path, FaultList& faults);
TrialPlan read_trial(const Node& node, Place place, const std::string& study_path, FaultList& faults);
VerdictRules read_verdict(const Node& node, Place place, FaultList& faults);

/// Constructs by name, of the study (`owner` empty) or of a theory (`owner` as messages say it).
std::vector<Construct> read_constructs(const Node& node, const std::string& owner, FaultList& faults);

std::vector<Theory> read_theories(const Node& node, FaultList& faults);

/// The terms of one equation, `crossed` expanded and its repetitions merged; `owner` is how messages call the equation.
/// `budget` counts down the terms that the study may still hold.
std::vector<Term> read_terms(const Node& node, const std::string& owner, std::size_t& budget, FaultList& faults);

/// True if some column name fits both names, where `*` stands for any characters.
bool globs_meet(std::string_view a, std::string_view b);

/// The members in an order of their own with the kind: equal for two terms that are the same.
std::string term_key(const Term& term);

/// The rules across sections: names that exist, targets, outcomes, controls, categories, cycles.
void check_study(Study& study, FaultList& faults);

}  // namespace rivalfold
