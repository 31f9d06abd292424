// The section theories and the terms of their equations.
#include "study/characters.hpp"
#include "study/sections.hpp"
#include "study/values.hpp"

#include <fmt/format.h>
#include <algorithm>
#include <bit>
#include <unordered_map>
#include <utility>

namespace rivalfold {
namespace {

constexpr std::size_t kMostCrossed = 8;     // members: 255 terms
constexpr std::size_t kMostTerms = 10'000;  // of a whole study

std::vector<std::string> term_words() {
    std::vector<std::string> words;
    for (const Key& key : kTermKeys) words.emplace_back(key.name);
    return words;
}

// Each score, then the products of two, of three ... members, in the order of the list.
std::vector<Term> expand_crossed(const std::vector<Name>& members, Place place) {
    std::vector<Term> terms;
    const unsigned n_subsets = 1U << members.size();
    std::vector<std::vector<std::size_t>> subsets;
    for (unsigned bits = 1; bits < n_subsets; ++bits) {
        subsets.emplace_back();
        for (std::size_t k = 0; k < members.size(); ++k)
            if ((bits >> k) & 1U) subsets.back().push_back(k);
    }
    std::sort(subsets.begin(), subsets.end(),
              [](const auto& a, const auto& b) { return a.size() != b.size() ? a.size() < b.size() : a < b; });
    for (const auto& subset : subsets) {
        Term term{subset.size() == 1 ? TermKind::score : TermKind::product, {}, place, true};
        for (const std::size_t k : subset) term.members.push_back(members[k]);
        terms.push_back(std::move(term));
    }
    return terms;
}

// Gathers the terms of one equation and keeps each once.
class TermList {
public:
    TermList(const std::string& owner, std::size_t& budget, FaultList& faults)
        : owner_(owner), budget_(budget), faults_(faults) {}

    void add_written(Term term) {
        const std::string key = term_key(term);
        if (!note_if_repeated(key, describe(term), term.place)) return;
        if (const auto at = positions_.find(key); at != positions_.end()) {
            terms_[at->second] = std::move(term);  // it is more than a piece of a crossed term
        } else {
            append(key, std::move(term));
        }
    }

    void add_crossed(const std::vector<Name>& members, Place place) {
        Term whole{TermKind::product, members, place, true};
        if (!note_if_repeated("crossed " + term_key(whole), "crossed(" + names(members) + ")", place)) return;
        for (Term& piece : expand_crossed(members, place)) {
            const std::string key = term_key(piece);
            if (!positions_.contains(key)) append(key, std::move(piece));
        }
    }

    std::vector<Term> take() { return std::move(terms_); }

private:
    static std::string names(const std::vector<Name>& members) {
        std::string text;
        for (const Name& member : members) text += (text.empty() ? "" : ", ") + member.text;
        return text;
    }

    // Notes a term that is written for the second time and then returns false.
    bool note_if_repeated(const std::string& key, const std::string& text, Place place) {
        const auto [first, is_new] = written_.emplace(key, place);
        if (!is_new)
            faults_.add(place, fmt::format("{} has the term {} twice, first in line {}; expected it once", owner_,
                                           in_quotes(text), first->second.line));
        return is_new;
    }

    void append(const std::string& key, Term term) {
        if (budget_ == 0) {
            if (!std::exchange(told_, true))
                faults_.add(term.place,
                            fmt::format("{} takes the study above {} terms; expected fewer", owner_, kMostTerms));
            return;
        }
        --budget_;
        positions_.emplace(key, terms_.size());
        terms_.push_back(std::move(term));
    }

