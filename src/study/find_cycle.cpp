#include "study/find_cycle.hpp"

#include <algorithm>

namespace rivalfold {
namespace {

// For each position the number of its causes that cannot be struck out.
std::vector<std::size_t> open_causes(const std::vector<std::vector<std::size_t>>& causes) {
    const std::size_t n = causes.size();
    std::vector<std::vector<std::size_t>> effects(n);
    std::vector<std::size_t> n_open(n), ready;
    for (std::size_t k = 0; k < n; ++k) {
        n_open[k] = causes[k].size();
        if (n_open[k] == 0) ready.push_back(k);
        for (const std::size_t cause : causes[k]) effects[cause].push_back(k);
    }
    while (!ready.empty()) {
        const std::size_t done = ready.back();
        ready.pop_back();
        for (const std::size_t effect : effects[done])
            if (--n_open[effect] == 0) ready.push_back(effect);
    }
    return n_open;
}

}  // namespace

std::vector<std::size_t> find_cycle(const std::vector<std::vector<std::size_t>>& causes) {
    const std::size_t n = causes.size();
    const std::vector<std::size_t> n_open = open_causes(causes);
    const auto left = std::find_if(n_open.begin(), n_open.end(), [](std::size_t open) { return open > 0; });
    if (left == n_open.end()) return {};
    // Whatever is left has a cause that is left: going from cause to cause must come round.
    std::vector<std::size_t> path;
    std::vector<std::size_t> visited_at(n, n);
    std::size_t here = static_cast<std::size_t>(left - n_open.begin());
    while (visited_at[here] == n) {
        visited_at[here] = path.size();
        path.push_back(here);
        here = *std::find_if(causes[here].begin(), causes[here].end(),
                             [&](std::size_t cause) { return n_open[cause] > 0; });
    }
    std::vector<std::size_t> cycle(path.begin() + static_cast<std::ptrdiff_t>(visited_at[here]), path.end());
    std::reverse(cycle.begin(), cycle.end());
    std::rotate(cycle.begin(), std::min_element(cycle.begin(), cycle.end()), cycle.end());
    return cycle;
}

}  // namespace rivalfold
