// The section constructs, of the study and of each theory.
#include "study/characters.hpp"
#include "study/sections.hpp"
#include "study/values.hpp"

#include <fmt/format.h>
#include <algorithm>
#include <array>
#include <utility>

namespace rivalfold {
namespace {

// Letters compared with letters between indicators and reversed ones; beyond, the data's own columns decide.
constexpr std::size_t kMostWork = 50'000'000;
constexpr std::size_t kMostIndicators = 2000;  // names written for one construct; a glob may stand for more columns

std::optional<std::pair<double, double>> read_range(const Node& node, const std::string& label, FaultList& faults) {
    constexpr std::string_view kExpected = "two numbers, the lower first, e.g. [1, 7]";
    if (node.kind != Node::Kind::list || node.items.size() != 2) {
        const bool list = node.kind == Node::Kind::list;
        faults.add(node.place, fmt::format("{} must be {}, found {}", label, kExpected,
                                           list ? fmt::format("{} of them", node.items.size()) : found(node)));
        return std::nullopt;
    }
    const auto low = read_decimal(node.items[0], "the lower end of " + label, "a number", faults);
    const auto high = read_decimal(node.items[1], "the upper end of " + label, "a number", faults);
    if (!low || !high) return std::nullopt;
    if (*low < *high) return std::pair(*low, *high);
    faults.add(node.place, fmt::format("{} must be {}, found {} before {}", label, kExpected,
                                       in_quotes(node.items[0].text), in_quotes(node.items[1].text)));
    return std::nullopt;
}

void check_category(const Keys& keys, const std::string& called) {
    if (keys.value("indicators") != nullptr)
        keys.faults().add(keys.place("category"),
                          fmt::format("{} has both \"indicators\" and \"category\"; expected one of them", called));
    for (const std::string_view key : {"reversed", "range", "weights"})
        if (keys.value(key) != nullptr)
            keys.faults().add(
                keys.place(key),
                fmt::format("{} is a category, for which \"{}\" means nothing; expected \"category\" alone", called,
                            key));
}

void check_reversed(const Construct& construct, const Keys& keys, const std::string& called) {
    if (!construct.reversed.empty() && keys.value("range") == nullptr)
        keys.faults().add(keys.place("reversed"),
                          fmt::format("{} has \"reversed\" but no \"range\"; expected the range, because a "
                                      "reversed value is low + high - value",
                                      called));
    std::vector<std::string> known;
    for (const Name& indicator : construct.indicators) known.push_back(indicator.text);
    if (known.empty()) return;
    std::size_t work = 0;
    const auto fits = [&](const std::string& indicator, const std::string& reversed) {
        work += indicator.size() * reversed.size();
        return indicator == reversed || work > kMostWork || globs_meet(indicator, reversed);
    };
    for (const Name& reversed : construct.reversed) {
        if (std::none_of(known.begin(), known.end(),
                         [&](const std::string& name) { return fits(name, reversed.text); }))
            keys.faults().add(
                reversed.place,
                fmt::format("{} reverses {}, which is none of its indicators", called, in_quotes(reversed.text)),
                did_you_mean(reversed.text, known));
    }
}

Construct read_construct(const Node& key, const Node& node, const std::string& owner, FaultList& faults) {
    Construct construct;
    construct.name = {key.text, key.place};
    read_name(key, "the name of a construct", "text", faults);
    const std::string called = fmt::format("construct {}{}{}", in_quotes(key.text), owner.empty() ? "" : " of ", owner);
    const Keys keys(node, key.place, called, kConstructKeys, faults);
    if (node.kind != Node::Kind::map) return construct;
    if (const Node* indicators = keys.value("indicators")) {
        construct.indicators = read_names(*indicators, keys.label("indicators"), "column names", faults);
        if (construct.indicators.size() > kMostIndicators) {
            faults.add(indicators->place,
                       fmt::format("{} lists {} names; expected at most {}, with * for many columns",
                                   keys.label("indicators"), construct.indicators.size(), kMostIndicators));
            construct.indicators.clear();
        }
    }
    if (const Node* reversed = keys.value("reversed"))
        construct.reversed = read_names(*reversed, keys.label("reversed"), "column names", faults, 0);
    if (const Node* range = keys.value("range")) {
        construct.range = read_range(*range, keys.label("range"), faults);
        construct.range_place = range->place;
    }
    if (const Node* weights = keys.value("weights")) {
        read_word(*weights, keys.label("weights"),
                  std::array{Weights::mode_a, Weights::mode_b, Weights::equal, Weights::principal}, construct.weights,
                  faults);
        construct.weights_given = true;
    }
    if (const Node* category = keys.value("category")) {
        construct.category = read_name(*category, keys.label("category"), "a column name", faults);
        check_category(keys, called);
        if (keys.value("indicators") != nullptr) construct.category.reset();
    } else if (keys.value("indicators") == nullptr) {
        if (!keys.has_or_meant("indicators") && !keys.has_or_meant("category"))
            faults.add(key.place,
                       fmt::format("{} has neither \"indicators\" nor \"category\"; expected one of them", called));
    } else {
        check_reversed(construct, keys, called);
    }
    return construct;
}

}  // namespace

bool globs_meet(std::string_view a, std::string_view b) {
    const auto fixed = [](char letter) { return letter != '*'; };
    while (!a.empty() && !b.empty() && fixed(a.front()) && fixed(b.front())) {
        if (a.front() != b.front()) return false;
        a.remove_prefix(1);
        b.remove_prefix(1);
    }
    // meets[j]: the rest of a from i on and the rest of b from j on fit a common name; filled from the ends backwards.
    std::vector<char> below(b.size() + 1), meets(b.size() + 1);
    for (std::size_t i = a.size() + 1; i-- > 0;) {
        for (std::size_t j = b.size() + 1; j-- > 0;) {
            const bool a_star = i < a.size() && a[i] == '*';
            const bool b_star = j < b.size() && b[j] == '*';
            char fits = i == a.size() && j == b.size();
            if (a_star) fits = below[j] || (j < b.size() && meets[j + 1]);
            if (b_star && !fits) fits = meets[j + 1] || (i < a.size() && below[j]);
            if (!a_star && !b_star && i < a.size() && j < b.size()) fits = a[i] == b[j] && below[j + 1];
            meets[j] = fits;
        }
        std::swap(below, meets);
    }
    return below[0];
}

std::vector<Construct> read_constructs(const Node& node, const std::string& owner, FaultList& faults) {
    std::vector<Construct> constructs;
    const std::string label = owner.empty() ? "\"constructs\"" : "\"constructs\" of " + owner;
    if (node.kind != Node::Kind::map || node.items.empty()) {
        note_type(node, label, "constructs by name, e.g. skill: {indicators: [skl1, skl2]}", faults);
        return constructs;
    }
    for (std::size_t k = 0; k < node.items.size(); ++k)
        constructs.push_back(read_construct(node.keys[k], node.items[k], owner, faults));
    return constructs;
}

}  // namespace rivalfold
