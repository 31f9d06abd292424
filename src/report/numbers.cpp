#include "report/numbers.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>

#include <charconv>
#include <cmath>

namespace rivalfold {

std::string exact(double value) {
    if (!std::isfinite(value)) return {};
    char text[32];
    const auto end = std::to_chars(text, text + sizeof text, value);
    return {text, end.ptr};
}

std::string fixed(double value, int decimals) {
    if (!std::isfinite(value)) return "-";
    std::string text = fmt::format("{:.{}f}", value, decimals);
    if (text.front() == '-' && text.find_first_not_of("-0.") == std::string::npos) text.erase(0, 1);
    return text;
}

std::string p_text(double p) {
    if (std::isnan(p)) return "-";
    return p < 0.001 ? "<.001" : fixed(p, 3).substr(p < 1 && fixed(p, 3).front() == '0' ? 1 : 0);
}

std::string csv_field(std::string_view text) {
    std::string out;
    const bool formula = !text.empty() && std::string_view("=+-@\t\r").find(text.front()) != std::string_view::npos;
    if (formula) out += '\'';
    out += text;
    if (out.find_first_of(",\"\n\r") == std::string::npos) return out;
    std::string quoted = "\"";
    for (const char c : out) {
        if (c == '"') quoted += '"';
        quoted += c;
    }
    return quoted + '"';
}

std::string plain(std::string_view text) { return escape_controls(text); }

std::string markdown_cell(std::string_view text) {
    std::string out;
    for (const char c : plain(text)) {
        if (std::string_view("\\|`*_[]<>#").find(c) != std::string_view::npos) out += '\\';
        out += c;
    }
    return out;
}

}  // namespace rivalfold
