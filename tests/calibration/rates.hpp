// How often was the verdict right? Shares of samples with their Monte Carlo errors, what is accepted, and the whole as
// Markdown. Knows nothing of how samples are made.
#pragma once

#include "calibration/simulation.hpp"

#include <string>
#include <vector>

namespace rivalfold::calibration {

/// A share of samples (or the mean of shares) and its Monte Carlo standard error.
struct Rate {
    double value = 0, se = 0;
};

/// All shares are of the samples in which every theory could be fitted.
struct Rates {
    std::size_t samples = 0, not_fitted = 0;
    Rate wrong_winner;              ///< a winner is named that is not the one best theory; at equal loss: any winner
    Rate right_winner;              ///< the one best theory is named
    Rate tests_wrong, tests_right;  ///< the same, had both tests decided and equality not come first (margin: 0)
    Rate rows_wrong, rows_right;    ///< the same, had the row test decided alone
    Rate corrected_wrong, corrected_right;
    Rate splits_wrong, splits_right;  ///< had the t test decided that takes splits as independent
    Rate tied_called_different;       ///< some pair of the best theories is said to differ
    Rate called_equal;                ///< practically equal: the first pair
    Rate coverage;  ///< the interval holds the true difference; mean over the pairs of best theories, or the first pair
    Rate clark_west;              ///< of the first pair, if nested
    Rate range_keeps, max_keeps;  ///< the confidence set by T_R, by T_max, holds all best theories
    Rate difference;              ///< mean and error of the first pair's difference
    double difference_sd = 0;     ///< its standard deviation over samples
};

Rates rates_of(const CellResult& result, double level = 0.05);

/// Bounds for cells of equal expected loss: with 100 rows or more at most 5.5% + 2 Monte Carlo errors of false winners;
/// at least 2% where the theories are exchangeable; intervals cover in at least 93%. Empty if all hold; else what does
/// not. Not asked of other cells.
std::vector<std::string> shortcomings(const Cell& cell, const Rates& rates);

/// The bound on false winners for so many samples.
double false_winner_bound(std::size_t samples);

/// Is the cell one that must keep the bounds?
bool has_bounds(const Cell& cell);

/// The tables, and which cells keep the bounds, as Markdown.
std::string write_markdown(const std::vector<CellResult>& results);

}  // namespace rivalfold::calibration
