#include "rivalfold/data/survey.hpp"

#include "data/find_columns.hpp"
#include "data/values.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>

#include <stdexcept>
#include <utility>

namespace rivalfold {
namespace {

std::vector<std::size_t> positions_in(const Survey& whole, std::size_t segment) {
    std::vector<std::size_t> positions;
    for (std::size_t i = 0; i < whole.segments.size(); ++i)
        if (static_cast<std::size_t>(whole.segments[i]) == segment) positions.push_back(i);
    return positions;
}

/// The codes at the positions, renumbered without the names that none of them has.
void take_codes(const std::vector<int>& codes, const std::vector<std::string>& names,
                const std::vector<std::size_t>& positions, std::vector<int>& new_codes,
                std::vector<std::string>& new_names) {
    std::vector<int> number(names.size(), -1);
    for (const std::size_t position : positions) number[static_cast<std::size_t>(codes[position])] = 0;
    for (std::size_t name = 0; name < names.size(); ++name) {
        if (number[name] < 0) continue;
        number[name] = static_cast<int>(new_names.size());
        new_names.push_back(names[name]);
    }
    for (const std::size_t position : positions) new_codes.push_back(number[static_cast<std::size_t>(codes[position])]);
}

/// What does not vary within a segment, each at its place in the study.
class SegmentCheck {
public:
    SegmentCheck(const Study& study, const Survey& whole, const Survey& part, std::size_t segment)
        : study_(study), part_(part), called_("the segment " + in_quotes(whole.segment_names[segment])) {}

    /// Throws FaultError if there is something.
    void run() {
        if (part_.n() < 2) {
            const Place place = study_.data.segment ? study_.data.segment->column.place : study_.data.file.place;
            throw FaultError(study_.fault_at(
                place, fmt::format("{} has {} of the rows used; expected two or more", called_, part_.n())));
        }
        for (std::size_t i = 0; i < part_.variables.size(); ++i) check_variable(i);
        for (std::size_t i = 0; i < part_.categories.size(); ++i) check_category(i);
        if (!faults_.empty()) throw FaultError(std::move(faults_));
    }

private:
    void check_variable(std::size_t i) {
        const Spread spread = spread_of(part_.values.col(static_cast<Eigen::Index>(i)).data(), part_.n());
        if (spread.low < spread.high) return;
        const Variable& variable = part_.variables[i];
        const Construct* construct = owner([&](const Measurement& measurement) {
            for (const int own : measurement.variables)
                if (static_cast<std::size_t>(own) == i) return true;
            return false;
        });
        if (construct == nullptr) return;
        std::string what =
            fmt::format("column {} of construct {}", in_quotes(variable.column), in_quotes(construct->name.text));
        if (spread.low > spread.high) {
            say(place_in(*construct, variable.column),
                fmt::format("{} holds no answer in any of the {} rows of {}; leave it out or choose other segments",
                            what, part_.n(), called_));
            return;
        }
        const double raw = variable.reversed ? variable.reflect - spread.low : spread.low;
        say(place_in(*construct, variable.column),
            fmt::format("{} is {} in all {} rows of {}; leave it out or choose other segments: a constant says "
                        "nothing about differences",
                        what, raw, part_.n(), called_));
    }

    void check_category(std::size_t i) {
        const Category& category = part_.categories[i];
        if (category.levels.size() != 1) return;
        const Construct* construct =
            owner([&](const Measurement& measurement) { return measurement.category == static_cast<int>(i); });
        if (construct == nullptr) return;
        say(construct->category->place,
            fmt::format("category {} is {} in all {} rows of {}; leave it out or choose other segments: one level says "
                        "nothing about differences",
                        in_quotes(category.column), in_quotes(category.levels.front()), part_.n(), called_));
    }

    /// The construct of the first used measurement that fits.
    template <class Fits>
    const Construct* owner(const Fits& fits) const {
        for (const Measurement& measurement : part_.measurements)
            if (measurement.used && fits(measurement))
                return study_.construct(measurement.theory, measurement.construct);
        return nullptr;
    }

    static Place place_in(const Construct& construct, const std::string& column) {
        for (const Name& name : construct.indicators)
            if (glob_matches(name.text, column)) return name.place;
        return construct.name.place;
    }

    void say(Place place, std::string message) { faults_.push_back(study_.fault_at(place, std::move(message))); }

    const Study& study_;
    const Survey& part_;
    std::string called_;
    std::vector<Fault> faults_;
};

}  // namespace

Survey survey_of_segment(const Study& study, const Survey& whole, std::size_t segment) {
    if (segment >= whole.segment_names.size() || whole.segments.size() != whole.n() ||
        whole.values.rows() != static_cast<Eigen::Index>(whole.n()))
        throw std::invalid_argument(
            fmt::format("segment {} of a survey with {} segments, {} rows and {} rows of values", segment,
                        whole.segment_names.size(), whole.n(), whole.values.rows()));
    const std::vector<std::size_t> positions = positions_in(whole, segment);
    Survey part;
    part.rows_read = whole.rows_read;
    for (const std::size_t position : positions) part.rows.push_back(whole.rows[position]);
    part.dropped = whole.dropped;
    part.variables = whole.variables;
    std::vector<ValueColumn> columns;
    for (Eigen::Index column = 0; column < whole.values.cols(); ++column) columns.push_back({column, false, 0});
    part.values = gather_values(whole.values, positions, columns);
    part.has_missing = whole.has_missing && part.values.array().isNaN().any();
    for (const Category& category : whole.categories) {
        Category& own = part.categories.emplace_back(Category{category.column, {}, {}});
        take_codes(category.codes, category.levels, positions, own.codes, own.levels);
    }
    part.measurements = whole.measurements;
    if (!whole.clusters.empty())
        take_codes(whole.clusters, whole.cluster_names, positions, part.clusters, part.cluster_names);
    part.sha256 = whole.sha256;
    SegmentCheck(study, whole, part, segment).run();
    return part;
}

}  // namespace rivalfold
