#include "study/values.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>
#include <algorithm>
#include <charconv>
#include <cmath>
#include <limits>
#include <unordered_map>
#include <utility>

namespace rivalfold {
namespace {

std::vector<std::string> names_of(std::span<const Key> keys) {
    std::vector<std::string> names;
    for (const Key& key : keys) names.emplace_back(key.name);
    return names;
}

struct Group {
    std::span<const Key> keys;
    std::string_view owner;
};

// Where a key that stands in the wrong place belongs; empty if nowhere or in several places.
std::string belongs_under(std::string_view name) {
    const Group groups[] = {{kStudyKeys, "the study itself"},
                            {kDataKeys, "\"data\""},
                            {kConstructKeys, "a construct"},
                            {kTheoryKeys, "a theory"},
                            {kTrialKeys, "\"trial\""},
                            {kVerdictKeys, "\"verdict\""},
                            {kSegmentKeys, "\"segment\" of \"data\""}};
    std::string_view owner;
    for (const Group& group : groups) {
        const bool has =
            std::any_of(group.keys.begin(), group.keys.end(), [&](const Key& key) { return key.name == name; });
        if (has && !owner.empty()) return {};
        if (has) owner = group.owner;
    }
    return owner.empty() ? std::string() : fmt::format("{} belongs to {}", in_quotes(name), owner);
}

bool is_digit(char letter) { return letter >= '0' && letter <= '9'; }

std::string_view without_sign(std::string_view text) {
    return text.starts_with('+') || text.starts_with('-') ? text.substr(1) : text;
}

// The decimal form of YAML 1.2's core schema (section 10.3.2): digits, a point, an exponent; no inf, nan, hex or
// blanks.
bool is_decimal(std::string_view text) {
    text = without_sign(text);
    std::size_t n_digits = 0;
    const auto skip_digits = [&] {
        const std::size_t before = text.size();
        while (!text.empty() && is_digit(text.front())) text.remove_prefix(1);
        return before - text.size();
    };
    n_digits += skip_digits();
    if (text.starts_with('.')) {
        text.remove_prefix(1);
        n_digits += skip_digits();
    }
    if (n_digits == 0) return false;
    if (text.starts_with('e') || text.starts_with('E')) {
        text = without_sign(text.substr(1));
        if (skip_digits() == 0) return false;
    }
    return text.empty();
}

// What is meant by a number that is written in a way YAML's plain numbers are not.
std::string number_hint(const Node& node) {
    if (node.kind != Node::Kind::text) return {};
    if (node.quoted && is_decimal(node.text)) return "leave out the quotes";
    if (without_sign(node.text).starts_with("0x") || without_sign(node.text).starts_with("0o"))
        return "write it in decimal digits";
    std::string with_point = node.text;
    std::replace(with_point.begin(), with_point.end(), ',', '.');
    if (with_point != node.text && is_decimal(with_point))
        return fmt::format("write {} with a decimal point", with_point);
    std::string bare = node.text;
    std::erase(bare, '_');
    if (bare != node.text && is_decimal(bare)) return "write it without underscores";
    return {};
}

bool has_control(std::string_view text) {
    const auto all = characters(text);
    return std::any_of(all.begin(), all.end(), [](const Character& c) { return !c.valid || is_control(c.code); });
}

std::string null_hint(const Node& node) {
    const bool written = node.kind == Node::Kind::nothing && !node.text.empty();
    return written ? fmt::format("in quotes it would be text: {}", in_quotes(node.text)) : std::string();
}

std::string colon_hint(const Node& node) {
    const std::size_t colon = node.text.find(':');
    if (node.kind != Node::Kind::text || node.quoted || colon == std::string::npos) return {};
    return "a colon after a key needs a space after it";
}

}  // namespace

std::string found(const Node& node) {
    switch (node.kind) {
        case Node::Kind::nothing:
            return node.text.empty() ? "nothing" : in_quotes(node.text) + ", which means nothing in YAML";
        case Node::Kind::text:
            return node.quoted ? "the quoted text " + in_quotes(node.text) : in_quotes(node.text);
        case Node::Kind::list:
            return node.items.empty() ? "an empty list" : "a list";
        case Node::Kind::map:
            return node.items.empty() ? "no keys" : "keys with values";
    }
    return "nothing";
}

void note_type(const Node& node, const std::string& label, std::string_view expected, FaultList& faults,
               std::string hint) {
    faults.add(node.place, fmt::format("{} must be {}, found {}", label, expected, found(node)), std::move(hint));
}

Keys::Keys(const Node& map, Place place, std::string owner, std::span<const Key> known, FaultList& faults)
    : map_(map), place_(place), owner_(std::move(owner)), faults_(faults) {
    const std::string called = owner_.empty() ? "a study" : owner_;
    if (map.kind != Node::Kind::map) {
        note_type(map, called, fmt::format("keys with values (keys: {})", joined(names_of(known), "and")), faults,
                  colon_hint(map));
        return;
    }
    for (const Node& key : map.keys) note_unknown(key, known);
    for (const Key& key : known)
        if (!key.needed.empty() && !has_or_meant(key.name))
            faults.add(place_, fmt::format("{} needs the key \"{}\": expected {}", called, key.name, key.needed));
}

void Keys::note_unknown(const Node& key, std::span<const Key> known) {
    const std::vector<std::string> names = names_of(known);
    if (std::find(names.begin(), names.end(), key.text) != names.end()) return;
    std::string hint = belongs_under(key.text);
    if (hint.empty()) {
        hint = did_you_mean(key.text, names);
        meant_.push_back(nearest_name(key.text, names));
    }
    faults_.add(key.place,
                fmt::format("{} has no key {}; expected {}", owner_.empty() ? "a study" : owner_, in_quotes(key.text),
                            joined(names, "or")),
                std::move(hint));
}

bool Keys::has_or_meant(std::string_view key) const {
    return value(key) != nullptr || std::find(meant_.begin(), meant_.end(), key) != meant_.end();
}

const Node* Keys::value(std::string_view key) const {
    for (std::size_t k = 0; k < map_.keys.size(); ++k)
        if (map_.keys[k].text == key) return &map_.items[k];
    return nullptr;
}

Place Keys::place(std::string_view key) const {
    for (const Node& node : map_.keys)
        if (node.text == key) return node.place;
    return place_;
}

std::string Keys::label(std::string_view key) const {
    return owner_.empty() ? fmt::format("\"{}\"", key) : fmt::format("\"{}\" of {}", key, owner_);
}

std::optional<std::string> read_prose(const Node& node, const std::string& label, std::string_view expected,
                                      FaultList& faults) {
    std::string prose;
    for (const char letter : node.text) {
        const bool blank = letter == ' ' || letter == '\n' || letter == '\t';
        if (!blank) prose += letter;
        if (blank && !prose.empty() && prose.back() != ' ') prose += ' ';
    }
    if (!prose.empty() && prose.back() == ' ') prose.pop_back();
    if (!prose.empty()) return prose;
    note_type(node, label, expected, faults);
    return std::nullopt;
}

std::optional<Name> read_name(const Node& node, const std::string& label, std::string_view expected,
                              FaultList& faults) {
    if (node.kind != Node::Kind::text || node.text.empty()) {
        note_type(node, label, expected, faults, null_hint(node));
        return std::nullopt;
    }
    if (has_control(node.text)) {
        faults.add(node.place,
                   fmt::format("{} must be {} without control characters, found {}", label, expected, found(node)));
        return std::nullopt;
    }
    return Name{node.text, node.place};
}

std::vector<Name> read_names(const Node& node, const std::string& label, std::string_view expected, FaultList& faults,
                             std::size_t least) {
    std::vector<Name> names;
    if (node.kind != Node::Kind::list || node.items.size() < least) {
        const std::string hint =
            node.kind == Node::Kind::text ? fmt::format("write [{}]", in_quotes(node.text)) : std::string();
        const std::string_view many = least == 0 ? "" : least == 1 ? "one or more " : "two or more ";
        const bool one = node.kind == Node::Kind::list && node.items.size() == 1;
        faults.add(node.place,
                   fmt::format("{} must be a list of {}{}, found {}", label, many, expected, one ? "one" : found(node)),
                   hint);
        return names;
    }
    std::unordered_map<std::string, Place> seen;
    for (const Node& item : node.items) {
        auto name = read_name(item, "an item of " + label, "a name", faults);
        if (!name) continue;
        const auto [first, is_new] = seen.emplace(name->text, name->place);
        if (is_new) {
            names.push_back(std::move(*name));
        } else {
            faults.add(item.place, fmt::format("{} lists {} twice, first in line {}; expected it once", label,
                                               in_quotes(item.text), first->second.line));
        }
    }
    return names;
}

std::vector<std::string> read_cells(const Node& node, const std::string& label, FaultList& faults) {
    std::vector<std::string> cells;
    if (node.kind != Node::Kind::list) {
        note_type(node, label, "a list of cell values", faults,
                  node.kind == Node::Kind::text ? fmt::format("write [{}]", node.text) : "");
        return cells;
    }
    for (const Node& item : node.items) {
        if (item.kind == Node::Kind::text) {
            cells.push_back(item.text);
        } else {
            note_type(item, "an item of " + label, "a cell value", faults, null_hint(item));
        }
    }
    return cells;
}

std::optional<std::uint64_t> read_whole(const Node& node, const std::string& label, std::uint64_t low,
                                        std::uint64_t high, FaultList& faults, std::string_view or_word) {
    std::uint64_t number = 0;
    std::string_view digits = node.text;
    if (digits.starts_with('+')) digits.remove_prefix(1);
    const auto [end, error] = std::from_chars(digits.data(), digits.data() + digits.size(), number);
    const bool whole = node.kind == Node::Kind::text && !node.quoted && !digits.empty() && error == std::errc() &&
                       end == digits.data() + digits.size();
    if (whole && number >= low && number <= high) return number;
    const bool open = high == std::numeric_limits<std::int32_t>::max();
    std::string expected = open ? fmt::format("a whole number of {} or more", low)
                                : fmt::format("a whole number from {} to {}", low, high);
    if (!or_word.empty()) expected += fmt::format(", or {}", or_word);
    note_type(node, label, expected, faults, number_hint(node));
    return std::nullopt;
}

std::optional<double> read_decimal(const Node& node, const std::string& label, std::string_view expected,
                                   FaultList& faults) {
    const bool plain = node.kind == Node::Kind::text && !node.quoted && is_decimal(node.text);
    if (!plain) {
        note_type(node, label, expected, faults, number_hint(node));
        return std::nullopt;
    }
    std::string_view text = node.text;
    if (text.starts_with('+')) text.remove_prefix(1);
    double number = 0.0;
    const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), number);
    if (error == std::errc() && end == text.data() + text.size() && std::isfinite(number)) return number;
    note_type(node, label, expected, faults, "a number this large or this close to 0 cannot be held exactly enough");
    return std::nullopt;
}

std::optional<bool> read_truth(const Node& node, const std::string& label, FaultList& faults) {
    if (node.kind == Node::Kind::text && !node.quoted) {
        if (node.text == "true" || node.text == "True" || node.text == "TRUE") return true;
        if (node.text == "false" || node.text == "False" || node.text == "FALSE") return false;
    }
    note_type(node, label, "true or false", faults);
    return std::nullopt;
}

std::optional<std::size_t> read_choice(const Node& node, const std::string& label,
                                       const std::vector<std::string>& words, FaultList& faults) {
    if (node.kind == Node::Kind::text)
        for (std::size_t k = 0; k < words.size(); ++k)
            if (node.text == words[k]) return k;
    note_type(node, label, joined(words, "or"), faults,
              node.kind == Node::Kind::text ? did_you_mean(node.text, words) : std::string());
    return std::nullopt;
}

}  // namespace rivalfold
