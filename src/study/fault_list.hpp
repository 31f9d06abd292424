// Collects what is wrong with one study file while it is read, so that all of it is said at once.
// Does not judge; it only locates, sorts and bounds.
#pragma once

#include "rivalfold/study/fault.hpp"
#include "study/source_text.hpp"

#include <string>
#include <vector>

namespace rivalfold {

class FaultList {
public:
    FaultList(const SourceText& source, std::string file) : source_(source), file_(std::move(file)) {}

    /// Notes a fault. Beyond 500 only their being there is noted: a hostile file could hold 200 000.
    void add(Place place, std::string message, std::string hint = {});
    bool empty() const noexcept { return faults_.empty(); }
    bool full() const noexcept { return full_; }
    /// Throws FaultError with all faults in the order of their places; returns when there are none.
    void throw_if_any();

private:
    const SourceText& source_;
    std::string file_;
    std::vector<Fault> faults_;
    bool full_ = false;
};

}  // namespace rivalfold
