// How a p value stands in a sentence, decided once.
#pragma once

#include <fmt/format.h>

#include <string>

namespace rivalfold {

/// `p = .041`, `p < .001`.
inline std::string p_words(double p) {
    return p < 0.001 ? "p < .001" : fmt::format("p = {}", fmt::format("{:.3f}", p).substr(p < 0.9995 ? 1 : 0));
}

}  // namespace rivalfold
