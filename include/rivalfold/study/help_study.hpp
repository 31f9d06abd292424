// The page of `rivalfold help study`: every key of a study file, its default and its type, the terms, the rows.
// Text only; what a term or a loss computes is told by the other help pages.
#pragma once

#include <string_view>

namespace rivalfold {

/// The page as plain text, at most 80 characters a line, ending in a newline.
std::string_view help_study();

}  // namespace rivalfold
