#include "rivalfold/study/fault.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>
#include <algorithm>
#include <utility>

namespace rivalfold {
namespace {

constexpr std::size_t kShownColumns = 70;  // with the margin of 8 a faulty line fits a terminal of 80
constexpr std::size_t kTabStop = 4;
constexpr std::size_t kLongestName = 200;  // characters; no longer name is compared

// What one character of the faulty line prints, and from which column of the printed line on.
struct Cell {
    std::string text;
    std::size_t from = 0;
    std::size_t width = 1;
};

std::vector<Cell> cells_of(std::string_view line) {
    std::vector<Cell> cells;
    std::size_t column = 0;
    for (const Character& character : characters(line)) {
        Cell cell{{}, column, 1};
        if (character.valid && character.code == U'\t') {
            cell.width = kTabStop - column % kTabStop;
            cell.text.assign(cell.width, ' ');
        } else {
            cell.text = shown(line, character);
            const bool escaped = !character.valid || is_control(character.code);
            cell.width = escaped ? cell.text.size() : display_width(character.code);
        }
        column += cell.width;
        cells.push_back(std::move(cell));
    }
    return cells;
}

// The printed columns [from, to) of a line that are shown: all of it, or a stretch around the place.
std::pair<std::size_t, std::size_t> window(std::size_t total, std::size_t mark) {
    if (total <= kShownColumns) return {0, total};
    std::size_t from = mark > kShownColumns / 2 ? mark - kShownColumns / 2 : 0;
    from = std::min(from, total - kShownColumns);
    return {from, from + kShownColumns};
}

std::string source_lines(const Fault& fault) {
    const std::vector<Cell> cells = cells_of(fault.source_line);
    const std::size_t total = cells.empty() ? 0 : cells.back().from + cells.back().width;
    const std::size_t index = fault.place.column == 0 ? 0 : fault.place.column - 1;
    const std::size_t mark = index < cells.size() ? cells[index].from : total;
    const auto [from, to] = window(total, mark);
    std::string line = from > 0 ? "..." : "";
    std::size_t caret = line.size() + mark - from;
    bool first = true;
    for (const Cell& cell : cells) {
        if (cell.from < from || cell.from + cell.width > to) continue;
        if (std::exchange(first, false)) caret -= cell.from - from;
        line += cell.text;
    }
    if (to < total) line += "...";
    while (!line.empty() && line.back() == ' ') line.pop_back();
    std::string text = fmt::format("\n{:>5} |{}{}", fault.place.line, line.empty() ? "" : " ", line);
    if (fault.place.column > 0) text += fmt::format("\n      | {}^", std::string(caret, ' '));
    return text;
}

std::u32string folded_name(std::string_view name) {
    std::u32string letters;
    for (const Character& character : characters(name)) letters += folded(character.code);
    return letters;
}

// Optimal string alignment: insertions, deletions, changes and swaps of neighbours, no part edited twice
// (Damerau 1964). Returns most + 1 as soon as the distance is above `most`.
std::size_t distance(const std::u32string& a, const std::u32string& b, std::size_t most) {
    if (std::max(a.size(), b.size()) - std::min(a.size(), b.size()) > most) return most + 1;
    std::vector<std::size_t> before(b.size() + 1), previous(b.size() + 1), current(b.size() + 1);
    for (std::size_t j = 0; j <= b.size(); ++j) previous[j] = j;
    for (std::size_t i = 1; i <= a.size(); ++i) {
        current[0] = i;
        for (std::size_t j = 1; j <= b.size(); ++j) {
            const std::size_t change = previous[j - 1] + (a[i - 1] == b[j - 1] ? 0 : 1);
            current[j] = std::min({previous[j] + 1, current[j - 1] + 1, change});
            const bool swapped = i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1];
            if (swapped) current[j] = std::min(current[j], before[j - 2] + 1);
        }
        if (*std::min_element(current.begin(), current.end()) > most) return most + 1;
        std::swap(before, previous);
        std::swap(previous, current);
    }
    return previous[b.size()];
}

}  // namespace

std::string render(const Fault& fault) {
    std::string text = escape_controls(fault.file);
    if (!fault.position.empty()) {
        text += fmt::format("{}{}: ", text.empty() ? "" : ": ", escape_controls(fault.position));
    } else if (fault.place.line > 0) {
        text += fmt::format(":{}:{}: error: ", fault.place.line, fault.place.column);
    } else {
        text += text.empty() ? "error: " : ": error: ";
    }
    text += escape_controls(fault.message);
    if (fault.place.line > 0 && !fault.source_line.empty()) text += source_lines(fault);
    if (!fault.hint.empty()) text += "\n" + escape_controls(fault.hint);
    return text;
}

std::string render(std::span<const Fault> faults, std::size_t most) {
    std::string text;
    const std::size_t n_shown = std::min(most, faults.size());
    for (std::size_t k = 0; k < n_shown; ++k) {
        if (k > 0) text += '\n';
        text += render(faults[k]);
    }
    const std::size_t rest = faults.size() - n_shown;
    if (rest > 0)
        text += fmt::format("{}and {} more {}", n_shown > 0 ? "\n" : "", rest, rest == 1 ? "error" : "errors");
    return text;
}

FaultError::FaultError(std::vector<Fault> faults) : faults_(std::move(faults)), text_(render(faults_)) {}

FaultError::FaultError(Fault fault) : FaultError(std::vector<Fault>{std::move(fault)}) {}

std::string nearest_name(std::string_view wrong, std::span<const std::string> known) {
    const std::u32string letters = folded_name(wrong.substr(0, 4 * kLongestName + 1));
    if (letters.size() > kLongestName) return {};
    const std::string* nearest = nullptr;
    std::size_t smallest = 0;
    for (const std::string& name : known) {
        if (name.size() > 4 * kLongestName) continue;
        const std::u32string other = folded_name(name);
        const std::size_t allowed = std::max(letters.size(), other.size()) / 3;
        const std::size_t most = nearest ? std::min(allowed, smallest) : allowed;
        const std::size_t edits = distance(letters, other, most);
        if (edits > most || (nearest && edits >= smallest)) continue;
        nearest = &name;
        smallest = edits;
    }
    return nearest ? *nearest : std::string();
}

std::string did_you_mean(std::string_view wrong, std::span<const std::string> known) {
    const std::string name = nearest_name(wrong, known);
    return name.empty() ? std::string() : fmt::format("did you mean {}?", in_quotes(name));
}

}  // namespace rivalfold
