// One cell as a number: plain decimals on a fast path, everything else by std::from_chars, and the codes that mean
// "no answer". Knows nothing of files or columns.
#pragma once

#include "rivalfold/data/table.hpp"

#include <array>
#include <cstdint>
#include <limits>
#include <string>
#include <string_view>
#include <vector>

namespace rivalfold {

constexpr double kMissing = std::numeric_limits<double>::quiet_NaN();
constexpr double kMostSize = 1e100;  ///< a larger number in a survey is a mistake

/// The decimal mark that a number was written with.
enum class Mark : unsigned char { none, point, comma };

/// What a cell turned out to be.
enum class Finding : unsigned char { number, missing, not_a_number, infinite, enormous };

struct NumberCell {
    double value = kMissing;
    Finding finding = Finding::missing;
    Mark mark = Mark::none;
};

class NumberRules {
public:
    /// `decimal_comma`: "3,5" is a number too.
    NumberRules(const std::vector<std::string>& missing_codes, bool decimal_comma);

    /// Reads a whole cell, blanks and all. Correctly rounded (std::from_chars); a size below the smallest double is 0.
    NumberCell read(std::string_view cell) const;

    /// The value of "0" .. "99": itself, or NaN where it is a missing code.
    double small(unsigned number) const { return small_[number]; }

    /// NaN if the number is a missing code.
    double without_codes(double value) const {
        for (const double code : number_codes_)
            if (value == code) return kMissing;
        return value;
    }

    /// Whether a trimmed text means "no answer": empty, a code, or a number equal to a code.
    bool is_missing_text(std::string_view trimmed_cell) const;

    bool decimal_comma() const { return decimal_comma_; }

private:
    NumberCell read_text(std::string_view trimmed_cell) const;
    bool is_code(std::string_view trimmed_cell) const;

    bool decimal_comma_;
    std::vector<std::string> codes_;
    std::vector<double> number_codes_;
    std::array<double, 100> small_{};
};

/// A trimmed text as a number with a decimal point, as conditions and levels compare; false if it is none.
bool text_is_number(std::string_view trimmed_text, double& value);

/// Reads digits with at most one mark ("-12", "3.25") from `at`, which must be followed by a byte that is no digit.
/// Returns the byte after the number, or null where std::from_chars is needed or the bytes are no number.
/// Exact: at most 2^53 over a power of ten up to 10^22, one correctly rounded division (Clinger 1990).
inline const char* read_plain_number(const char* at, bool decimal_comma, double& value, Mark& mark) {
    static constexpr std::array<double, 20> kPowers = {1e0,  1e1,  1e2,  1e3,  1e4,  1e5,  1e6,  1e7,  1e8,  1e9,
                                                       1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19};
    const bool negative = *at == '-';
    if (negative) ++at;
    const char* const first = at;
    std::uint64_t digits = 0;
    for (; static_cast<unsigned char>(*at - '0') < 10; ++at)
        digits = digits * 10 + static_cast<std::uint64_t>(*at - '0');
    std::ptrdiff_t n_digits = at - first;
    std::ptrdiff_t n_decimals = 0;
    mark = Mark::none;
    if (*at == '.' || (decimal_comma && *at == ',')) {
        mark = *at == '.' ? Mark::point : Mark::comma;
        const char* const decimals = ++at;
        for (; static_cast<unsigned char>(*at - '0') < 10; ++at)
            digits = digits * 10 + static_cast<std::uint64_t>(*at - '0');
        n_decimals = at - decimals;
        n_digits += n_decimals;
    }
    if (n_digits == 0 || n_digits > 19 || digits > (std::uint64_t{1} << 53)) return nullptr;
    value = static_cast<double>(digits);
    if (n_decimals > 0) value /= kPowers[static_cast<std::size_t>(n_decimals)];
    if (negative) value = -value;
    return at;
}

}  // namespace rivalfold
