// What the terminal allows: colour, width, a progress line. Results go to standard output, all else to standard error.
#pragma once

#include "rivalfold/report/writers.hpp"

#include <chrono>
#include <cstdio>
#include <string_view>

namespace rivalfold {

/// Colour only on a terminal without NO_COLOR (no-color.org) and TERM other than dumb; width of the terminal within 60
/// .. 100, else 80.
TerminalStyle style_of(std::FILE* stream);

void print(std::FILE* stream, std::string_view text);

/// One line on standard error that is redrawn in place; appears only on a terminal and only after a second; erased at
/// the end.
class ProgressLine {
public:
    ProgressLine();
    ~ProgressLine();
    ProgressLine(const ProgressLine&) = delete;
    ProgressLine& operator=(const ProgressLine&) = delete;
    void show(double share);

private:
    std::chrono::steady_clock::time_point begun_;
    bool on_terminal_;
    bool shown_ = false;
};

}  // namespace rivalfold
