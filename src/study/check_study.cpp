// The rules across the sections of a study.
#include "study/characters.hpp"
#include "study/find_cycle.hpp"
#include "study/sections.hpp"

#include <fmt/format.h>
#include <algorithm>
#include <unordered_map>
#include <unordered_set>
#include <utility>

namespace rivalfold {
namespace {

using Lookup = std::unordered_map<std::string, const Construct*>;

// What every theory is checked against.
struct Shared {
    const Study& study;
    Lookup constructs;
    std::unordered_set<std::string> controls;
    std::vector<std::string> names;  // of the constructs, in file order
    FaultList& faults;
    bool target_known = false;
};

// Checks one theory against the study; each fault names the theory.
class TheoryCheck {
public:
    TheoryCheck(const Shared& shared, Theory& theory)
        : shared_(shared),
          study_(shared.study),
          faults_(shared.faults),
          theory_(theory),
          called_("theory " + in_quotes(theory.name.text)) {
        for (const Construct& own : theory.constructs) own_.emplace(own.name.text, &own);
    }

    void run() {
        for (const Construct& own : theory_.constructs)
            if (is_target(own.name.text))
                faults_.add(own.name.place,
                            fmt::format("{} measures the target {} its own way; expected one measurement of the target "
                                        "for all theories",
                                        called_, in_quotes(own.name.text)));
        for (Equation& equation : theory_.equations) check_equation(equation);
        check_target_equation();
        check_cycles();
    }

private:
    bool is_target(const std::string& name) const { return !name.empty() && name == study_.target.text; }

    const Construct* known(const Name& name, std::string_view use) {
        if (const auto at = own_.find(name.text); at != own_.end()) return at->second;
        if (const auto at = shared_.constructs.find(name.text); at != shared_.constructs.end()) return at->second;
        if (shared_.constructs.empty() || faults_.full())
            return nullptr;  // a broken section constructs is noted already
        std::vector<std::string> names = shared_.names;
        for (const Construct& own : theory_.constructs) names.push_back(own.name.text);
        faults_.add(name.place, fmt::format("{} {} {}, which nothing defines", called_, use, in_quotes(name.text)),
                    did_you_mean(name.text, names));
        return nullptr;
    }

    void check_equation(Equation& equation) {
        const Construct* outcome = known(equation.outcome, "explains the construct");
        if (outcome && outcome->category)
            faults_.add(equation.outcome.place,
                        fmt::format("{} explains the category {}; expected an outcome with indicators", called_,
                                    in_quotes(equation.outcome.text)));
        if (is_target(equation.outcome.text)) leave_controls_out(equation);
        for (const Term& term : equation.terms) check_term(term, equation.outcome);
    }

    // The controls stand in the target's equation already.
    void leave_controls_out(Equation& equation) {
        const auto is_control = [&](const Term& term) {
            return term.kind == TermKind::score && shared_.controls.contains(term.members[0].text);
        };
        bool written = equation.terms.empty();
        for (const Term& term : equation.terms) {
            if (!is_control(term) || term.from_crossed) continue;
            written = true;
            faults_.add(term.place,
                        fmt::format("{} has the control {} as a term of the target's equation, where every control "
                                    "stands already; expected it left out",
                                    called_, in_quotes(term.members[0].text)));
        }
        std::erase_if(equation.terms, is_control);
        if (!written && equation.terms.empty())
            faults_.add(equation.outcome.place,
                        fmt::format("{} explains the target {} by controls alone; expected a term of its own", called_,
                                    in_quotes(equation.outcome.text)));
    }

    void check_term(const Term& term, const Name& outcome) {
        for (const Name& member : term.members) {
            if (member.text == outcome.text) {
                faults_.add(member.place, fmt::format("{} explains {} by itself; expected other constructs", called_,
                                                      in_quotes(outcome.text)));
                continue;
            }
            if (is_target(member.text)) {
                faults_.add(member.place,
                            fmt::format("{} explains {} by the target {}; expected the target as an outcome only",
                                        called_, in_quotes(outcome.text), in_quotes(member.text)));
                continue;
            }
            const Construct* construct = known(member, "uses the construct");
            const bool takes_category = term.kind == TermKind::score || term.kind == TermKind::product;
            if (construct && construct->category && !takes_category)
                faults_.add(
                    member.place,
                    fmt::format("{} has the category {} in {}; expected a category to stand alone, in product or in "
                                "crossed",
                                called_, in_quotes(member.text), word(term.kind)));
        }
        if (term.kind == TermKind::geometric_mean && study_.metric != Metric::response)
            faults_.add(term.place, fmt::format("{} has {}, which needs \"metric: response\", found \"metric: {}\"",
                                                called_, in_quotes(describe(term)), word(study_.metric)));
    }

