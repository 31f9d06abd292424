// The one interface behind which theories and benchmarks compete: learn from training moments (and, where a term bends,
// from the training rows), then predict rows. Knows no folds, no losses and no files.
#pragma once

#include "rivalfold/theory/blueprint.hpp"
#include "rivalfold/theory/fit.hpp"
#include "rivalfold/theory/sample.hpp"

#include <Eigen/Core>

#include <memory>
#include <string>
#include <vector>

namespace rivalfold {

/// Some rows of the sample, column by column: value of row i in column h = values[h * stride + i], centred, gaps 0.
struct RowBlock {
    const double* values = nullptr;
    const double* gaps = nullptr;  ///< gaps[g * stride + i], 1 where the cell is missing; null without gaps
    std::ptrdiff_t stride = 0;
    std::ptrdiff_t rows = 0;
};

/// Room for the scores of one block of rows; grows once.
struct RowScratch {
    Eigen::MatrixXd scores;     ///< rows x blocks
    Eigen::MatrixXd column;     ///< rows x 1
    Eigen::MatrixXd predicted;  ///< rows x blocks
};

/// Work space of one thread for one contestant; each contestant knows its own kind.
struct FitScratch {
    virtual ~FitScratch() = default;
};

class Contestant {
public:
    virtual ~Contestant() = default;
    virtual const std::string& name() const = 0;
    virtual bool is_theory() const { return false; }
    virtual std::unique_ptr<FitScratch> make_scratch() const { return std::make_unique<FitScratch>(); }

    /// Everything that the training moments determine. A failure is a value: fit.status and fit.reason.
    virtual void fit_moments(const Moments& moments, FitScratch& scratch, Fit& fit) const = 0;

    /// Designs with bent terms, whose cross-products need the training rows: how many there are, and their columns (the
    /// equation's design columns, then the outcome's score).
    virtual int n_designs() const { return 0; }
    virtual int design_columns(int /*design*/) const { return 0; }
    /// Writes the design's columns for some rows, each minus a fixed shift, `stride` apart.
    virtual void form_design(int /*design*/, const Fit&, const RowBlock&, RowScratch&, double* /*out*/,
                             std::ptrdiff_t /*stride*/) const {}
    /// Solves the design's equation from the Gram matrix (lower triangle) of [columns, 1] over the training rows.
    virtual void fit_design(int /*design*/, const Eigen::MatrixXd& /*gram*/, Fit&) const {}
    /// After all designs: what prediction needs.
    virtual void finish(FitScratch&, Fit&) const {}

    /// Predicts each target indicator in centred units: out[j * stride + i].
    virtual void predict(const Fit&, const RowBlock&, RowScratch&, double* out, std::ptrdiff_t stride) const = 0;
};

/// A structural theory. `everything` fits also the equations that do not take part in predicting the target (for the
/// in-sample report).
class TheoryContestant final : public Contestant {
public:
    TheoryContestant(const Sample& sample, Blueprint blueprint, bool everything);
    const Blueprint& blueprint() const { return plan_; }
    /// Origins near which the designs' columns lie, from a fit to all rows: shifting by them keeps digits in products
    /// of raw scores.
    void set_shifts(const Fit& whole);

    const std::string& name() const override { return plan_.name; }
    bool is_theory() const override { return true; }
    std::unique_ptr<FitScratch> make_scratch() const override;
    void fit_moments(const Moments&, FitScratch&, Fit&) const override;
    int n_designs() const override { return static_cast<int>(designs_.size()); }
    int design_columns(int design) const override;
    void form_design(int design, const Fit&, const RowBlock&, RowScratch&, double* out,
                     std::ptrdiff_t stride) const override;
    void fit_design(int design, const Eigen::MatrixXd& gram, Fit&) const override;
    void finish(FitScratch&, Fit&) const override;
    void predict(const Fit&, const RowBlock&, RowScratch&, double* out, std::ptrdiff_t stride) const override;

    /// The values of one design column of an equation, in the study's metric, from measured scores.
    void form_column(const Fit&, const DesignColumn&, const RowBlock&, RowScratch&, double* out) const;
    /// The score of one block in the study's metric.
    void form_score(const Fit&, int block, const RowBlock&, double* out) const;

private:
    bool map_scores(const Moments&, Fit&) const;
    void choose_active(const EquationPlan&, const Fit&, EquationFit&) const;
    void solve_linear(std::size_t equation, double n, Fit&) const;
    void accept(std::size_t equation, Fit&) const;
    template <class Factor>
    void add_columns(const RowBlock&, const std::vector<int>& columns, const Eigen::VectorXd& gap_means, Factor factor,
                     double* out) const;
    void form_equation_column(const DesignColumn&, std::ptrdiff_t rows, const Eigen::MatrixXd& scores,
                              double* out) const;

    const Sample& sample_;
    Blueprint plan_;
    std::vector<int> designs_;             // equations with bent terms that are needed
    std::vector<Eigen::VectorXd> shifts_;  // per design: columns, then outcome
    bool direct_ = true;                   // every needed equation is linear
    std::vector<int> direct_columns_;      // sample columns that a direct prediction may use
};

/// Each indicator's training mean.
class TrainingMean final : public Contestant {
public:
    explicit TrainingMean(std::vector<int> target_columns) : target_columns_(std::move(target_columns)) {}
    const std::string& name() const override { return name_; }
    void fit_moments(const Moments&, FitScratch&, Fit&) const override;
    void predict(const Fit&, const RowBlock&, RowScratch&, double* out, std::ptrdiff_t stride) const override;

private:
    std::string name_ = "training mean";
    std::vector<int> target_columns_;
};

/// Ordinary least squares of each target indicator on every predictor indicator (standardised) and level that any
/// theory or control uses.
class LinearBenchmark final : public Contestant {
public:
    LinearBenchmark(const Sample& sample, std::vector<int> target_columns, std::vector<int> predictor_columns);
    const std::string& name() const override { return name_; }
    void fit_moments(const Moments&, FitScratch&, Fit&) const override;
    void predict(const Fit&, const RowBlock&, RowScratch&, double* out, std::ptrdiff_t stride) const override;
    const std::vector<int>& predictors() const { return predictors_; }

private:
    std::string name_ = "linear benchmark";
    const Sample& sample_;
    std::vector<int> target_columns_;
    std::vector<int> predictors_;
};

}  // namespace rivalfold
