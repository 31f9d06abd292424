// The rules across the sections of a study.
#include "study/characters.hpp"
#include "study/sections.hpp"

#include <algorithm>
#include <fmt/format.h>
#include <unordered_map>
#include <unordered_set>
#include <utility>

namespace rivalfold {
namespace {

using Lookup = std::unordered_map<std::string, const Construct*>;

std::vector<std::string> names_in(const Lookup& lookup, const Study& study) {
    std::vector<std::string> names;
    for (const Construct& construct : study.constructs) names.push_back(construct.name.text);
    for (const auto& [name, construct] : lookup)
        if (std::find(names.begin(), names.end(), name) == names.end()) names.push_back(name);
    return names;
}

// Checks one theory against the study; each fault names the theory.
class TheoryCheck {
public:
    TheoryCheck(const Study& study, Theory& theory, Lookup constructs, FaultList& faults)
        : study_(study), theory_(theory), constructs_(std::move(constructs)), faults_(faults),
          called_("theory " + in_quotes(theory.name.text)) {
        for (const Construct& own : theory.constructs) constructs_[own.name.text] = &own;
        for (const Name& control : study.controls) controls_.insert(control.text);
    }

    void run() {
        for (const Construct& own : theory_.constructs)
            if (is_target(own.name.text))
                faults_.add(own.name.place, fmt::format("{} measures the target {} its own way; expected one measurement of the target "
                                                        "for all theories", called_, in_quotes(own.name.text)));
        for (Equation& equation : theory_.equations) check_equation(equation);
        check_target_equation();
        check_cycles();
    }

private:
    bool is_target(const std::string& name) const { return !name.empty() && name == study_.target.text; }

    const Construct* known(const Name& name, std::string_view use) {
        if (constructs_.empty()) return nullptr;  // a fault of the section constructs is noted already
        const auto at = constructs_.find(name.text);
        if (at != constructs_.end()) return at->second;
        if (!faults_.full())
            faults_.add(name.place, fmt::format("{} {} {}, which nothing defines", called_, use, in_quotes(name.text)),
                        did_you_mean(name.text, names_in(constructs_, study_)));
        return nullptr;
    }

    void check_equation(Equation& equation) {
        const Construct* outcome = known(equation.outcome, "explains the construct");
        if (outcome && outcome->category)
            faults_.add(equation.outcome.place, fmt::format("{} explains the category {}; expected an outcome with indicators", called_,
                                                            in_quotes(equation.outcome.text)));
        if (is_target(equation.outcome.text)) leave_controls_out(equation);
        for (const Term& term : equation.terms) check_term(term, equation.outcome);
    }

    // The controls stand in the target's equation already.
    void leave_controls_out(Equation& equation) {
        const auto is_control = [&](const Term& term) { return term.kind == TermKind::score && controls_.contains(term.members[0].text); };
        for (const Term& term : equation.terms)
            if (is_control(term) && !term.from_crossed)
                faults_.add(term.place, fmt::format("{} has the control {} as a term of the target's equation, where every control "
                                                    "stands already; expected it left out", called_, in_quotes(term.members[0].text)));
        const bool had_terms = !equation.terms.empty();
        std::erase_if(equation.terms, is_control);
        if (had_terms && equation.terms.empty())
            faults_.add(equation.outcome.place, fmt::format("{} explains the target {} by controls alone; expected a term of its own",
                                                            called_, in_quotes(equation.outcome.text)));
    }

    void check_term(const Term& term, const Name& outcome) {
        for (const Name& member : term.members) {
            if (member.text == outcome.text) {
                faults_.add(member.place, fmt::format("{} explains {} by itself; expected other constructs", called_, in_quotes(outcome.text)));
                continue;
            }
            if (is_target(member.text)) {
                faults_.add(member.place, fmt::format("{} explains {} by the target {}; expected the target as an outcome only", called_,
                                                      in_quotes(outcome.text), in_quotes(member.text)));
                continue;
            }
            const Construct* construct = known(member, "uses the construct");
            const bool takes_category = term.kind == TermKind::score || term.kind == TermKind::product;
            if (construct && construct->category && !takes_category)
                faults_.add(member.place, fmt::format("{} has the category {} in {}; expected a category to stand alone, in product or in "
                                                      "crossed", called_, in_quotes(member.text), word(term.kind)));
        }
        if (term.kind == TermKind::geometric_mean && study_.metric != Metric::response)
            faults_.add(term.place, fmt::format("{} has {}, which needs \"metric: response\", found \"metric: {}\"", called_,
                                                in_quotes(describe(term)), word(study_.metric)));
    }

    void check_target_equation() {
        if (study_.target.text.empty() || theory_.equations.empty()) return;
        for (const Equation& equation : theory_.equations)
            if (is_target(equation.outcome.text)) return;
        faults_.add(theory_.name.place, fmt::format("{} has no equation for the target {}; expected one", called_, in_quotes(study_.target.text)));
    }

    void check_cycles();

