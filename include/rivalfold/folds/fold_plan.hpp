// Which rows are held out when. Knows rows and clusters; does not know that theories exist, so dropping a theory moves
// no row.
#pragma once

#include "rivalfold/data/survey.hpp"
#include "rivalfold/study/study.hpp"

#include <cstddef>
#include <cstdint>
#include <span>
#include <string>
#include <vector>

namespace rivalfold {

/// R repeats of a partition of the used rows into K folds.
struct FoldPlan {
    std::size_t n_rows = 0;
    int repeats = 0;
    int folds = 0;
    std::vector<std::uint32_t> fold_of;  ///< repeats x n_rows, one repeat after the other; folds count from 0
    std::vector<std::string> advice;

    std::span<const std::uint32_t> repeat(int r) const {
        return {fold_of.data() + static_cast<std::size_t>(r) * n_rows, n_rows};
    }
    std::uint32_t fold(int r, std::size_t row) const { return fold_of[static_cast<std::size_t>(r) * n_rows + row]; }
    /// The number of training rows of the smallest training set of any split.
    std::size_t smallest_training() const;
};

/// Folds drawn from the seed: rows shuffled, row at shuffled position i goes to fold i mod K, so that sizes differ by
/// at most one row. With clusters: clusters shuffled, each goes whole to the fold with the fewest rows so far (the
/// first of equals). Repeat r uses the stream (seed, folds, r). Where every row (or cluster) has its own fold all
/// repeats are alike: one is kept, with advice. `clusters` is empty or holds a cluster number from 0 for each row.
/// Precondition: 2 <= folds <= rows (or clusters).
FoldPlan draw_folds(std::size_t n_rows, const std::vector<int>& clusters, int folds, int repeats, std::uint64_t seed);

/// Adds repeats to a drawn plan until it has `repeats`: the same folds that draw_folds would have given at once.
void extend_folds(FoldPlan& plan, const std::vector<int>& clusters, int repeats, std::uint64_t seed);

/// The plan that a study asks for: drawn, or read from its folds_file. Throws FaultError: more folds than rows or
/// clusters; a folds_file that misses a used row, names a row twice or one beyond the data, skips a fold, or splits a
/// cluster.
FoldPlan plan_folds(const Study& study, const Survey& survey);

}  // namespace rivalfold
