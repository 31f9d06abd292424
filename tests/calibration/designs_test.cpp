#include "calibration/designs.hpp"
#include "calibration/rates.hpp"
#include "calibration/simulation.hpp"
#include "rivalfold/study/read_study.hpp"
#include "support/catch.hpp"

#include <cmath>
#include <limits>
#include <set>

using namespace rivalfold;
using namespace rivalfold::calibration;

namespace {

Cell cell_of(const Design& design, Items items = Items::normal) {
    Cell cell;
    cell.design = design;
    cell.items = items;
    cell.rows = 100;
    return cell;
}

Design design_named(const std::string& name) {
    for (const Cell& cell : all_cells())
        if (cell.design.name == name) return cell.design;
    throw std::logic_error("no design is called " + name);
}

Table table_of(const Cell& cell, std::size_t rows) {
    RandomStream stream(3, Purpose::simulation, 77);
    return simulate(cell, read_study_text(study_text(cell), "simulated.yaml"), rows, stream);
}

double correlation(const Eigen::VectorXd& x, const Eigen::VectorXd& y) {
    const Eigen::ArrayXd a = x.array() - x.mean(), b = y.array() - y.mean();
    return (a * b).sum() / std::sqrt(a.square().sum() * b.square().sum());
}

/// Four samples, written down: A wins, nobody wins twice, and one was not fitted.
CellResult hand_made() {
    CellResult result;
    result.cell = cell_of(design_named("exchangeable"));
    result.best = {0, 1};
    result.truth.difference = {0};
    result.truth.difference_se = {0};
    PairJudgement pair;
    pair.second = 1;
    pair.difference = -0.2;
    pair.p_rows = pair.p_splits = 0.01;
    pair.p_corrected = pair.p_both = 0.2;
    pair.low = -0.5;
    pair.high = 0.1;
    pair.p_clark_west = std::numeric_limits<double>::quiet_NaN();
    Judgement quiet;
    quiet.ranked = {0, 1};
    quiet.pairs = {pair};
    quiet.p_set_range = {1, 0.04};
    quiet.p_set_max = {1, 0.06};
    Judgement won = quiet;
    won.winner = 0;
    won.pairs[0].called_different = true;
    won.pairs[0].p_corrected = 0.04;
    won.pairs[0].high = -0.1;
    Judgement failed;
    failed.failed = true;
    result.judgements = {quiet, won, quiet, quiet, failed};
    return result;
}

}  // namespace

TEST_CASE("items have a loading of .8 on a construct of variance 1, the outcome too", "[calibration]") {
    for (const Items items : {Items::normal, Items::heavy_tailed}) {
        const Table table = table_of(cell_of(design_named("exchangeable"), items), 40000);
        REQUIRE(table.numbers.cols() == 9);
        for (Eigen::Index column = 0; column < 9; ++column) {
            const Eigen::VectorXd x = table.numbers.col(column);
            CHECK(x.mean() == Approx(0).margin(0.03));
            CHECK((x.array() - x.mean()).square().mean() == Approx(1).margin(0.06));
        }
        CHECK(correlation(table.numbers.col(0), table.numbers.col(1)) == Approx(0.64).margin(0.03));
        CHECK(correlation(table.numbers.col(6), table.numbers.col(8)) == Approx(0.64).margin(0.03));
        CHECK(correlation(table.numbers.col(0), table.numbers.col(3)) == Approx(0.64 * 0.3).margin(0.03));
        // outcome = .4 x1 + .4 x2: its correlation with x1 is .4 + .4 x .3.
        CHECK(correlation(table.numbers.col(0), table.numbers.col(6)) == Approx(0.64 * 0.52).margin(0.03));
    }
}

TEST_CASE(
    "heavy tails are those of Student's t with 4 degrees of freedom, seven-point items are whole numbers from 1 to 7",
    "[calibration]") {
    // Of independent t items (effects 0 leave each item .8 t + .6 t'): far more rows beyond 4 deviations than the
    // normal's 6 in 100,000.
    const Table heavy = table_of(cell_of(design_named("exchangeable"), Items::heavy_tailed), 40000);
    const Table normal = table_of(cell_of(design_named("exchangeable")), 40000);
    CHECK((heavy.numbers.array().abs() > 4).cast<double>().mean() > 0.002);
    CHECK((normal.numbers.array().abs() > 4).cast<double>().mean() < 0.0002);
    const Table points = table_of(cell_of(design_named("exchangeable"), Items::seven_point), 4000);
    CHECK(points.numbers.minCoeff() == 1);
    CHECK(points.numbers.maxCoeff() == 7);
    CHECK((points.numbers.array() == points.numbers.array().round()).all());
}

TEST_CASE("half of the variance of a clustered antecedent belongs to groups of ten rows", "[calibration]") {
    const Table table = table_of(cell_of(design_named("clusters of 10")), 40000);
    REQUIRE(table.texts.size() == 1);
    CHECK(table.texts[0][9] == "0");
    CHECK(table.texts[0][10] == "1");
    const Eigen::VectorXd x = table.numbers.col(0);
    Eigen::VectorXd first(4000), second(4000);
    for (Eigen::Index group = 0; group < 4000; ++group) {
        first(group) = x(10 * group);
        second(group) = x(10 * group + 9);
    }
    CHECK(correlation(first, second) == Approx(0.64 * 0.5).margin(0.04));
    CHECK(table_of(cell_of(design_named("clusters of 10, not declared")), 20).texts.empty());
}

