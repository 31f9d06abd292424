// Which theory predicts better, and how sure is that? Everything that the tables and files say, as finished numbers.
// Knows no formats and no files.
#pragma once

#include "rivalfold/folds/fold_plan.hpp"
#include "rivalfold/trial/losses.hpp"
#include "rivalfold/verdict/confidence_set.hpp"
#include "rivalfold/verdict/in_sample_report.hpp"
#include "rivalfold/verdict/pair_report.hpp"

#include <optional>
#include <string>
#include <vector>

namespace rivalfold {

struct TheoryReport {
    std::size_t contestant = 0;  ///< index into Trial::contestants
    int rank = 0;                ///< 1 = smallest held-out loss; 0 for a failed theory
    InSample fitted;
    Criteria criteria;
    std::vector<EquationReport> equations;  ///< in file order
    std::vector<ConstructWeights> weights;
    double bic_difference = 0;  ///< BIC minus the smallest BIC of the theories; NaN without one
    double explained =
        0;  ///< in-sample counterpart of the pooled q2: the same predictions, for the rows that were fitted
    double first_share = 0;                 ///< share of the repeats in which it had the smallest loss (ties shared)
    double p_set_range = 0, p_set_max = 0;  ///< its p in the model confidence set
    bool shortlisted = false;               ///< p_set_max > level
    std::string verdict;
    std::string optimism;  ///< "explains 31% of the sample it was fitted to, predicts 24% of new rows"
};

/// The stacked combination of theories against the best-ranked theory.
struct StackReport {
    bool present = false;
    double loss = 0;
    std::vector<double> weights;          ///< per theory in file order; 0 for failed ones
    double difference = 0, relative = 0;  ///< stack minus best theory
    PairedTest rows, corrected;
    double p = 0, low = 0, high = 0;
    bool complementary = false;  ///< better than the best theory by both tests and by more than `margin`
    std::string words;
};

/// The rows and regions where the two best-ranked theories part.
struct Disagreement {
    struct Third {
        std::string along;        ///< an antecedent, or "spread of the antecedents"
        int third = 0;            ///< 1 lowest .. 3 highest
        double from = 0, to = 0;  ///< scores in standard units
        std::size_t rows = 0;
        double difference = 0;  ///< mean of L(first) - L(second)
        double se = 0;
    };
    bool present = false;
    std::size_t first = 0, second = 0;  ///< contestants
    std::vector<std::size_t> rows;      ///< up to 10,000 sample rows, largest absolute difference of losses first
    Eigen::VectorXd actual;             ///< of these rows: mean of the target's indicators, in their own units
    Eigen::VectorXd predicted_first, predicted_second;
    std::vector<std::string> antecedents;
    Eigen::MatrixXd scores;  ///< of these rows: rows x antecedents, standard units
    std::vector<Third> thirds;
};

struct Verdict {
    std::vector<std::size_t> order;      ///< contestants that finished, theories and benchmarks, smallest loss first
    std::vector<TheoryReport> theories;  ///< in file order
    std::vector<PairReport> pairs;       ///< every pair of finished contestants, in table order
    bool several_targets =
        false;  ///< theories weight the target's indicators differently: their SSEs have different targets
    std::optional<std::size_t> winner;  ///< beats every rival by both tests
    std::string headline;               ///< the verdict in a sentence or two, with size and interval
    ConfidenceSet set;                  ///< over the finished theories, in contestant order
    std::vector<std::size_t> set_members;
    std::vector<std::string> encompassing_words;  ///< theories that hold something which the best-ranked one lacks
    StackReport stack;
    Disagreement disagreement;
};

/// Is a pair's loss difference in one segment other than in another?
struct Reversal {
    std::size_t a = 0, b = 0;                            ///< theories by file order, a before b
    std::size_t first = 0, second = 0;                   ///< segments
    double difference_first = 0, difference_second = 0;  ///< L(a) - L(b) within each
    double difference = 0, se = 0, t = 0, df = 0, p = 0, p_holm = 0, low = 0, high = 0;
    std::string reason;  ///< why numbers are missing
    std::string words;   ///< a sentence where p_holm is below the level, else empty
};

/// Ranks, tests and words from the losses: the default rule of "Verdict" in `help tests`.
Verdict reach_verdict(const Study& study, const Survey& survey, const Sample& sample, const Trial& trial);

}  // namespace rivalfold
