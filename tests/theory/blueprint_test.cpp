#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include "rivalfold/theory/blueprint.hpp"

using namespace rivalfold;
using Texts = std::vector<std::string>;

namespace {

/// Blueprints of theories over planning, skill, supply, sector (three levels) and delivery.
std::vector<Blueprint> blueprints(const std::string& theories, const std::string& settings = "",
                                  const std::string& trial = "") {
    Answers answers = invented_answers(30);
    std::string data = answers.csv();
    data.insert(data.find('\n'), ",sector,hours");
    std::size_t row = 0;
    for (std::size_t at = data.find('\n') + 1; at < data.size(); ++row) {
        const std::string cells = fmt::format(",{},{}",
                                              row % 3 == 0   ? "navy"
                                              : row % 3 == 1 ? "cargo"
                                                             : "ferry",
                                              row * row % 17);
        at = data.find('\n', at);
        data.insert(at, cells);
        at += cells.size() + 1;
    }
    const SmallContest contest = prepare(R"(study: refits
data: {file: refits.csv}
constructs:
  planning: {indicators: ["pln*"]}
  skill: {indicators: ["skl*"]}
  supply: {indicators: ["sup*"]}
  delivery: {indicators: ["dlv*"]}
  hours: {indicators: [hours]}
  sector: {category: sector}
target: delivery
trial: {folds: 5)" + trial + "}\n" + settings +
                                             "theories:\n" + theories,
                                         data);
    return build_blueprints(contest.study, contest.survey, *contest.sample);
}

Texts labels(const EquationPlan& equation) {
    Texts out;
    for (const DesignColumn& column : equation.columns) out.push_back(column.label);
    return out;
}

Texts block_names(const Blueprint& plan) {
    Texts out;
    for (const Block& block : plan.blocks) out.push_back(block.name);
    return out;
}

const std::string kOther = "  - {name: other, equations: {delivery: [planning]}}\n";

}  // namespace

TEST_CASE("crossed becomes each score and every product of two or more", "[theory]") {
    const auto plans =
        blueprints("  - {name: one, equations: {delivery: [{crossed: [planning, skill, supply]}]}}\n" + kOther);
    CHECK(labels(plans[0].target_plan()) == Texts{"planning", "skill", "supply", "planning x skill",
                                                  "planning x supply", "skill x supply", "planning x skill x supply"});
    CHECK_FALSE(plans[0].target_plan().linear);
    CHECK(plans[0].target_plan().predecessors.size() == 3);
    CHECK(plans[1].target_plan().linear);
}

TEST_CASE("controls enter the target's equation of every theory once, behind its own terms", "[theory]") {
    const auto plans =
        blueprints(R"(  - {name: one, equations: {skill: [supply], delivery: [planning, {square: hours}]}}
  - {name: two, equations: {delivery: [planning]}}
)",
                   "controls: [hours, sector]\n");
    CHECK(labels(plans[0].target_plan()) ==
          Texts{"planning", "square(hours)", "hours", "sector=cargo", "sector=ferry", "sector=navy"});
    CHECK(labels(plans[1].target_plan()) == Texts{"planning", "hours", "sector=cargo", "sector=ferry", "sector=navy"});
    const int other = plans[0].file_order[0];
    CHECK(labels(plans[0].equations[static_cast<std::size_t>(other)]) == Texts{"supply"});
}

TEST_CASE("a category is one block per level, sorted, and crosses level by level", "[theory]") {
    const auto plans =
        blueprints("  - {name: one, equations: {delivery: [sector, {product: [planning, sector]}, skill]}}\n" + kOther);
    CHECK(labels(plans[0].target_plan()) == Texts{"sector=cargo", "sector=ferry", "sector=navy",
                                                  "planning x sector=cargo", "planning x sector=ferry",
                                                  "planning x sector=navy", "skill"});
    for (const DesignColumn& column : plans[0].target_plan().columns)
        CHECK(column.by_level == (column.label != "skill"));
    int levels = 0;
    for (const Block& block : plans[0].blocks)
        if (block.is_level()) {
            CHECK(block.construct == "sector");
            CHECK(block.columns.size() == 1);
            CHECK_FALSE(block.iterates());
            ++levels;
        }
    CHECK(levels == 3);
    std::vector<int> terms;
    for (const DesignColumn& column : plans[0].target_plan().columns) terms.push_back(column.term);
    CHECK(terms == std::vector<int>{0, 0, 0, 1, 1, 1, 2});
}

