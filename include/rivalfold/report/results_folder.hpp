// The only code that writes files: a results folder is made beside its place and renamed into it.
#pragma once

#include "rivalfold/verdict/outcome.hpp"

#include <stdexcept>
#include <string>

namespace rivalfold {

/// A place that cannot be written; what() is a sentence for the user.
struct SaveError : std::runtime_error {
    using std::runtime_error::runtime_error;
};

/// Where `run` puts the results of a study file: its name without .yaml or .yml, plus `.results`.
std::string default_results_folder(const std::string& study_path);

/// Throws SaveError if `folder` exists and is neither an empty folder nor a results folder, or its parent cannot be
/// written.
void check_results_folder(const std::string& folder);

/// Writes all result files into a new folder beside `folder`, then swaps the two in one step (renameat2,
/// RENAME_EXCHANGE, where the file system has it). A crash at any moment leaves the old folder or the new one.
/// Left-overs of crashed runs are removed.
void save_results(const Outcome& outcome, const std::string& folder);

}  // namespace rivalfold
