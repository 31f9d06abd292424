// The first faults of a data file and how many there were in all: a file with a million bad cells costs no memory.
// Knows nothing of what is wrong.
#pragma once

#include "rivalfold/study/fault.hpp"

#include <cstddef>
#include <vector>

namespace rivalfold {

class FaultLog {
public:
    static constexpr std::size_t kMost = 20;

    bool empty() const { return count_ == 0; }
    std::size_t count() const { return count_; }
    /// Whether a further fault would only be counted, so that its text need not be made.
    bool full() const { return kept_.size() >= kMost; }
    void count_only() { ++count_; }
    void add(Fault fault) {
        ++count_;
        if (!full()) kept_.push_back(std::move(fault));
    }
    /// Appends the faults of a later part of the file.
    void append(const FaultLog& later);
    /// Forgets what came after the log had `count` faults.
    void roll_back(std::size_t count);
    /// Throws FaultError if there are any; the last one kept carries the count of those that are not.
    /// `others`, which are few, come first.
    void throw_if_any(std::vector<Fault> others = {}) const;

private:
    std::vector<Fault> kept_;
    std::size_t count_ = 0;
};

}  // namespace rivalfold
