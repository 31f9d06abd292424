// The whole job as one call: a study in, everything that was found out. The program is a thin layer over this.
#pragma once

#include "rivalfold/verdict/outcome.hpp"

#include <functional>
#include <string>

namespace rivalfold {

struct RunSettings {
    unsigned threads = 0;                        ///< 0: one per core; changes nothing but the time
    std::function<void(double share)> progress;  ///< told now and then which share of the splits is done
};

/// Reads the study's data, plans the folds, runs the contest and reaches the verdict. Throws FaultError for anything
/// that is wrong with the study or the data. Writes nothing.
Outcome run_contest(const Study& study, const RunSettings& settings = {});

/// The same without the contest: rows, folds, fits to all rows, and advice; Outcome::verdict stays empty.
Outcome check_contest(const Study& study, const RunSettings& settings = {});

/// Writes the results folder beside its final place and renames it into place: `folder` holds either what it held
/// before or the whole new result. Throws std::runtime_error in words when the place cannot be written or holds
/// something else than results.
void save_contest(const Outcome& outcome, const std::string& folder);

}  // namespace rivalfold
