#include "rivalfold/theory/blueprint.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <map>
#include <numeric>
#include <set>
#include <stdexcept>

namespace rivalfold {
namespace {

constexpr std::size_t kMostColumns = 500;
constexpr std::size_t kCountedColumns = 1'000'000'000;

/// Text that two constructs share exactly if they are measured alike: the same variables, weighted alike.
std::string measurement_key(const Measurement& measurement) {
    std::vector<int> variables = measurement.variables;
    std::sort(variables.begin(), variables.end());
    std::string key = variables.size() > 1 ? word(measurement.weights) : "single";
    for (const int variable : variables) key += fmt::format(" {}", variable);
    return key;
}

class Builder {
public:
    Builder(const Study& study, const Survey& survey, const Sample& sample, std::size_t theory)
        : study_(study), survey_(survey), sample_(sample), theory_(theory) {}

    Blueprint build() {
        const Theory& theory = study_.theories[theory_];
        plan_.name = theory.name.text;
        plan_.claim = theory.claim;
        plan_.metric = study_.metric;
        plan_.mediators = study_.trial.mediators;
        std::vector<EquationPlan> equations;
        for (const Equation& equation : theory.equations) equations.push_back(build_equation(equation));
        sort_antecedents_first(std::move(equations));
        mark_needed();
        return std::move(plan_);
    }

private:
    /// The blocks of a construct, made on first sight: one, or one per level.
    const std::vector<int>& blocks_of(const std::string& construct) {
        const auto found = blocks_.find(construct);
        if (found != blocks_.end()) return found->second;
        const Measurement* measurement = survey_.measurement(theory_, construct);
        if (!measurement) throw std::logic_error("construct without measurement: " + construct);
        std::vector<int> made;
        if (measurement->category < 0) {
            made.push_back(add({construct, construct, measurement->variables, measurement->weights, -1,
                                measurement_key(*measurement)}));
        } else {
            const Category& category = survey_.categories[static_cast<std::size_t>(measurement->category)];
            const LevelColumns& span = sample_.categories[static_cast<std::size_t>(measurement->category)];
            for (int level = 0; level < span.n_levels; ++level)
                made.push_back(add({fmt::format("{}={}", construct, category.levels[static_cast<std::size_t>(level)]),
                                    construct,
                                    {span.first + level},
                                    Weights::equal,
                                    measurement->category,
                                    fmt::format("level {}", span.first + level)}));
        }
        return blocks_.emplace(construct, std::move(made)).first->second;
    }

    int add(Block block) {
        plan_.blocks.push_back(std::move(block));
        return static_cast<int>(plan_.blocks.size()) - 1;
    }

    EquationPlan build_equation(const Equation& equation) {
        EquationPlan result;
        result.outcome_name = equation.outcome.text;
        result.outcome = blocks_of(equation.outcome.text).front();
        int number = 0;
        for (const Term& term : with_controls(equation)) add_columns(term, number++, result);
        for (const DesignColumn& column : result.columns) {
            if (column.kind != TermKind::score) result.linear = false;
            for (const int block : column.blocks)
                if (std::find(result.predecessors.begin(), result.predecessors.end(), block) ==
                    result.predecessors.end())
                    result.predecessors.push_back(block);
        }
        return result;
    }

    std::vector<Term> with_controls(const Equation& equation) const {
        std::vector<Term> terms = equation.terms;
        if (equation.outcome.text != study_.target.text) return terms;
        for (const Name& control : study_.controls) {
            const bool present = std::any_of(terms.begin(), terms.end(), [&](const Term& term) {
                return term.kind == TermKind::score && term.members.front().text == control.text;
            });
            if (!present) terms.push_back({TermKind::score, {control}, control.place, false});
        }
        return terms;
    }

