// Turns nodes of the tree into typed values, or faults that say what was expected and what was found.
// Knows types and keys; the sections of a study file decide which of them they want.
#pragma once

#include "rivalfold/study/study.hpp"
#include "study/fault_list.hpp"
#include "study/study_keys.hpp"
#include "study/yaml_tree.hpp"

#include <array>
#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

namespace rivalfold {

/// A map whose keys are known. Unknown and missing keys are noted on construction.
class Keys {
public:
    /// `owner` is how messages call the map, e.g. `construct "skill"`; empty for the study itself. `place` is where it
    /// is announced. A node that is no map is noted and then holds nothing.
    Keys(const Node& map, Place place, std::string owner, std::span<const Key> known, FaultList& faults);

    const Node* value(std::string_view key) const;  ///< null when the key is absent
    Place place(std::string_view key) const;        ///< of the key itself; of the map when absent
    std::string label(std::string_view key) const;  ///< e.g. `"range" of construct "skill"`
    FaultList& faults() const { return faults_; }
    /// True if the key stands here, or an unknown key that was probably meant to be it.
    bool has_or_meant(std::string_view key) const;

private:
    void note_unknown(const Node& key, std::span<const Key> known);

    const Node& map_;
    Place place_;
    std::string owner_;
    FaultList& faults_;
    std::vector<std::string> meant_;
};

/// What a node holds, as messages say it: `"abc"`, `the quoted text "abc"`, `a list`, `an empty list`, `keys with
/// values`, `nothing`.
std::string found(const Node& node);

/// `<label> must be <expected>, found <node>`.
void note_type(const Node& node, const std::string& label, std::string_view expected, FaultList& faults,
               std::string hint = {});

/// Text that is not empty; white space at its ends removed and inside it made single blanks.
std::optional<std::string> read_prose(const Node& node, const std::string& label, std::string_view expected,
                                      FaultList& faults);

/// A name: text, not empty and without control characters. It may look like a number.
std::optional<Name> read_name(const Node& node, const std::string& label, std::string_view expected, FaultList& faults);

/// A list of at least `least` (0, 1 or 2) distinct names; `expected` is the plural, e.g. `column names`. Faulty items
/// are left out.
std::vector<Name> read_names(const Node& node, const std::string& label, std::string_view expected, FaultList& faults,
                             std::size_t least = 1);

/// Cell values as text, as written: a list of scalars.
std::vector<std::string> read_cells(const Node& node, const std::string& label, FaultList& faults);

/// A whole number in [low, high], decimal digits only. A high of 2^31 - 1 is the computer's limit and not spoken of.
/// `or_word` is a word that could stand instead, which the caller has looked for.
std::optional<std::uint64_t> read_whole(const Node& node, const std::string& label, std::uint64_t low,
                                        std::uint64_t high, FaultList& faults, std::string_view or_word = {});

/// A finite decimal number; `expected` says what it must be, e.g. `a number above 0 and below 0.5`.
std::optional<double> read_decimal(const Node& node, const std::string& label, std::string_view expected,
                                   FaultList& faults);

/// true or false.
std::optional<bool> read_truth(const Node& node, const std::string& label, FaultList& faults);

/// The position of the node's text among `words`.
std::optional<std::size_t> read_choice(const Node& node, const std::string& label,
                                       const std::vector<std::string>& words, FaultList& faults);

/// Sets `value` to the one of `choices` whose word(...) is written; leaves it as it is otherwise.
template <class Value, std::size_t n>
void read_word(const Node& node, const std::string& label, const std::array<Value, n>& choices, Value& value,
               FaultList& faults) {
    std::vector<std::string> words;
    for (const Value choice : choices) words.emplace_back(word(choice));
    if (const auto index = read_choice(node, label, words, faults)) value = choices[*index];
}

}  // namespace rivalfold
