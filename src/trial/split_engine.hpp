// The passes over the rows: cross-products of held-out rows, designs of bent terms on training rows, predictions of
// held-out rows. Works on ranges of folds of a repeat, in blocks of rows that stay in cache; sums are made per segment
// of rows and added in segment order, so that every number is the same for any count of threads.
#pragma once

#include "rivalfold/theory/contestant.hpp"
#include "rivalfold/theory/kernels.hpp"
#include "rivalfold/theory/sample.hpp"
#include "trial/worker_pool.hpp"

#include <cstdint>
#include <functional>
#include <memory>
#include <span>
#include <vector>

namespace rivalfold {

/// Folds first .. last - 1 of one partition of the rows.
struct FoldRange {
    std::span<const std::uint32_t> fold_of;  ///< one fold number per sample row
    std::uint32_t first = 0;
    std::uint32_t last = 0;
    int repeat = 0;  ///< for messages and result slots
    std::size_t folds() const { return last - first; }
};

/// One split: what each contestant learned, and why the split could not be used, if so.
struct SplitFits {
    std::vector<Fit> fits;  ///< per contestant
    int constant = -1;      ///< a variable that does not vary among the training rows, or -1
};

/// What the predictions of one split cost each contestant.
struct SplitErrors {
    double rows = 0;
    std::vector<double> loss;                  ///< per contestant: sum of row losses
    std::vector<std::vector<ErrorSums>> sums;  ///< per contestant and target indicator
};

struct LossRule {
    bool absolute = false;
    Eigen::VectorXd one_over_unit;           ///< per target indicator: 1 / u_j
    std::vector<int> target_columns;         ///< sample columns
    std::vector<std::ptrdiff_t> error_slot;  ///< per contestant: its place among the recorded errors, or -1
};

/// Where one range's predictions go.
struct PredictionSlots {
    double* row_loss = nullptr;  ///< [contestant * n + row], added to
    double* errors = nullptr;    ///< [(error_slot * q + j) * n + row], overwritten; null: not recorded
};

class SplitEngine {
public:
    SplitEngine(const Sample& sample, WorkerPool& pool);

    /// Cross-products of the rows of each fold of each range: result[range][fold - first].
    std::vector<std::vector<Gram>> fold_grams(const std::vector<FoldRange>& ranges);
    /// Fits every contestant to the rows outside each fold. `whole` is the Gram of all rows.
    void fit(const std::vector<FoldRange>& ranges, const Gram& whole, const std::vector<const Contestant*>& contestants,
             std::vector<std::vector<SplitFits>>& out);
    /// Predicts each fold's rows into the slots of its range.
    void predict(const std::vector<FoldRange>& ranges, const std::vector<std::vector<SplitFits>>& fits,
                 const std::vector<const Contestant*>& contestants, const LossRule& rule,
                 const std::vector<PredictionSlots>& slots, std::vector<std::vector<SplitErrors>>& out);

    /// Fits to all rows.
    SplitFits fit_whole(const Gram& whole, const std::vector<const Contestant*>& contestants);
    Gram whole_gram();

    /// Gram matrix (lower triangle) of [columns, 1] over all rows; `form` writes the columns of a block of rows,
    /// `stride` apart.
    using FormColumns = std::function<void(const RowBlock&, RowScratch&, double* out, std::ptrdiff_t stride)>;
    Eigen::MatrixXd gram_of(int n_columns, const FormColumns& form);

private:
    static constexpr std::ptrdiff_t kBlockRows = 1024;
    struct Room;  // one thread's buffers

    std::size_t n_segments() const { return static_cast<std::size_t>((sample_.n + segment_rows_ - 1) / segment_rows_); }
    /// Calls use(first row, rows) for the blocks of a segment in order.
    template <class Use>
    void for_each_block(std::size_t segment, Use use) const;
    RowBlock rows_of(Eigen::Index first, std::ptrdiff_t count) const;
    void gather(const FoldRange& range, Eigen::Index first, Eigen::Index rows, bool pad, Room& room) const;
    void fit_designs(const std::vector<FoldRange>& ranges, const std::vector<const Contestant*>& contestants,
                     std::vector<std::vector<SplitFits>>& out);
    void predict_segment(const FoldRange& range, std::size_t segment, const std::vector<SplitFits>& fits,
                         const std::vector<const Contestant*>& contestants, const LossRule& rule,
                         const PredictionSlots& slots, Room& room, std::vector<SplitErrors>& out);
    Room& room(unsigned worker, const std::vector<const Contestant*>* contestants);

    const Sample& sample_;
    WorkerPool& pool_;
    Eigen::Index segment_rows_;
    std::vector<std::shared_ptr<Room>> rooms_;
};

}  // namespace rivalfold