TEST_CASE("cells have names of their own, and samples of their own except for the clusters that are not declared",
          "[calibration]") {
    std::set<std::string> names;
    std::set<std::uint32_t> streams;
    std::size_t shared = 0, cells = 0;
    for (const Cell& cell : all_cells()) {
        ++cells;
        names.insert(cell.name());
        if (!streams.insert(cell.stream).second) {
            ++shared;
            CHECK(cell.design.name == "clusters of 10, not declared");
        }
        CHECK(cell.stream < 1024);
        CHECK(read_study_text(study_text(cell), "simulated.yaml").theories.size() == cell.design.theories.size());
    }
    CHECK(names.size() == cells);
    CHECK(shared == 3);
    const auto stream_of = [](const std::string& name) {
        for (const Cell& cell : all_cells())
            if (cell.name() == name) return cell.stream;
        return 0U;
    };
    for (const int n : {100, 200, 500})
        CHECK(stream_of("clusters of 10; normal; n = " + std::to_string(n)) ==
              stream_of("clusters of 10, not declared; normal; n = " + std::to_string(n)));
}

TEST_CASE("a sample depends on its seed, its cell and its number, not on threads", "[calibration]") {
    const std::vector<Cell> cells = all_cells();
    const CellResult one = run_cell(cells[0], 5, 6, 1), two = run_cell(cells[0], 5, 6, 2);
    std::set<double> differences;
    for (std::size_t sample = 0; sample < 6; ++sample) {
        CHECK(one.judgements[sample].pairs[0].difference == two.judgements[sample].pairs[0].difference);
        differences.insert(one.judgements[sample].pairs[0].difference);
    }
    CHECK(differences.size() == 6);
    CHECK(judge_sample(cells[0], 5, 3).pairs[0].difference == one.judgements[3].pairs[0].difference);
    CHECK(judge_sample(cells[0], 6, 3).pairs[0].difference != one.judgements[3].pairs[0].difference);
    CHECK(judge_sample(cells[1], 5, 3).pairs[0].difference != one.judgements[3].pairs[0].difference);
}

TEST_CASE("rates are shares of the fitted samples with the binomial standard error", "[calibration]") {
    const Rates rates = rates_of(hand_made());
    CHECK(rates.samples == 4);
    CHECK(rates.not_fitted == 1);
    CHECK(rates.wrong_winner.value == Approx(0.25));
    CHECK(rates.wrong_winner.se == Approx(std::sqrt(0.25 * 0.75 / 4)));
    CHECK(rates.right_winner.value == 0);
    CHECK(rates.rows_wrong.value == 1);
    CHECK(rates.tests_wrong.value == 0);
    CHECK(rates.corrected_wrong.value == Approx(0.25));
    CHECK(rates.tied_called_different.value == Approx(0.25));
    CHECK(rates.coverage.value == Approx(0.75));
    CHECK(rates.range_keeps.value == 0);
    CHECK(rates.max_keeps.value == 1);
    CHECK(std::isnan(rates.clark_west.value));
    CellResult better = hand_made();
    better.best = {0};
    CHECK(rates_of(better).right_winner.value == Approx(0.25));
    CHECK(rates_of(better).wrong_winner.value == 0);
    better.best = {1};
    CHECK(rates_of(better).wrong_winner.value == Approx(0.25));
}

TEST_CASE("a cell that breaks a bound says which, with the number", "[calibration]") {
    CHECK(false_winner_bound(1000) == Approx(0.055 + 2 * std::sqrt(0.055 * 0.945 / 1000)));
    Cell cell = cell_of(design_named("exchangeable"));
    Rates rates;
    rates.samples = 1000;
    rates.wrong_winner = {0.04, 0.006};
    rates.coverage = {0.95, 0.007};
    CHECK(shortcomings(cell, rates).empty());
    rates.wrong_winner = {0.08, 0.009};
    rates.coverage = {0.92, 0.008};
    CHECK(shortcomings(cell, rates) ==
          std::vector<std::string>{"false winner 8.0%", "coverage 92.0%, within 2 Monte Carlo errors"});
    rates.wrong_winner = {0.001, 0.001};
    rates.coverage = {0.95, 0.007};
    CHECK(shortcomings(cell, rates) == std::vector<std::string>{"timid: false winner 0.1%"});
    cell.design = design_named("overlapping");
    CHECK(shortcomings(cell, rates).empty());
    CHECK(has_bounds(cell));
    cell.rows = 60;
    CHECK_FALSE(has_bounds(cell));
    CHECK_FALSE(has_bounds(cell_of(design_named("clusters of 10, not declared"))));
    CHECK_FALSE(has_bounds(cell_of(design_named("difference, .5 against .3"))));
}

TEST_CASE("the tuned number makes the two expected losses equal, or differ by the margin", "[calibration]") {
    // With 100 rows a term of 0 loses about one coefficient's worth; the tuned one gains it back.
    for (const Cell& cell : all_cells()) {
        if (cell.name() != "nested, three weak terms; normal; n = 60") continue;
        const double effect = tune(cell, 2, 200);
        Cell tuned = cell;
        tuned.design = with_tuned(cell.design, effect);
        const ExpectedLosses losses = expected_losses(tuned, 2, Part::tuning, 200);
        CHECK(std::fabs(losses.difference[0]) < 0.06 * losses.difference_se[0]);
        Cell none = cell;
        const ExpectedLosses without = expected_losses(none, 2, Part::tuning, 200);
        CHECK(without.difference[0] < -4 * without.difference_se[0]);
    }
}
