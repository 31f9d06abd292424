// Two contestants compared, as finished numbers.
#pragma once

#include "rivalfold/verdict/paired_tests.hpp"

#include <cstddef>
#include <optional>
#include <string>

namespace rivalfold {

/// A one-sided test of mean > 0. NaN with a reason where nothing varies.
struct OneSidedTest {
    double t = 0, df = 0, p = 0;  ///< df 0: the normal distribution
    std::string reason;
};

enum class PairOutcome { first_better, second_better, practically_equal, unresolved };
const char* word(PairOutcome);  ///< "first predicts better" ...

struct PairReport {
    std::size_t a = 0, b = 0;  ///< indices into Trial::contestants, a ranked before b
    double difference = 0;     ///< D = mean of L(a, i) - L(b, i)
    double relative = 0;       ///< D / loss(b)
    PairedTest rows, corrected;
    double p = 0, p_holm = 0;   ///< the larger of the two tests' p, and its Holm adjustment over the pairs of theories
    double low = 0, high = 0;   ///< the wider of the two intervals
    bool theories = false;      ///< both are theories
    double monte_carlo_se = 0;  ///< of the difference, from the spread of the repeats; NaN with one repeat
    // Theories only:
    OneSidedTest a_knows_more,
        b_knows_more;  ///< encompassing: does the first (the second) hold something that the other lacks?
    std::optional<std::size_t> inner;  ///< the contestant whose target equation is nested in the other's
    OneSidedTest extra_terms;          ///< Clark-West, if nested: do the outer theory's extra terms carry information?
    std::string nested_words;
    PairOutcome outcome = PairOutcome::unresolved;
};

}  // namespace rivalfold