    /// One column per combination of the members' blocks, the last member's level running fastest.
    void add_columns(const Term& term, int number, EquationPlan& equation) {
        std::size_t count = 1;
        // A product takes any number of names: without the cap 13 categories of 32 levels would come round to 0.
        for (const Name& member : term.members)
            count = std::min(count * blocks_of(member.text).size(), kCountedColumns);
        if (count > kMostColumns)
            throw FaultError(study_.fault_at(
                term.place,
                fmt::format("{} makes {}{} columns, one for each combination of levels; at most {} are possible",
                            describe(term), count == kCountedColumns ? "at least " : "", count, kMostColumns),
                "merge levels, or leave out a category"));
        std::vector<std::vector<int>> combinations(1);
        for (const Name& member : term.members) {
            std::vector<std::vector<int>> longer;
            for (const std::vector<int>& begun : combinations)
                for (const int block : blocks_of(member.text)) {
                    longer.push_back(begun);
                    longer.back().push_back(block);
                }
            combinations = std::move(longer);
        }
        for (std::vector<int>& blocks : combinations) {
            DesignColumn column;
            column.kind = term.kind;
            column.term = number;
            Term labelled = term;
            std::vector<std::string> keys;
            for (std::size_t m = 0; m < blocks.size(); ++m) {
                const Block& block = plan_.blocks[static_cast<std::size_t>(blocks[m])];
                labelled.members[m].text = block.name;
                keys.push_back(block.measurement);
                column.by_level = column.by_level || block.is_level();
            }
            std::sort(keys.begin(), keys.end());
            column.label = describe(labelled);
            column.identity = fmt::format("{}({})", word(term.kind), fmt::join(keys, "; "));
            column.blocks = std::move(blocks);
            equation.columns.push_back(std::move(column));
        }
    }

    void sort_antecedents_first(std::vector<EquationPlan> equations) {
        std::vector<int> position(equations.size(), -1);
        const auto outcome_is = [&](int block) {
            return std::find_if(equations.begin(), equations.end(),
                                [&](const EquationPlan& e) { return e.outcome == block; }) -
                   equations.begin();
        };
        for (std::size_t done = 0; done < equations.size();) {
            const std::size_t before = done;
            for (std::size_t e = 0; e < equations.size(); ++e) {
                if (position[e] >= 0) continue;
                const auto& antecedents = equations[e].predecessors;
                const bool ready = std::all_of(antecedents.begin(), antecedents.end(), [&](int block) {
                    const auto other = static_cast<std::size_t>(outcome_is(block));
                    return other == equations.size() || position[other] >= 0;
                });
                if (ready) position[e] = static_cast<int>(done++);
            }
            if (done == before) throw std::logic_error("equations run in a circle");
        }
        plan_.equations.resize(equations.size());
        plan_.file_order = position;
        for (std::size_t e = 0; e < equations.size(); ++e) {
            if (equations[e].outcome_name == study_.target.text) plan_.target_equation = position[e];
            plan_.equations[static_cast<std::size_t>(position[e])] = std::move(equations[e]);
        }
    }

    void mark_needed() {
        std::vector<int> open{plan_.target_equation};
        while (!open.empty()) {
            EquationPlan& equation = plan_.equations[static_cast<std::size_t>(open.back())];
            open.pop_back();
            if (equation.needed) continue;
            equation.needed = true;
            if (plan_.mediators == Mediators::measured) continue;
            for (const int block : equation.predecessors)
                if (const int other = plan_.equation_of(block); other >= 0) open.push_back(other);
        }
    }

    const Study& study_;
    const Survey& survey_;
    const Sample& sample_;
    std::size_t theory_;
    Blueprint plan_;
    std::map<std::string, std::vector<int>> blocks_;
};

}  // namespace

int Blueprint::equation_of(int block) const {
    for (std::size_t e = 0; e < equations.size(); ++e)
        if (equations[e].outcome == block) return static_cast<int>(e);
    return -1;
}

std::vector<Blueprint> build_blueprints(const Study& study, const Survey& survey, const Sample& sample) {
    std::vector<Blueprint> blueprints;
    for (std::size_t t = 0; t < study.theories.size(); ++t)
        blueprints.push_back(Builder(study, survey, sample, t).build());
    return blueprints;
}

std::vector<int> benchmark_columns(const std::vector<Blueprint>& blueprints, const Survey& survey) {
    std::set<std::string> taken;
    const auto n_variables = static_cast<int>(survey.variables.size());
    for (const int column : blueprints.front().target_columns())
        taken.insert(survey.variables[static_cast<std::size_t>(column)].column);
    std::set<int> levels;
    std::vector<int> result;
    for (const Blueprint& blueprint : blueprints)
        for (const Block& block : blueprint.blocks)
            for (const int column : block.columns) {
                const bool fresh = column >= n_variables
                                       ? levels.insert(column).second
                                       : taken.insert(survey.variables[static_cast<std::size_t>(column)].column).second;
                if (fresh) result.push_back(column);
            }
    return result;
}

}  // namespace rivalfold
