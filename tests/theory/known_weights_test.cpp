#include "fitted.hpp"
#include "support/catch.hpp"

#include <map>

using namespace rivalfold;

namespace {

using Known = std::map<std::string, double>;

/// Quantities of tests/reference/outside/two_blocks.csv for one data set and mode.
Known known_values(const std::string& data, const std::string& mode) {
    Known known;
    for (const auto& line : frozen_cells("reference/outside/two_blocks.csv"))
        if (line[0] == data && line[1] == mode) known[line[2]] = std::stod(line[3]);
    REQUIRE(known.size() == 8);
    return known;
}

Fitted two_blocks(const std::string& data, const std::string& first, const std::string& second,
                  const std::string& mode) {
    return fit_all(
        prepare("study: two blocks\ndata: {file: t.csv}\nconstructs:\n  first: {indicators: " + first +
                    ", weights: " + mode + "}\n  second: {indicators: " + second + ", weights: " + mode + R"(}
target: second
theories:
  - {name: line, equations: {second: [first]}}
  - {name: bent, equations: {second: [{square: first}]}}
trial: {folds: 4, repeats: 2}
)",
                file_text(data)),
        0);
}

struct Blocks {
    const char* name;
    const char* file;
    const char* first;
    const char* second;
};
const Blocks kBlocks[] = {
    {"linnerud", "reference/outside/linnerud.csv", "[Weight, Waist, Pulse]", "[Chins, Situps, Jumps]"},
    {"swiss", "reference/open_data/swiss/data.csv", "[Agriculture, Examination, Education]",
     "[Fertility, Catholic, Infant.Mortality]"}};

}  // namespace

// Wold (1982); Tenenhaus, Esposito Vinzi, Chatelin & Lauro (2005): two blocks on one path settle in mode A at the first
// singular vectors of the cross-correlation matrix, in mode B at the first canonical pair. Values: numpy svd and R
// cancor (tests/reference/outside/README.md). Weights stop within 1e-10 x r/(1 - r) of their limit, r the ratio of two
// rounds' changes: hence 1e-8.
TEST_CASE("two blocks settle at singular vectors in mode A and at the canonical pair in mode B", "[theory]") {
    for (const Blocks& blocks : kBlocks)
        for (const std::string mode : {"mode_a", "mode_b"}) {
            INFO(blocks.name << ", " << mode);
            const Known known = known_values(blocks.name, mode);
            const Fitted fitted = two_blocks(blocks.file, blocks.first, blocks.second, mode);
            REQUIRE(fitted.fit.status == FitStatus::fitted);
            CHECK(fitted.fit.rounds > 1);
            CHECK(fitted.fit.rounds < 3000);
            const std::string lists = std::string(blocks.first) + blocks.second;
            std::size_t seen = 0;
            for (const std::string construct : {"first", "second"}) {
                std::string list = construct == "first" ? blocks.first : blocks.second;
                std::replace(list.begin(), list.end(), ',', ' ');
                std::istringstream names(list.substr(1, list.size() - 2));
                Eigen::Index h = 0;
                for (std::string name; names >> name; ++seen)
                    CHECK(fitted.weights(construct)(h++) ==
                          Approx(known.at("weight of " + name)).epsilon(1e-8).margin(1e-9));
            }
            CHECK(seen == 6);
            CHECK(fitted.fit.score_correlations(fitted.block("first"), fitted.block("second")) ==
                  Approx(known.at("correlation of the scores")).epsilon(1e-12));
        }
}

// The same mode A solution as printed digits of scikit-learn's linnerud: unit-length singular vectors by numpy svd.
TEST_CASE("linnerud's mode A weights have the direction of the printed singular vectors", "[theory]") {
    const Fitted fitted = two_blocks(kBlocks[0].file, kBlocks[0].first, kBlocks[0].second, "mode_a");
    const Eigen::Vector3d u(-.589891177862442, -.771340585110411, .238876746548487),
        v(.613307417485638, .746971701670363, .256685193497363);
    CHECK(std::fabs(fitted.weights("first").normalized().dot(u)) == Approx(1).epsilon(1e-14));
    CHECK((fitted.weights("first").normalized() + u).norm() < 1e-8);  // the sign that makes the loadings' sum positive
    CHECK((fitted.weights("second").normalized() - v).norm() < 1e-8);
}