    const std::string& owner_;
    std::size_t& budget_;
    FaultList& faults_;
    std::vector<Term> terms_;
    std::unordered_map<std::string, std::size_t> positions_;  // of every term kept
    std::unordered_map<std::string, Place> written_;          // terms as the user wrote them
    bool told_ = false;
};

void read_crossed(const Node& node, const std::string& label, Place place, TermList& terms, FaultList& faults) {
    const std::vector<Name> members = read_names(node, label, "construct names", faults);
    if (members.size() > kMostCrossed) {
        faults.add(node.place, fmt::format("{} has {} members; expected at most {}, which are 255 terms", label,
                                           members.size(), kMostCrossed));
    } else if (!members.empty()) {
        terms.add_crossed(members, place);
    }
}

// One term written with a word, e.g. {minimum: [a, b]}.
void read_worded_term(const Node& node, const std::string& owner, TermList& terms, FaultList& faults) {
    if (node.keys.size() != 1) {
        faults.add(node.place, fmt::format("a term of {} must have one key ({}), found {}", owner,
                                           joined(term_words(), "or"), node.keys.size()));
        return;
    }
    const Node& key = node.keys.front();
    const Node& value = node.items.front();
    const std::string label = fmt::format("{} in {}", in_quotes(key.text), owner);
    const std::vector<std::string> words = term_words();
    if (std::find(words.begin(), words.end(), key.text) == words.end()) {
        faults.add(key.place,
                   fmt::format("{} has a term {}; expected {}", owner, in_quotes(key.text), joined(words, "or")),
                   did_you_mean(key.text, words));
    } else if (key.text == "crossed") {
        read_crossed(value, label, key.place, terms, faults);
    } else if (key.text == "square") {
        if (const auto name = read_name(value, label, "one construct name", faults))
            terms.add_written({TermKind::square, {*name}, key.place, false});
    } else {
        constexpr std::array kListed = {TermKind::product, TermKind::minimum, TermKind::maximum,
                                        TermKind::geometric_mean};
        const auto kind =
            std::find_if(kListed.begin(), kListed.end(), [&](TermKind listed) { return key.text == word(listed); });
        std::vector<Name> members = read_names(value, label, "construct names", faults, 2);
        if (members.size() >= 2) terms.add_written({*kind, std::move(members), key.place, false});
    }
}

std::vector<Equation> read_equations(const Node& node, const std::string& theory, std::size_t& budget,
                                     FaultList& faults) {
    std::vector<Equation> equations;
    if (node.kind != Node::Kind::map || node.items.empty()) {
        note_type(node, "\"equations\" of " + theory, "outcomes with their terms, e.g. delivery: [planning, skill]",
                  faults);
        return equations;
    }
    for (std::size_t k = 0; k < node.items.size(); ++k) {
        const auto outcome = read_name(node.keys[k], "an outcome of " + theory, "a construct name", faults);
        if (!outcome) continue;
        const std::string owner = fmt::format("the equation of {} in {}", in_quotes(outcome->text), theory);
        equations.push_back({*outcome, read_terms(node.items[k], owner, budget, faults)});
    }
    return equations;
}

Theory read_theory(const Node& node, std::size_t number, std::size_t& budget, FaultList& faults) {
    Theory theory;
    theory.name.place = node.place;
    std::string called = fmt::format("theory number {}", number);
    for (std::size_t k = 0; k < node.keys.size(); ++k)
        if (node.keys[k].text == "name" && node.items[k].kind == Node::Kind::text && !node.items[k].text.empty())
            called = "theory " + in_quotes(node.items[k].text);
    const Keys keys(node, node.place, called, kTheoryKeys, faults);
    if (const Node* name = keys.value("name"))
        theory.name = read_name(*name, keys.label("name"), "a name", faults).value_or(theory.name);
    if (const Node* claim = keys.value("claim"))
        theory.claim = read_prose(*claim, keys.label("claim"), "a sentence", faults).value_or("");
    if (const Node* equations = keys.value("equations"))
        theory.equations = read_equations(*equations, called, budget, faults);
    if (const Node* constructs = keys.value("constructs"))
        theory.constructs = read_constructs(*constructs, called, faults);
    return theory;
}

}  // namespace

std::string term_key(const Term& term) {
    std::vector<std::string> members;
    for (const Name& member : term.members) members.push_back(member.text);
    std::sort(members.begin(), members.end());
    std::string key = word(term.kind);
    for (const std::string& member : members) key += fmt::format(" {}:{}", member.size(), member);
    return key;
}

std::vector<Term> read_terms(const Node& node, const std::string& owner, std::size_t& budget, FaultList& faults) {
    if (node.kind != Node::Kind::list || node.items.empty()) {
        note_type(node, owner, "a list of one or more terms", faults,
                  node.kind == Node::Kind::text ? fmt::format("write [{}]", node.text) : "");
        return {};
    }
    TermList terms(owner, budget, faults);
    for (const Node& item : node.items) {
        if (item.kind == Node::Kind::map) {
            read_worded_term(item, owner, terms, faults);
        } else if (const auto name = read_name(item, "a term of " + owner,
                                               "a construct name or a term such as {product: [a, b]}", faults)) {
            terms.add_written({TermKind::score, {*name}, name->place, false});
        }
    }
    return terms.take();
}

std::vector<Theory> read_theories(const Node& node, FaultList& faults) {
    std::vector<Theory> theories;
    if (node.kind != Node::Kind::list) {
        note_type(node, "\"theories\"", "a list of two or more theories, each beginning with - name:", faults);
        return theories;
    }
    if (node.items.size() < 2)
        faults.add(node.place,
                   fmt::format("\"theories\" must be a list of two or more theories, found {}; a contest needs a rival",
                               node.items.size()));
    std::size_t budget = kMostTerms;
    for (const Node& item : node.items) theories.push_back(read_theory(item, theories.size() + 1, budget, faults));
    return theories;
}

}  // namespace rivalfold
