// One theory with every name resolved to columns of the sample: what to weight, which terms to form, what to regress on
// what. Knows no rows, no folds and no files.
#pragma once

#include "rivalfold/data/survey.hpp"
#include "rivalfold/study/study.hpp"
#include "rivalfold/theory/sample.hpp"

#include <string>
#include <vector>

namespace rivalfold {

/// A score to be formed: a construct's composite, or one level of a category (a 0/1 column as it stands).
struct Block {
    std::string name;          ///< construct, or `sector=navy` for a level
    std::string construct;     ///< construct
    std::vector<int> columns;  ///< sample columns of its indicators, in declared order; one for a level
    Weights weights = Weights::mode_a;
    int category = -1;        ///< index into Sample::categories, or -1
    std::string measurement;  ///< equal for two blocks exactly if they are measured alike

    bool is_level() const { return category >= 0; }
    bool iterates() const { return columns.size() > 1 && (weights == Weights::mode_a || weights == Weights::mode_b); }
};

/// One column of an equation's design. A term with category members gives one column per combination of levels.
struct DesignColumn {
    TermKind kind = TermKind::score;
    std::vector<int> blocks;  ///< indices into Blueprint::blocks
    int term = 0;             ///< which term of the equation it comes from
    std::string label;        ///< `planning`, `planning x skill`, `sector=navy`
    std::string identity;     ///< equal exactly if kind, members and their measurement agree
    bool by_level = false;    ///< some member is a level; dropped in folds where the level is the first or absent
};

struct EquationPlan {
    std::string outcome_name;
    int outcome = 0;  ///< block
    std::vector<DesignColumn> columns;
    std::vector<int> predecessors;  ///< distinct blocks among the columns' members
    bool linear = true;             ///< every column is a plain score
    bool needed = false;            ///< takes part in predicting the target
};

struct Blueprint {
    std::string name;
    std::string claim;
    std::vector<Block> blocks;
    std::vector<EquationPlan> equations;  ///< antecedents first
    std::vector<int> file_order;          ///< equations in the order of the study file
    int target_equation = 0;
    Metric metric = Metric::standard;
    Mediators mediators = Mediators::measured;

    int target_block() const { return equations[static_cast<std::size_t>(target_equation)].outcome; }
    const std::vector<int>& target_columns() const { return blocks[static_cast<std::size_t>(target_block())].columns; }
    const EquationPlan& target_plan() const { return equations[static_cast<std::size_t>(target_equation)]; }
    /// The equation whose outcome is this block, or -1.
    int equation_of(int block) const;
};

/// All theories of a study over one survey. The study's rules were checked on reading; names are known to exist. Throws
/// FaultError for a term of categories that makes more than 500 columns.
std::vector<Blueprint> build_blueprints(const Study& study, const Survey& survey, const Sample& sample);

/// Sample columns that predict in the linear benchmark: every indicator and level that any theory or control uses, in
/// order of first use, each data column once, without the target's own data columns.
std::vector<int> benchmark_columns(const std::vector<Blueprint>& blueprints, const Survey& survey);

}  // namespace rivalfold
