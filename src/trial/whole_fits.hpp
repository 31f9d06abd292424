// The in-sample side of a run: every theory fitted to all rows used, and the full model of all their terms.
#pragma once

#include "rivalfold/trial/losses.hpp"
#include "trial/split_engine.hpp"

#include <memory>
#include <vector>

namespace rivalfold {

class WholeFits {
public:
    WholeFits(const Study& study, const Survey& survey, const Sample& sample, SplitEngine& engine, const Gram& whole)
        : study_(study), survey_(survey), sample_(sample), engine_(engine), whole_(whole) {}

    /// Fills theories, whole, unit and benchmark_predictors of `trial`; returns the contestants for the folds: the
    /// theories in file order, the training mean, the linear benchmark.
    std::vector<std::unique_ptr<Contestant>> fit_all_rows(Trial& trial);
    /// Fills full_model of `trial`, after fit_all_rows().
    void fit_full_model(Trial& trial);

private:
    void settle_shifts(TheoryContestant& theory);
    double explained_share(const TheoryContestant& theory, const Fit& fit, const Eigen::VectorXd& unit);

    const Study& study_;
    const Survey& survey_;
    const Sample& sample_;
    SplitEngine& engine_;
    const Gram& whole_;
};

}  // namespace rivalfold
