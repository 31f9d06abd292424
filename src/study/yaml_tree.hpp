// One strict YAML document as a small tree whose every node knows its place: plain scalars, lists and maps, nothing
// that a study does not need. Knows no key of a study file; the only file that includes the YAML library is its source.
#pragma once

#include "rivalfold/study/fault.hpp"
#include "study/fault_list.hpp"
#include "study/source_text.hpp"

#include <cstddef>
#include <optional>
#include <string>
#include <vector>

namespace rivalfold {

inline constexpr std::size_t kMostDepth = 64;       ///< levels of lists and maps
inline constexpr std::size_t kMostNodes = 200'000;  ///< scalars, lists and maps, keys included

/// A value of the document. Null (nothing written, `~` or `null`) is a kind of its own.
struct Node {
    enum class Kind { nothing, text, list, map };
    Kind kind = Kind::nothing;
    Place place;
    std::string text;         ///< of a scalar, as YAML reads it; of nothing, the word written for it: ~ or null
    bool quoted = false;      ///< written in quotes or as a block: never a number or true/false
    std::vector<Node> keys;   ///< of a map: distinct texts, one for each of its items
    std::vector<Node> items;  ///< of a list or map
};

/// Reads the one document of a text that check_encoding accepted. Notes every fault: syntax, anchors, aliases, merge
/// keys, tags, duplicate keys, quotes never closed, a second document, too deep, too many nodes.
/// Empty when the rest of the text could not be read; otherwise the tree without what was faulty (the first of two
/// keys).
std::optional<Node> read_yaml_tree(const SourceText& source, FaultList& faults);

}  // namespace rivalfold
