#include "cli/terminal.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cstdlib>
#include <string>

#include <sys/ioctl.h>
#include <unistd.h>

namespace rivalfold {

TerminalStyle style_of(std::FILE* stream) {
    TerminalStyle style;
    const int descriptor = fileno(stream);
    if (isatty(descriptor) == 0) return style;
    const char* no_color = std::getenv("NO_COLOR");
    const char* term = std::getenv("TERM");
    style.colour = !(no_color && *no_color) && !(term && std::string_view(term) == "dumb");
    winsize size{};
    if (ioctl(descriptor, TIOCGWINSZ, &size) == 0 && size.ws_col > 0)
        style.width = std::clamp<int>(size.ws_col, 60, 100);
    return style;
}

void print(std::FILE* stream, std::string_view text) {
    std::fwrite(text.data(), 1, text.size(), stream);
    std::fflush(stream);
}

ProgressLine::ProgressLine() : begun_(std::chrono::steady_clock::now()), on_terminal_(isatty(STDERR_FILENO) != 0) {}

ProgressLine::~ProgressLine() {
    if (shown_) print(stderr, "\r\x1b[K");
}

void ProgressLine::show(double share) {
    if (!on_terminal_ || std::chrono::steady_clock::now() - begun_ < std::chrono::seconds(1)) return;
    shown_ = true;
    print(stderr, fmt::format("\r\x1b[Ksplits done: {:.0f}%", 100 * share));
}

}  // namespace rivalfold
