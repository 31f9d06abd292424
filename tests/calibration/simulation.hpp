// What does the product's own engine say of simulated surveys, and what is the truth that it should have found? Runs
// samples from a table in memory to the verdict, and simulates expected held-out losses. Knows nothing of bounds or
// tables.
#pragma once

#include "calibration/designs.hpp"

#include <cstddef>
#include <cstdint>
#include <optional>
#include <vector>

namespace rivalfold::calibration {

/// Two theories on one sample, in file order.
struct PairJudgement {
    std::size_t first = 0, second = 0;
    double difference = 0;  ///< mean of L(first) - L(second)
    double se_rows = 0, se_corrected = 0;
    double p_rows = 0, p_corrected = 0, p_both = 0;
    double p_splits = 0;       ///< of the t test that takes all splits as independent: what the corrected test corrects
    double low = 0, high = 0;  ///< the interval to read, in the orientation of `difference`
    bool called_different = false;  ///< the pair's outcome is that one predicts better
    bool called_equal = false;
    double p_clark_west = 0;  ///< NaN unless nested
};

/// What the default verdict says of one sample.
struct Judgement {
    bool failed = false;  ///< a theory could not be fitted in every split
    std::optional<std::size_t> winner;
    std::vector<std::size_t> ranked;             ///< theories, smallest loss first
    std::vector<PairJudgement> pairs;            ///< (0, 1), (0, 2) ..., (1, 2) ...
    std::vector<double> p_set_range, p_set_max;  ///< per theory

    /// The best-ranked theory, if `p` of its pair with every rival is below `level`.
    std::optional<std::size_t> leader(double PairJudgement::*p, double level) const;
};

/// Sample number `sample` of a cell: simulated, run through survey, folds, trial and verdict in this thread, judged.
Judgement judge_sample(const Cell& cell, std::uint64_t seed, std::uint32_t sample);

enum class Part : std::uint32_t { samples = 0, truth = 1, tuning = 2 };

/// Expected held-out losses of theories that are fitted to 9/10 of the cell's rows, in units of the target's standard
/// deviation.
struct ExpectedLosses {
    std::vector<double> loss;           ///< per theory
    std::vector<double> difference;     ///< per pair, as Judgement::pairs
    std::vector<double> difference_se;  ///< Monte Carlo
};

/// By simulation with the product's engine: large samples of max(1000, 5.4 n) rows; each is cut into blocks of 0.9 n
/// rows; every block in turn is the training set, and all other rows are predicted. About `training_sets` of them.
/// Streams are apart from those of the samples.
ExpectedLosses expected_losses(const Cell& cell, std::uint64_t seed, Part part, std::size_t training_sets);

/// The tuned number of a design: the root of (L2 - L1) - wanted x min(L1, L2) of the expected losses, found by the
/// Illinois variant of regula falsi (Dowell & Jarratt 1971, BIT 11, 168-174) in its square, with the same random
/// numbers at every step.
double tune(const Cell& cell, std::uint64_t seed, std::size_t training_sets);

struct CellResult {
    Cell cell;  ///< with its tuned number
    std::optional<double> tuned;
    ExpectedLosses truth;           ///< differences exactly 0 where symmetry says so
    std::vector<std::size_t> best;  ///< the theories of the smallest expected loss
    std::vector<Judgement> judgements;
    double seconds_per_sample = 0;  ///< processor time
};

/// Tunes, simulates the truth, and judges `samples` samples, in `threads` threads; their number changes nothing but the
/// time.
CellResult run_cell(const Cell& cell, std::uint64_t seed, std::uint32_t samples, unsigned threads,
                    std::size_t training_sets = 18000);

}  // namespace rivalfold::calibration
