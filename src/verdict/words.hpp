// The verdict in plain words: always with its size, its interval and what it means in the target's own units.
#pragma once

#include "rivalfold/verdict/verdict.hpp"

namespace rivalfold {

/// Finished theories, smallest loss first.
std::vector<std::size_t> ranked_theories(const Trial& trial, const Verdict& verdict);

/// Fills headline, and each theory's verdict and optimism, from a verdict that is otherwise complete.
void put_into_words(const Study& study, const Survey& survey, const Trial& trial, Verdict& verdict);

}  // namespace rivalfold
