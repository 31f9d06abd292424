// Delimited text (RFC 4180 and its relatives) in, `Table` out.
#pragma once

#include "rivalfold/data/table.hpp"

#include <string>
#include <string_view>

namespace rivalfold {

/// Reads delimited text. Handles quoted fields with embedded delimiters, newlines and doubled quotes, a UTF-8 byte
/// order mark, LF, CRLF and CR, and a decimal comma (taken as such when the delimiter is not a comma).
/// Throws FaultError (first 20 faults and a count): empty text, a column named twice, a nameless chosen column, ragged
/// rows
/// ("expected 14 cells, found 13"), an unclosed quote, text in a numeric column, infinite or enormous numbers (above
/// 1e100 in size), bytes that are not UTF-8 text (NUL).
Table read_delimited_text(std::string_view text, const std::string& file_name, const ReadRules& rules,
                          const ChooseColumns& choose);

/// The same from a file, read in blocks so that memory stays near that of the result.
Table read_delimited(const std::string& path, const ReadRules& rules, const ChooseColumns& choose);

}  // namespace rivalfold
