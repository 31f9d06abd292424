// Which simulated surveys should the verdict be judged on? Each cell is a survey with a known truth: how its rows come
// about, which theories compete for it, and which of them is best. Knows nothing of losses, tests or rates.
#pragma once

#include "rivalfold/data/table.hpp"
#include "rivalfold/folds/random.hpp"
#include "rivalfold/study/study.hpp"

#include <cstddef>
#include <cstdint>
#include <string>
#include <vector>

namespace rivalfold::calibration {

enum class Items { normal, heavy_tailed, seven_point };
const char* word(Items);

/// What a cell shows: at equal expected loss any winner is false; otherwise one theory is truly better; or the question
/// is equality.
enum class Aim { null, alternative, equality };

/// A number of the design that is found by root finding, so that the second theory's expected held-out loss exceeds the
/// first's by `Design::wanted` times the smaller of the two.
enum class Tuned { nothing, extra_effects, product, correlation };

/// Antecedents x1, x2, ... with equal correlations, variances 1; outcome = sum of effects x antecedent + product x (x1
/// x2) + disturbance, variance about 1. Three items each, loading .8.
struct Design {
    std::string name;
    Aim aim = Aim::null;
    std::vector<double> effects;
    double product = 0;
    double correlation = 0.3;
    std::vector<std::string> theories;  ///< the right-hand side of the outcome's equation, as in a study file
    std::vector<std::size_t>
        best;  ///< the theories of the smallest expected loss, if known from symmetry or tuning; else empty
    bool symmetric = false;  ///< the best ones are equal by symmetry: their differences are exactly 0
    Tuned tuned = Tuned::nothing;
    std::size_t extra_from = 0;  ///< the effects from this one on are the tuned ones (extra_effects)
    double wanted = 0;           ///< relative difference in expected loss to tune to
    bool clustered =
        false;  ///< rows come in groups of 10; half of the variance of antecedents and disturbance is the group's
    bool cluster_declared = true;  ///< the study says `cluster`
};

struct Cell {
    Design design;
    Items items = Items::normal;
    int rows = 0;
    std::uint32_t stream = 0;  ///< cells with the same number draw the same samples
    std::string name() const;  ///< "nested, one weak term; normal; n = 200"
};

/// Every cell of the published table, in table order; numbers of streams do not depend on which of them are run.
std::vector<Cell> all_cells();

/// The study file's text: mode A weights (the default), 10 folds, 10 repeats, level .05, margin .02.
std::string study_text(const Cell& cell);

/// A copy with the tuned number set.
Design with_tuned(const Design& design, double value);

/// `rows` simulated rows as a table that holds what the study uses.
Table simulate(const Cell& cell, const Study& study, std::size_t rows, RandomStream& stream);

}  // namespace rivalfold::calibration
