#include "data/numbers.hpp"

#include "data/plain_text.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>

namespace rivalfold {
namespace {

/// Whether a number beyond double is one that is too small, not too large.
bool is_tiny(std::string_view text) {
    const std::size_t exponent = text.find_first_of("eE");
    if (exponent != std::string_view::npos) return exponent + 1 < text.size() && text[exponent + 1] == '-';
    const std::size_t first = text.find_first_not_of('-');
    return first != std::string_view::npos && (text[first] == '0' || text[first] == '.');
}

/// std::from_chars over the whole text, with the leading '+' that it does not know.
NumberCell convert(std::string_view text) {
    NumberCell cell{kMissing, Finding::not_a_number,
                    text.find('.') != std::string_view::npos ? Mark::point : Mark::none};
    if (text.starts_with('+') && text.size() > 1 && text[1] != '-') text.remove_prefix(1);
    double value = 0;
    const auto [stop, error] = std::from_chars(text.data(), text.data() + text.size(), value);
    if (stop != text.data() + text.size()) return cell;
    if (error == std::errc::result_out_of_range) {
        if (!is_tiny(text)) {
            cell.finding = Finding::enormous;
            return cell;
        }
        value = 0;
    } else if (error != std::errc()) {
        return cell;
    }
    if (std::isnan(value)) return cell;
    cell.value = value;
    cell.finding = std::isinf(value)             ? Finding::infinite
                   : std::abs(value) > kMostSize ? Finding::enormous
                                                 : Finding::number;
    return cell;
}

}  // namespace

NumberRules::NumberRules(const std::vector<std::string>& missing_codes, bool decimal_comma)
    : decimal_comma_(decimal_comma) {
    for (const std::string& code : missing_codes) {
        codes_.emplace_back(trimmed(code));
        const NumberCell cell = read_text(codes_.back());
        if (cell.finding == Finding::number) number_codes_.push_back(cell.value);
    }
    for (std::size_t number = 0; number < small_.size(); ++number)
        small_[number] = without_codes(static_cast<double>(number));
}

NumberCell NumberRules::read(std::string_view cell) const {
    const std::string_view text = trimmed(cell);
    if (text.empty() || is_code(text)) return {};
    NumberCell result = read_text(text);
    if (result.finding == Finding::number && std::isnan(without_codes(result.value))) return {};
    return result;
}

NumberCell NumberRules::read_text(std::string_view text) const {
    const std::size_t comma = text.find(',');
    if (!decimal_comma_ || comma == std::string_view::npos || text.find('.') != std::string_view::npos)
        return convert(text);
    std::string with_point(text);
    with_point[comma] = '.';
    NumberCell cell = convert(with_point);
    cell.mark = Mark::comma;
    return cell;
}

bool NumberRules::is_code(std::string_view text) const {
    return std::find(codes_.begin(), codes_.end(), text) != codes_.end();
}

bool NumberRules::is_missing_text(std::string_view text) const {
    if (text.empty() || is_code(text)) return true;
    if (number_codes_.empty() || static_cast<unsigned char>(text.front()) > '9') return false;
    const NumberCell cell = read_text(text);
    return cell.finding == Finding::number && std::isnan(without_codes(cell.value));
}

bool text_is_number(std::string_view text, double& value) {
    const NumberCell cell = convert(text);
    value = cell.value;
    return cell.finding == Finding::number;
}

}  // namespace rivalfold
