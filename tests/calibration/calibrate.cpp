// Prints how often the verdict is right on simulated surveys with a known truth. See README.md beside this file.
#include "calibration/rates.hpp"
#include "calibration/simulation.hpp"

#include <fmt/format.h>
#include <CLI/CLI.hpp>

#include <cstdio>
#include <exception>
#include <regex>

namespace {

using namespace rivalfold::calibration;

std::vector<CellResult> run_cells(const std::regex& wanted, std::uint64_t seed, std::uint32_t samples,
                                  unsigned threads) {
    std::vector<CellResult> results;
    for (const Cell& cell : all_cells()) {
        if (!std::regex_search(cell.name(), wanted)) continue;
        results.push_back(run_cell(cell, seed, samples, threads));
        fmt::print(stderr, "{}: {:.1f} ms of processor time a sample\n", cell.name(),
                   1000 * results.back().seconds_per_sample);
    }
    return results;
}

}  // namespace

int main(int argc, char** argv) {
    CLI::App app(
        "How often is the verdict right? Simulated surveys with a known truth, through the program's own engine.");
    std::uint32_t samples = 2000;
    std::string cells = ".";
    unsigned threads = 1;
    std::uint64_t seed = 1;
    app.add_option("--samples", samples, "simulated samples per cell")
        ->capture_default_str()
        ->check(CLI::Range(2U, 1U << 20U));
    app.add_option("--cells", cells, "only cells whose name matches this regular expression, e.g. \"nested.*n = 200\"");
    app.add_option("--threads", threads, "samples run side by side; changes no number")
        ->capture_default_str()
        ->check(CLI::Range(1U, 1024U));
    app.add_option("--seed", seed, "of every random number")->capture_default_str();
    CLI11_PARSE(app, argc, argv);
    try {
        const std::vector<CellResult> results = run_cells(std::regex(cells), seed, samples, threads);
        if (results.empty()) {
            fmt::print(stderr, "no cell's name matches \"{}\"\n", cells);
            return 2;
        }
        fmt::print("Seed {}, {} samples a cell. Rates in percent, Monte Carlo standard errors in brackets.\n\n{}", seed,
                   samples, write_markdown(results));
    } catch (const std::exception& error) {
        fmt::print(stderr, "calibrate: {}\n", error.what());
        return 1;
    }
    return 0;
}
