// Do the causes of some outcome lead back to it? Knows positions only, not what they stand for.
#pragma once

#include <cstddef>
#include <vector>

namespace rivalfold {

/// One cycle of a directed graph, each position a cause of the next and the last of the first, beginning with its
/// smallest position; empty when there is none. causes[k] lists the positions that k has as causes, each once, never k
/// itself. Linear time, no recursion: strikes out what has no causes left (Kahn 1962), then walks through what remains.
std::vector<std::size_t> find_cycle(const std::vector<std::vector<std::size_t>>& causes);

}  // namespace rivalfold