    void check_target_equation() {
        if (!shared_.target_known || theory_.equations.empty()) return;
        for (const Equation& equation : theory_.equations)
            if (is_target(equation.outcome.text)) return;
        faults_.add(theory_.name.place, fmt::format("{} has no equation for the target {}; expected one", called_,
                                                    in_quotes(study_.target.text)));
    }

    void check_cycles();

    const Shared& shared_;
    const Study& study_;
    FaultList& faults_;
    Theory& theory_;
    Lookup own_;
    std::string called_;
};

void TheoryCheck::check_cycles() {
    const std::vector<Equation>& equations = theory_.equations;
    std::unordered_map<std::string, std::size_t> position;
    for (std::size_t k = 0; k < equations.size(); ++k) position.emplace(equations[k].outcome.text, k);
    std::vector<std::vector<std::size_t>> causes(equations.size());
    for (std::size_t k = 0; k < equations.size(); ++k) {
        std::unordered_set<std::size_t> distinct;
        const auto add = [&](const std::string& name) {
            const auto at = position.find(name);
            if (at == position.end() || at->second == k || is_target(name)) return;  // the last two are noted already
            if (distinct.insert(at->second).second) causes[k].push_back(at->second);
        };
        for (const Term& term : equations[k].terms)
            for (const Name& member : term.members) add(member.text);
        if (is_target(equations[k].outcome.text))
            for (const Name& control : study_.controls) add(control.text);
    }
    const std::vector<std::size_t> cycle = find_cycle(causes);
    if (cycle.empty()) return;
    constexpr std::size_t kMostShown = 12;
    std::string text;
    for (std::size_t k = 0; k < std::min(cycle.size(), kMostShown); ++k)
        text += equations[cycle[k]].outcome.text + " -> ";
    if (cycle.size() > kMostShown) text += "... -> ";
    const Name& first = equations[cycle.front()].outcome;
    faults_.add(first.place, fmt::format("{} explains {} in a circle, {}{}; expected no cycles", called_,
                                         in_quotes(first.text), text, first.text));
}

void check_target(Shared& shared) {
    const Name& target = shared.study.target;
    if (target.text.empty() || shared.constructs.empty()) return;
    const auto at = shared.constructs.find(target.text);
    if (at == shared.constructs.end()) {
        shared.faults.add(target.place,
                          fmt::format("the target {} is no construct of the study; expected one of its constructs",
                                      in_quotes(target.text)),
                          did_you_mean(target.text, shared.names));
    } else if (at->second->category) {
        shared.faults.add(target.place, fmt::format("the target {} is a category; expected a construct with indicators",
                                                    in_quotes(target.text)));
    } else {
        shared.target_known = true;
    }
}

void check_controls(const Shared& shared) {
    for (const Name& control : shared.study.controls) {
        if (control.text == shared.study.target.text) {
            shared.faults.add(control.place, fmt::format("the control {} is the target; expected another construct",
                                                         in_quotes(control.text)));
        } else if (!shared.constructs.empty() && !shared.constructs.contains(control.text)) {
            shared.faults.add(control.place,
                              fmt::format("the control {} is no construct of the study; expected one of its "
                                          "constructs",
                                          in_quotes(control.text)),
                              did_you_mean(control.text, shared.names));
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
            faults.add(name.place,
                       fmt::format("two theories have the name {}, the first in line {}; expected a name of its own",
                                   in_quotes(name.text), first->second.line));
        if (name.text == "training mean" || name.text == "linear benchmark" || name.text == "flexible benchmark")
            faults.add(name.place,
                       fmt::format("the theory {} has the name of a benchmark of every contest; expected another name",
                                   in_quotes(name.text)));
    }
}

}  // namespace

void check_study(Study& study, FaultList& faults) {
    Shared shared{study, {}, {}, {}, faults, false};
    for (const Construct& construct : study.constructs) {
        shared.constructs.emplace(construct.name.text, &construct);
        shared.names.push_back(construct.name.text);
    }
    for (const Name& control : study.controls) shared.controls.insert(control.text);
    check_target(shared);
    check_controls(shared);
    check_theory_names(study, faults);
    for (Theory& theory : study.theories) TheoryCheck(shared, theory).run();
}

}  // namespace rivalfold