TEST_CASE("equations are kept antecedents first, and remember the order of the file", "[theory]") {
    const auto plans = blueprints(
        "  - {name: one, equations: {delivery: [skill, planning], skill: [supply, planning], planning: [hours], "
        "supply: [hours]}}\n" +
        kOther);
    Texts order, file_order;
    for (const EquationPlan& equation : plans[0].equations) order.push_back(equation.outcome_name);
    for (const int e : plans[0].file_order)
        file_order.push_back(plans[0].equations[static_cast<std::size_t>(e)].outcome_name);
    CHECK(file_order == Texts{"delivery", "skill", "planning", "supply"});
    CHECK(order == Texts{"planning", "supply", "skill", "delivery"});
    CHECK(plans[0].target_equation == 3);
    CHECK(plans[0].equation_of(plans[0].equations[2].outcome) == 2);
    CHECK(plans[0].equation_of(plans[0].equations[0].predecessors.front()) == -1);
}

TEST_CASE("only equations that predict the target are needed: all of a chain only where mediators are predicted",
          "[theory]") {
    const std::string theories =
        "  - {name: one, equations: {delivery: [skill], skill: [supply], hours: [planning]}}\n" + kOther;
    const auto needed = [](const Blueprint& plan) {
        Texts names;
        for (const EquationPlan& equation : plan.equations)
            if (equation.needed) names.push_back(equation.outcome_name);
        return names;
    };
    CHECK(needed(blueprints(theories)[0]) == Texts{"delivery"});
    CHECK(needed(blueprints(theories, "", ", mediators: predicted")[0]) == Texts{"skill", "delivery"});
}

TEST_CASE("terms are the same exactly if kind, members and their measurement agree", "[theory]") {
    const auto plans = blueprints(
        R"(  - {name: one, equations: {delivery: [planning, skill, {product: [planning, skill]}, {minimum: [planning, skill]}]}}
  - {name: two, equations: {delivery: [{product: [skill, planning]}, planning, {maximum: [planning, skill]}]}}
  - name: three
    equations: {delivery: [planning, skill]}
    constructs: {skill: {indicators: [skl2, skl1]}}
  - name: four
    equations: {delivery: [planning, skill]}
    constructs: {skill: {indicators: [skl3, skl1, skl2]}, planning: {indicators: ["pln*"], weights: equal}}
)");
    const auto identity = [&](std::size_t theory, const std::string& label) {
        for (const DesignColumn& column : plans[theory].target_plan().columns)
            if (column.label == label) return column.identity;
        return "no term " + label;
    };
    CHECK(identity(0, "planning x skill") == identity(1, "skill x planning"));
    CHECK(identity(0, "planning") == identity(1, "planning"));
    CHECK(identity(0, "planning") == identity(2, "planning"));
    CHECK(identity(0, "skill") != identity(2, "skill"));        // fewer indicators
    CHECK(identity(0, "skill") == identity(3, "skill"));        // another order only
    CHECK(identity(0, "planning") != identity(3, "planning"));  // other weights
    CHECK(identity(0, "minimum(planning, skill)") != identity(1, "maximum(planning, skill)"));
    CHECK(block_names(plans[2]) == Texts{"delivery", "planning", "skill"});
}

TEST_CASE("the linear benchmark takes every predictor once, never the target's own columns", "[theory]") {
    const SmallContest contest = prepare(R"(study: refits
data: {file: refits.csv}
constructs:
  planning: {indicators: [pln1, pln2]}
  again: {indicators: [pln2, pln3], reversed: [pln2], range: [1, 7]}
  mixed: {indicators: [skl1, pln1]}
  delivery: {indicators: ["dlv*"]}
target: delivery
theories:
  - {name: one, equations: {delivery: [planning]}}
  - {name: two, equations: {delivery: [again, mixed]}}
trial: {folds: 5, repeats: 2}
)",
                                         invented_answers(20).csv());
    Texts names;
    for (const int column :
         benchmark_columns(build_blueprints(contest.study, contest.survey, *contest.sample), contest.survey))
        names.push_back(contest.survey.variables[static_cast<std::size_t>(column)].column);
    CHECK(names == Texts{"pln1", "pln2", "pln3", "skl1"});
}
