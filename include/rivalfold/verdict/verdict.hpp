// Which theory predicts better, and how sure is that? Everything that the tables and files say, as finished numbers.
// Knows no formats and no files.
#pragma once

#include "rivalfold/folds/fold_plan.hpp"
#include "rivalfold/trial/losses.hpp"
#include "rivalfold/verdict/confidence_set.hpp"
#include "rivalfold/verdict/paired_tests.hpp"

#include <optional>
#include <string>
#include <vector>

namespace rivalfold {

/// One coefficient of an in-sample equation. Numbers that do not exist are NaN, and `reason` says why.
struct TermReport {
    std::string term;  ///< "1" is the intercept
    double coefficient = 0, se = 0, t = 0, p = 0;
    double f2 = 0;     ///< (R2 - R2 without the term) / (1 - R2) (Cohen 1988, Statistical Power Analysis, 2nd ed.); NaN for the intercept
    std::string reason;
};

/// Ordinary least squares of one equation on all rows used, in the study's metric.
struct EquationReport {
    std::string outcome;
    double r2 = 0;
    std::vector<TermReport> terms;
};

struct IndicatorWeight {
    std::string name;
    double weight = 0;   ///< on the standardised indicator, for a score of standard deviation 1
    double loading = 0;  ///< correlation of indicator and score
};

struct ConstructWeights {
    std::string construct;
    std::vector<IndicatorWeight> indicators;
};

/// The target's equation fitted to all rows used.
struct InSample {
    double r2 = 0, adjusted_r2 = 0;
    double sse = 0;  ///< target score in standard units
    int coefficients = 0;
    double f = 0, f_df1 = 0, f_df2 = 0, f_p = 0;
};

/// Of the target's equation fitted to all rows used, target score in standard units. p coefficients with the intercept.
/// AIC = n ln(SSE/n) + 2p (Akaike 1974); AICc = AIC + 2p(p+1)/(n-p-1) (Hurvich & Tsai 1989); BIC = n ln(SSE/n) + p ln n (Schwarz 1978);
/// HQ = n ln(SSE/n) + 2p ln ln n (Hannan & Quinn 1979); GM = SSE/MSE_F + p ln n (Geweke & Meese 1981).
struct Criteria {
    double aic = 0, aicc = 0, bic = 0, hq = 0, gm = 0, bic_weight = 0;
    std::string reason;  ///< why some are NaN
};

Criteria criteria_of(double sse, double n, double p, double mse_full);

struct TheoryReport {
    std::size_t contestant = 0;  ///< index into Trial::contestants
    int rank = 0;                ///< 1 = smallest held-out loss; 0 for a failed theory
    InSample fitted;
    Criteria criteria;
    std::vector<EquationReport> equations;  ///< in file order
    std::vector<ConstructWeights> weights;
    double bic_difference = 0;  ///< BIC minus the smallest BIC of the theories; NaN without one
    double explained = 0;    ///< in-sample counterpart of the pooled q2: the same predictions, for the rows that were fitted
    double first_share = 0;  ///< share of the repeats in which it had the smallest loss (ties shared)
    double p_set_range = 0, p_set_max = 0;  ///< its p in the model confidence set
    bool shortlisted = false;               ///< p_set_max > level
    std::string verdict;
    std::string optimism;    ///< "explains 31% of the sample it was fitted to, predicts 24% of new rows"
};

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
    double p = 0, p_holm = 0;  ///< the larger of the two tests' p, and its Holm adjustment over the pairs of theories
    double low = 0, high = 0;  ///< the wider of the two intervals
    bool theories = false;     ///< both are theories
    double monte_carlo_se = 0; ///< of the difference, from the spread of the repeats; NaN with one repeat
    // Theories only:
    OneSidedTest a_knows_more, b_knows_more;  ///< encompassing: does the first (the second) hold something that the other lacks?
    std::optional<std::size_t> inner;         ///< the contestant whose target equation is nested in the other's
    OneSidedTest extra_terms;                 ///< Clark-West, if nested: do the outer theory's extra terms carry information?
    std::string nested_words;
    PairOutcome outcome = PairOutcome::unresolved;
};

/// The stacked combination of theories against the best-ranked theory.
struct StackReport {
    bool present = false;
    double loss = 0;
    std::vector<double> weights;   ///< per theory in file order; 0 for failed ones
    double difference = 0, relative = 0;  ///< stack minus best theory
    PairedTest rows, corrected;
    double p = 0, low = 0, high = 0;
    bool complementary = false;    ///< better than the best theory by both tests and by more than `margin`
    std::string words;
};

/// The rows and regions where the two best-ranked theories part.
struct Disagreement {
    struct Third {
        std::string along;         ///< an antecedent, or "spread of the antecedents"
        int third = 0;             ///< 1 lowest .. 3 highest
        double from = 0, to = 0;   ///< scores in standard units
        std::size_t rows = 0;
        double difference = 0;     ///< mean of L(first) - L(second)
        double se = 0;
    };
    bool present = false;
    std::size_t first = 0, second = 0;       ///< contestants
    std::vector<std::size_t> order;          ///< rows (indices), largest absolute difference first
    Eigen::VectorXd actual;                  ///< n: mean of the target's indicators, in their own units
    Eigen::VectorXd predicted_first, predicted_second;
    std::vector<std::string> antecedents;
    Eigen::MatrixXd scores;                  ///< n x antecedents, standard units
    std::vector<Third> thirds;
};

struct Verdict {
    std::vector<std::size_t> order;      ///< contestants that finished, theories and benchmarks, smallest loss first
    std::vector<TheoryReport> theories;  ///< in file order
    std::vector<PairReport> pairs;       ///< every pair of finished contestants, in table order
    bool several_targets = false;        ///< theories weight the target's indicators differently: their SSEs have different targets
    std::optional<std::size_t> winner;   ///< beats every rival by both tests
    std::string headline;                ///< the verdict in a sentence or two, with size and interval
    ConfidenceSet set;                   ///< over the finished theories, in contestant order
    std::vector<std::size_t> set_members;
    std::vector<std::string> encompassing_words;  ///< theories that hold something which the best-ranked one lacks
    StackReport stack;
    Disagreement disagreement;
};

/// Is a pair's loss difference in one segment other than in another?
struct Reversal {
    std::size_t a = 0, b = 0;            ///< theories by file order, a before b
    std::size_t first = 0, second = 0;   ///< segments
    double difference_first = 0, difference_second = 0;  ///< L(a) - L(b) within each
    double difference = 0, se = 0, t = 0, df = 0, p = 0, p_holm = 0, low = 0, high = 0;
    std::string reason;                  ///< why numbers are missing
    std::string words;                   ///< a sentence where p_holm is below the level, else empty
};

/// Ranks, tests and words from the losses: the default rule of "Verdict" in `help tests`.
Verdict reach_verdict(const Study& study, const Survey& survey, const Sample& sample, const Trial& trial);

}  // namespace rivalfold
