#include "study/fault_list.hpp"

#include <algorithm>
#include <fmt/format.h>
#include <tuple>

namespace rivalfold {
namespace {

constexpr std::size_t kMostFaults = 500;
constexpr std::size_t kMostLineBytes = std::size_t{16} * 1024 * 1024;  // of all faults' source lines together

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
    std::size_t n_bytes = 0;
    for (Fault& fault : faults_) {
        const std::string_view line = source_.line(fault.place.line);
        if (n_bytes + line.size() > kMostLineBytes) continue;
        n_bytes += line.size();
        fault.source_line = line;
    }
    if (full_) faults_.push_back({file_, {}, {}, fmt::format("there are more than {} errors; mend these first", kMostFaults), {}, {}});
    throw FaultError(std::move(faults_));
}

}  // namespace rivalfold
