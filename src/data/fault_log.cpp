#include "data/fault_log.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <utility>

namespace rivalfold {

void FaultLog::append(const FaultLog& later) {
    for (const Fault& fault : later.kept_)
        if (!full()) kept_.push_back(fault);
    count_ += later.count_;
}

void FaultLog::roll_back(std::size_t count) {
    count_ = count;
    if (kept_.size() > count) kept_.resize(count);
}

void FaultLog::throw_if_any(std::vector<Fault> others) const {
    std::vector<Fault> faults = std::move(others);
    // No more than are shown, so that the count of the rest is said once.
    const std::size_t room = faults.size() < kMost ? kMost - faults.size() : 0;
    const std::size_t n_shown = std::min(room, kept_.size());
    faults.insert(faults.end(), kept_.begin(), kept_.begin() + static_cast<std::ptrdiff_t>(n_shown));
    if (faults.empty()) return;
    if (const std::size_t rest = count_ - n_shown; rest > 0 && n_shown > 0)
        faults.back().hint = fmt::format("and {} more {}", rest, rest == 1 ? "error" : "errors");
    throw FaultError(std::move(faults));
}

}  // namespace rivalfold
