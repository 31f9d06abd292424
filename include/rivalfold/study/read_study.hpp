// Study file in, `Study` out: the only code that knows YAML.
#pragma once

#include "rivalfold/study/study.hpp"

#include <string>
#include <string_view>

namespace rivalfold {

/// Reads a study from its text. `path` is the name used in faults and the folder that data paths are relative to.
/// Throws FaultError with all faults found: YAML syntax, unknown, duplicate, missing or mistyped keys, and the
/// rules across keys (names defined once, terms that exist, no cycles, a target equation in every theory ...).
Study read_study_text(std::string_view text, const std::string& path);

/// The same from a file. A missing or unreadable file, a folder, or one above 4 MiB is a FaultError too.
Study read_study(const std::string& path);

}  // namespace rivalfold
