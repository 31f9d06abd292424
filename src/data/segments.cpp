#include "data/segments.hpp"

#include "data/levels.hpp"
#include "data/numbers.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <utility>

namespace rivalfold {
namespace {

const Name& column_of(const Study& study) { return study.data.segment->column; }

void say(const Study& study, std::string message, std::string hint, std::vector<Fault>& faults) {
    faults.push_back(study.fault_at(column_of(study).place, std::move(message), std::move(hint)));
}

/// Where the rows could be cut in two: the level in the middle, so that neither half is empty.
std::string cut_hint(const Study& study, const Levels& levels) {
    double value = 0;
    for (const std::string& name : levels.names)
        if (!text_is_number(name, value)) return "keep ten of them or fewer with \"where\", or name another column";
    std::vector<int> codes = levels.codes;
    const auto middle = codes.begin() + static_cast<std::ptrdiff_t>((codes.size() - 1) / 2);
    std::nth_element(codes.begin(), middle, codes.end());
    const auto level = std::min(static_cast<std::size_t>(*middle), levels.names.size() - 2);
    text_is_number(levels.names[level], value);
    return fmt::format("cut it, e.g. {{column: {}, cuts: [{}]}}", column_of(study).text, value);
}

std::string where_hint(const Study& study) {
    for (const Condition& condition : study.data.where)
        if (condition.column.text == column_of(study).text && condition.values.size() == 1)
            return "\"where\" keeps this value alone";
    return {};
}

std::string between(const std::string& column, const std::vector<double>& cuts, std::size_t segment) {
    if (segment == 0) return fmt::format("{} <= {}", column, cuts.front());
    if (segment == cuts.size()) return fmt::format("{} > {}", column, cuts.back());
    return fmt::format("{} < {} <= {}", cuts[segment - 1], column, cuts[segment]);
}

}  // namespace

Segments segments_by_value(const Study& study, const std::vector<std::string>& cells, std::span<const std::size_t> rows,
                           std::vector<Fault>& faults) {
    Levels levels = code_levels(cells, rows);
    const std::string& column = column_of(study).text;
    if (levels.names.size() == 1)
        say(study,
            fmt::format("the segment column {} is {} in all {} rows used; expected two values or more",
                        in_quotes(column), in_quotes(levels.names.front()), rows.size()),
            where_hint(study), faults);
    if (levels.names.size() > kMostSegments)
        say(study,
            fmt::format("the segment column {} has {} different values in the rows used; expected {} at most",
                        in_quotes(column), levels.names.size(), kMostSegments),
            cut_hint(study, levels), faults);
    Segments segments;
    for (const std::string& level : levels.names) segments.names.push_back(escape_controls(column + ": " + level));
    segments.codes = std::move(levels.codes);
    return segments;
}

Segments segments_by_cuts(const Study& study, const double* values, std::span<const std::size_t> rows,
                          std::vector<Fault>& faults) {
    const std::vector<double>& cuts = study.data.segment->cuts;
    const std::string& column = column_of(study).text;
    Segments segments;
    segments.codes.reserve(rows.size());
    std::vector<bool> held(cuts.size() + 1, false);
    double low = values[rows.front()];
    double high = low;
    for (const std::size_t row : rows) {
        const auto cut = std::lower_bound(cuts.begin(), cuts.end(), values[row]);
        const auto segment = static_cast<std::size_t>(cut - cuts.begin());
        segments.codes.push_back(static_cast<int>(segment));
        held[segment] = true;
        low = std::min(low, values[row]);
        high = std::max(high, values[row]);
    }
    std::vector<std::string> empty;
    for (std::size_t segment = 0; segment < held.size(); ++segment) {
        segments.names.push_back(between(column, cuts, segment));
        if (!held[segment]) empty.push_back(in_quotes(segments.names.back()));
    }
    const bool one = empty.size() == 1;
    if (!empty.empty())
        say(study,
            fmt::format("the {} {} {} no row; {} runs from {} to {} in the {} rows used: expected rows in every "
                        "segment",
                        one ? "segment" : "segments", joined(empty, "and"), one ? "holds" : "hold", in_quotes(column),
                        low, high, rows.size()),
            {}, faults);
    return segments;
}

}  // namespace rivalfold
