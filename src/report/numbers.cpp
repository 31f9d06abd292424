#include "report/numbers.hpp"

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

std::string plain(std::string_view text) {
    std::string out;
    for (std::size_t i = 0; i < text.size(); ++i) {
        const auto byte = static_cast<unsigned char>(text[i]);
        // C1 controls, which some terminals obey, are U+0080 .. U+009F: bytes C2 80 .. C2 9F.
        const bool c1 = byte == 0xC2 && i + 1 < text.size() && static_cast<unsigned char>(text[i + 1]) < 0xA0;
        if (byte < 0x20 || byte == 0x7F)
            out += fmt::format("\\x{:02x}", byte);
        else if (c1)
            out += fmt::format("\\x{:02x}", static_cast<unsigned char>(text[++i]));
        else
            out += text[i];
    }
    return out;
}

std::string markdown_cell(std::string_view text) {
    std::string out;
    for (const char c : plain(text)) {
        if (std::string_view("\\|`*_[]<>#").find(c) != std::string_view::npos) out += '\\';
        out += c;
    }
    return out;
}

}  // namespace rivalfold