    const Study& study_;
    Theory& theory_;
    Lookup constructs_;
    std::unordered_set<std::string> controls_;
    FaultList& faults_;
    std::string called_;
};

// Strikes out every outcome whose antecedents are all struck out or have no equation; what is left holds the cycles.
void TheoryCheck::check_cycles() {
    std::unordered_map<std::string, std::size_t> position;
    for (std::size_t k = 0; k < theory_.equations.size(); ++k) position.emplace(theory_.equations[k].outcome.text, k);
    const std::size_t n = theory_.equations.size();
    std::vector<std::vector<std::size_t>> causes(n), effects(n);
    for (std::size_t k = 0; k < n; ++k) {
        std::unordered_set<std::size_t> distinct;
        const auto add = [&](const std::string& name) {
            const auto at = position.find(name);
            if (at == position.end() || at->second == k || is_target(name)) return;  // the last two are noted already
            if (distinct.insert(at->second).second) causes[k].push_back(at->second);
        };
        for (const Term& term : theory_.equations[k].terms)
            for (const Name& member : term.members) add(member.text);
        if (is_target(theory_.equations[k].outcome.text))
            for (const Name& control : study_.controls) add(control.text);
        for (const std::size_t cause : causes[k]) effects[cause].push_back(k);
    }
    std::vector<std::size_t> n_open(n), ready;
    for (std::size_t k = 0; k < n; ++k)
        if ((n_open[k] = causes[k].size()) == 0) ready.push_back(k);
    while (!ready.empty()) {
        const std::size_t done = ready.back();
        ready.pop_back();
        for (const std::size_t effect : effects[done])
            if (--n_open[effect] == 0) ready.push_back(effect);
    }
    const auto left = std::find_if(n_open.begin(), n_open.end(), [](std::size_t open) { return open > 0; });
    if (left == n_open.end()) return;
    // From any outcome left, going from cause to cause within what is left must come round.
    std::vector<std::size_t> path = {static_cast<std::size_t>(left - n_open.begin())};
    std::vector<std::size_t> visited_at(n, n);
    while (visited_at[path.back()] == n) {
        visited_at[path.back()] = path.size() - 1;
        const auto& from = causes[path.back()];
        path.push_back(*std::find_if(from.begin(), from.end(), [&](std::size_t cause) { return n_open[cause] > 0; }));
    }
    const auto begin = path.begin() + static_cast<std::ptrdiff_t>(visited_at[path.back()]);
    std::vector<std::size_t> cycle(begin, path.end() - 1);
    std::reverse(cycle.begin(), cycle.end());
    std::rotate(cycle.begin(), std::min_element(cycle.begin(), cycle.end()), cycle.end());
    constexpr std::size_t kMostShown = 12;
    std::string text;
    for (std::size_t k = 0; k < std::min(cycle.size(), kMostShown); ++k) text += theory_.equations[cycle[k]].outcome.text + " -> ";
    if (cycle.size() > kMostShown) text += "... -> ";
    const Name& first = theory_.equations[cycle.front()].outcome;
    faults_.add(first.place, fmt::format("{} explains {} in a circle: {}{}; expected no cycles", called_, in_quotes(first.text), text, first.text));
}

void check_target(const Study& study, const Lookup& constructs, FaultList& faults) {
    if (study.target.text.empty() || constructs.empty()) return;
    const auto at = constructs.find(study.target.text);
    if (at == constructs.end()) {
        faults.add(study.target.place, fmt::format("the target {} is no construct of the study; expected one of its constructs",
                                                   in_quotes(study.target.text)),
                   did_you_mean(study.target.text, names_in({}, study)));
    } else if (at->second->category) {
        faults.add(study.target.place, fmt::format("the target {} is a category; expected a construct with indicators",
                                                   in_quotes(study.target.text)));
    }
}

void check_controls(const Study& study, const Lookup& constructs, FaultList& faults) {
    for (const Name& control : study.controls) {
        if (control.text == study.target.text) {
            faults.add(control.place, fmt::format("the control {} is the target; expected another construct", in_quotes(control.text)));
        } else if (!constructs.empty() && !constructs.contains(control.text)) {
            faults.add(control.place, fmt::format("the control {} is no construct of the study; expected one of its constructs",
                                                  in_quotes(control.text)),
                       did_you_mean(control.text, names_in({}, study)));
        }
    }
}

void check_theory_names(const Study& study, FaultList& faults) {
    std::unordered_map<std::string, Place> seen;
    for (const Theory& theory : study.theories) {
        const Name& name = theory.name;
        if (name.text.empty()) continue;
        const auto [first, is_new] = seen.emplace(name.text, name.place);
        if (!is_new)
            faults.add(name.place, fmt::format("two theories have the name {}, the first in line {}; expected a name of its own",
                                               in_quotes(name.text), first->second.line));
        if (name.text == "training mean" || name.text == "linear benchmark")
            faults.add(name.place, fmt::format("the theory {} has the name of a benchmark of every contest; expected another name",
                                               in_quotes(name.text)));
    }
}

}  // namespace

void check_study(Study& study, FaultList& faults) {
    Lookup constructs;
    for (const Construct& construct : study.constructs) constructs.emplace(construct.name.text, &construct);
    check_target(study, constructs, faults);
    check_controls(study, constructs, faults);
    check_theory_names(study, faults);
    for (Theory& theory : study.theories) TheoryCheck(study, theory, constructs, faults).run();
}

}  // namespace rivalfold
