// The used rows as the engine wants them: centred once, missing cells zero, one 0/1 column per category level.
// Knows nothing of theories or folds.
#pragma once

#include "rivalfold/data/survey.hpp"

#include <Eigen/Core>

#include <string>
#include <vector>

namespace rivalfold {

/// The columns of one category inside a Sample: one per level, in level order.
struct LevelColumns {
    int first = 0;
    int n_levels = 0;
};

struct Sample {
    Eigen::Index n = 0;       ///< rows
    int n_variables = 0;      ///< numeric columns; they come first
    int n_columns = 0;        ///< variables, then level columns
    Eigen::MatrixXd values;   ///< n x n_columns; variables minus `centre`, 0 where missing; level columns 0 or 1
    Eigen::VectorXd centre;   ///< n_columns; whole-sample means of the observed cells; 0 for level columns
    std::vector<int> gappy;   ///< variables with a missing cell
    Eigen::MatrixXd gaps;     ///< n x gappy.size(); 1 where the cell is missing, else 0
    std::vector<int> gap_of;  ///< per column, its position in `gappy`, or -1
    std::vector<LevelColumns> categories;
};

/// Centres before any cross-product is formed, so that means of 1e8 cost no digits (Chan, Golub & LeVeque 1983,
/// The American Statistician 37(3), 242-247).
Sample build_sample(const Survey& survey);

/// Cross-products of a set of rows, extended by counts: the Gram matrix of [values, 1, observed masks of gappy
/// columns]. Additive over disjoint sets of rows, so training = whole minus held-out. Lower triangle only.
using Gram = Eigen::MatrixXd;

/// Side of a Gram of this sample.
inline int gram_size(const Sample& sample) { return sample.n_columns + 1 + static_cast<int>(sample.gappy.size()); }

/// Means, deviations and centred cross-products of a set of rows, each gap filled with the set's own mean.
struct Moments {
    double n = 0;
    Eigen::VectorXd mean;        ///< n_columns, in the sample's centred units
    Eigen::VectorXd sd;          ///< n_columns, divisor n - 1, after filling
    Eigen::MatrixXd ss;          ///< n_columns x n_columns, symmetric: sums of squares and products about the means
    int constant = -1;           ///< a variable that does not vary (or has no observed cell), or -1
    std::vector<char> in_force;  ///< n_columns; 0 for a category's first present level and for absent levels, else 1
};

/// Moments of the rows whose Gram is whole - held_out. `suspect` is set when a column keeps less than 1e-4 of its whole
/// sum of squares: then downdating has lost digits (relative error above about 1e-12) and moments_of_rows() must be
/// used instead.
void moments_by_downdating(const Sample& sample, const Gram& whole, const Gram& held_out, Moments& out, bool& suspect);

/// The same in two passes over the rows `in` (indices into the sample); exact test for columns that do not vary.
void moments_of_rows(const Sample& sample, const std::vector<Eigen::Index>& in, Moments& out);

}  // namespace rivalfold
