#include "rivalfold/study/study.hpp"

#include "study/source_text.hpp"

#include <utility>

namespace rivalfold {
namespace {

const Construct* find_construct(const std::vector<Construct>& constructs, std::string_view name) {
    for (const Construct& construct : constructs)
        if (construct.name.text == name) return &construct;
    return nullptr;
}

std::string joined_members(const Term& term, std::string_view link) {
    std::string text;
    for (const Name& member : term.members) {
        if (!text.empty()) text += link;
        text += member.text;
    }
    return text;
}

}  // namespace

const char* word(Weights weights) {
    switch (weights) {
        case Weights::mode_a:
            return "mode_a";
        case Weights::mode_b:
            return "mode_b";
        case Weights::equal:
            return "equal";
        case Weights::principal:
            return "principal";
    }
    return "";
}

const char* word(Metric metric) { return metric == Metric::standard ? "standard" : "response"; }

const char* word(RowRule rule) { return rule == RowRule::drop ? "drop" : "mean"; }

const char* word(Loss loss) { return loss == Loss::squared ? "squared" : "absolute"; }

const char* word(Mediators mediators) { return mediators == Mediators::measured ? "measured" : "predicted"; }

const char* word(TermKind kind) {
    switch (kind) {
        case TermKind::score:
            return "name";
        case TermKind::product:
            return "product";
        case TermKind::minimum:
            return "minimum";
        case TermKind::maximum:
            return "maximum";
        case TermKind::square:
            return "square";
        case TermKind::geometric_mean:
            return "geometric_mean";
    }
    return "";
}

std::string describe(const Term& term) {
    if (term.kind == TermKind::score) return joined_members(term, "");
    if (term.kind == TermKind::product) return joined_members(term, " x ");
    return std::string(word(term.kind)) + "(" + joined_members(term, ", ") + ")";
}

Fault Study::fault_at(Place place, std::string message, std::string hint) const {
    Fault fault{path, place, {}, std::move(message), std::move(hint), {}};
    fault.source_line = line_of(source, place.line);
    return fault;
}

const Construct* Study::construct(std::size_t theory, std::string_view name) const {
    if (theory < theories.size())
        if (const Construct* own = find_construct(theories[theory].constructs, name)) return own;
    return construct(name);
}

const Construct* Study::construct(std::string_view name) const { return find_construct(constructs, name); }

}  // namespace rivalfold
