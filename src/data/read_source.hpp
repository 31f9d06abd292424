// The reader behind read_delimited(), with the number of threads in the caller's hand.
#pragma once

#include "data/byte_source.hpp"

#include "rivalfold/data/read_delimited.hpp"

namespace rivalfold {

/// As read_delimited(); the result and the faults are the same for any number of threads (0: one per core, at most 8).
Table read_source(const ByteSource& source, const std::string& file, const ReadRules& rules,
                  const ChooseColumns& choose, unsigned n_threads = 0);

}  // namespace rivalfold
