// A small cut of the calibration table. Every bound is one that a broken rule fails, and the tests show it: what the
// split-level t test, the row test alone and a study without `cluster` do to the same samples. Acceptance: at most 5.5%
// + 2 Monte Carlo errors of false winners.
#include "calibration/rates.hpp"
#include "calibration/simulation.hpp"
#include "support/catch.hpp"

#include <algorithm>
#include <cmath>
#include <stdexcept>

using namespace rivalfold::calibration;

namespace {

constexpr std::uint32_t kSamples = 800;
constexpr std::size_t kTrainingSets = 1800;

Cell cell_named(const std::string& name) {
    const std::vector<Cell> cells = all_cells();
    const auto found = std::find_if(cells.begin(), cells.end(), [&](const Cell& cell) { return cell.name() == name; });
    if (found == cells.end()) throw std::logic_error("no cell is called " + name);
    return *found;
}

CellResult simulated(const std::string& name, std::uint32_t samples = kSamples) {
    return run_cell(cell_named(name), 1, samples, 1, kTrainingSets);
}

}  // namespace

TEST_CASE("of two exchangeable theories one is named the winner in at most 5.5% of samples, but not never",
          "[calibration]") {
    const Rates rates = rates_of(simulated("exchangeable; normal; n = 100"));
    CHECK(rates.not_fitted == 0);
    CHECK(rates.wrong_winner.value <= false_winner_bound(kSamples));
    CHECK(rates.wrong_winner.value >= 0.005);
    CHECK(rates.right_winner.value == 0);
    CHECK(rates.coverage.value >= 0.90);
    CHECK(rates.splits_wrong.value > 0.25);
    CHECK(rates.max_keeps.value >= 0.90);
}

// Clark & West 2007 (Journal of Econometrics 138, 291-311): at equal expected loss the outer theory's term is real.
TEST_CASE("at equal expected loss of nested theories the row test alone names far too many winners, the verdict does not",
          "[calibration]") {
    const CellResult result = simulated("nested, one weak term; normal; n = 200");
    REQUIRE(result.tuned);
    CHECK((*result.tuned > 0.01 && *result.tuned < 0.1));
    CHECK(std::fabs(result.truth.difference[0]) <= 3 * std::hypot(1, 1) * result.truth.difference_se[0]);
    const Rates rates = rates_of(result);
    CHECK(rates.wrong_winner.value <= false_winner_bound(kSamples));
    CHECK(rates.tests_wrong.value <= false_winner_bound(kSamples));
    CHECK(rates.rows_wrong.value > false_winner_bound(kSamples));
    CHECK(rates.splits_wrong.value > false_winner_bound(kSamples));
    CHECK(rates.coverage.value >= 0.90);
    CHECK(rates.clark_west.value > rates.wrong_winner.value);
}

TEST_CASE("with clusters the declared study keeps the bound and the undeclared one breaks it", "[calibration]") {
    const Rates declared = rates_of(simulated("clusters of 10; normal; n = 200"));
    CHECK(declared.wrong_winner.value <= false_winner_bound(kSamples));
    CHECK(declared.rows_wrong.value <= false_winner_bound(kSamples));  // the row test by cluster, alone
    CHECK(declared.coverage.value >= 0.90);
    const Rates ignored = rates_of(simulated("clusters of 10, not declared; normal; n = 200"));
    CHECK(ignored.wrong_winner.value > false_winner_bound(kSamples));
    CHECK(ignored.coverage.value < 0.90);
}

TEST_CASE("four theories that tie: seldom a winner, and the confidence set by T_max keeps them", "[calibration]") {
    const Rates rates = rates_of(simulated("four theories, three nest the first; normal; n = 100", 400));
    CHECK(rates.wrong_winner.value <= false_winner_bound(400));
    CHECK(rates.max_keeps.value >= 0.90);
    CHECK(rates.max_keeps.value > rates.range_keeps.value);
}

TEST_CASE("a true difference is found, by the right theory, and its interval holds the simulated truth",
          "[calibration]") {
    const CellResult result = simulated("difference, .5 against .3; normal; n = 500", 200);
    const Rates rates = rates_of(result);
    CHECK(rates.right_winner.value > 0.3);
    CHECK(rates.wrong_winner.value == 0);
    CHECK(rates.coverage.value >= 0.90);
    // Cross-validation is unbiased for training sets of its own size: two ways to the same number.
    CHECK(std::fabs(rates.difference.value - result.truth.difference[0]) <
          4 * std::hypot(rates.difference.se, result.truth.difference_se[0]));
}
