#include "study/fault_list.hpp"

#include <fmt/format.h>
#include <algorithm>
#include <tuple>

namespace rivalfold {
namespace {

constexpr std::size_t kMostFaults = 500;

}  // namespace

void FaultList::add(Place place, std::string message, std::string hint) {
    full_ = faults_.size() >= kMostFaults;
    if (!full_) faults_.push_back({file_, place, {}, std::move(message), std::move(hint), {}});
}

void FaultList::throw_if_any() {
    if (faults_.empty()) return;
    std::stable_sort(faults_.begin(), faults_.end(), [](const Fault& a, const Fault& b) {
        return std::tie(a.place.line, a.place.column) < std::tie(b.place.line, b.place.column);
    });
    for (Fault& fault : faults_) fault.source_line = source_.line(fault.place.line);
    if (full_)
        faults_.push_back(
            {file_, {}, {}, fmt::format("there are more than {} errors; mend these first", kMostFaults), {}, {}});
    throw FaultError(std::move(faults_));
}

}  // namespace rivalfold
