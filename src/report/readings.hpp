// Sentences that more than one form of the report needs, worded once.
#pragma once

#include "rivalfold/report/writers.hpp"

#include <string>
#include <string_view>

namespace rivalfold {

std::string bold(const std::string& text, const TerminalStyle& style);
/// The text in lines of the style's width, with a final newline.
std::string paragraph(std::string_view text, const TerminalStyle& style);
/// "10 repeats of 10 folds of rows, seed 1"
std::string splits_in_words(const Outcome& outcome);
/// "420 rows read, 396 used, 24 left out"
std::string rows_in_words(const Survey& survey);
/// What the columns of the ranked table and of the pairs table mean.
std::string ranked_reading(const Outcome& outcome);
std::string pairs_reading(const Outcome& outcome);

}  // namespace rivalfold
