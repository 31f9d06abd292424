// How numbers and names are written, decided once for every format.
#pragma once

#include <string>
#include <string_view>

namespace rivalfold {

/// Shortest text that reads back to the same double, with a point in every locale; empty for NaN (CSV).
std::string exact(double value);
/// Fixed decimals; "-" for NaN; a minus sign never stands before a rounded zero.
std::string fixed(double value, int decimals);
/// p to three decimals, "<.001" below; "-" for NaN.
std::string p_text(double p);
/// An RFC 4180 field: quoted where it must be. A text that a spreadsheet would run as a formula (= + - @ tab) gets a
/// leading apostrophe.
std::string csv_field(std::string_view text);
/// Text safe to print on a terminal and in a Markdown cell: control characters escaped.
std::string plain(std::string_view text);
std::string markdown_cell(std::string_view text);

}  // namespace rivalfold
