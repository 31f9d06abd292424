#include "data/find_columns.hpp"

#include "rivalfold/data/survey.hpp"

#include "study/characters.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <set>
#include <unordered_map>
#include <utility>

namespace rivalfold {
namespace {

constexpr std::size_t kMostHints = 20;  ///< unknown names that are compared with every name of the header

/// The constructs that one theory meets: in an equation, as a control or as the target.
std::set<std::string_view> names_met(const Study& study, const Theory& theory) {
    std::set<std::string_view> names{study.target.text};
    for (const Name& control : study.controls) names.insert(control.text);
    for (const Equation& equation : theory.equations) {
        names.insert(equation.outcome.text);
        for (const Term& term : equation.terms)
            for (const Name& member : term.members) names.insert(member.text);
    }
    return names;
}

class Finder {
public:
    Finder(const Study& study, const std::vector<std::string>& header) : study_(study), header_(header) {
        for (std::size_t column = header.size(); column-- > 0;)
            if (!header[column].empty()) positions_[header[column]] = column;
    }

    FoundColumns find() {
        std::set<const Construct*> used;
        for (std::size_t theory = 0; theory < study_.theories.size(); ++theory)
            for (const std::string_view name : names_met(study_, study_.theories[theory]))
                used.insert(study_.construct(theory, name));
        for (const Construct& construct : study_.constructs)
            find_construct(construct, Measurement::kEveryTheory, used.count(&construct) > 0);
        for (std::size_t theory = 0; theory < study_.theories.size(); ++theory)
            for (const Construct& construct : study_.theories[theory].constructs)
                find_construct(construct, theory, used.count(&construct) > 0);
        for (const Condition& condition : study_.data.where)
            found_.where.push_back(position(condition.column).value_or(0));
        if (study_.data.cluster) found_.cluster = position(*study_.data.cluster);
        if (study_.data.segment) found_.segment = position(study_.data.segment->column);
        keep_target_apart();
        if (!faults_.empty()) throw FaultError(std::move(faults_));
        return std::move(found_);
    }

private:
    std::optional<std::size_t> position(const Name& name) {
        const auto at = positions_.find(name.text);
        if (at != positions_.end()) return at->second;
        std::string hint = faults_.size() < kMostHints ? did_you_mean(name.text, header_) : std::string();
        say(name.place, fmt::format("{} has no column {}", in_quotes(study_.data.file.text), in_quotes(name.text)),
            std::move(hint));
        return {};
    }

    std::vector<std::size_t> all_positions(const Name& name) {
        std::vector<std::size_t> columns;
        if (name.text.find('*') == std::string::npos) {
            if (const auto column = position(name)) columns.push_back(*column);
            return columns;
        }
        for (std::size_t column = 0; column < header_.size(); ++column)
            if (!header_[column].empty() && glob_matches(name.text, header_[column])) columns.push_back(column);
        if (columns.empty())
            say(name.place,
                fmt::format("no column of {} matches {}", in_quotes(study_.data.file.text), in_quotes(name.text)));
        return columns;
    }

    void find_construct(const Construct& construct, std::size_t theory, bool used) {
        FoundConstruct found;
        found.construct = &construct;
        found.theory = theory;
        found.used = used;
        found.is_target = construct.name.text == study_.target.text;
        std::unordered_map<std::size_t, const Name*> taken;
        for (const Name& name : construct.indicators) {
            for (const std::size_t column : all_positions(name)) {
                const auto [first, is_new] = taken.emplace(column, &name);
                if (is_new)
                    found.indicators.push_back({column, false, name.place});
                else
                    say(name.place, fmt::format("construct {} takes the column {} twice, by {} and by {}",
                                                in_quotes(construct.name.text), in_quotes(header_[column]),
                                                in_quotes(first->second->text), in_quotes(name.text)));
            }
        }
        reverse_indicators(found);
        if (construct.category) found.category = position(*construct.category);
        found_.constructs.push_back(std::move(found));
    }

    void reverse_indicators(FoundConstruct& found) {
        const Construct& construct = *found.construct;
        for (const Name& name : construct.reversed) {
            bool any = false;
            std::vector<std::string> names;
            for (FoundIndicator& indicator : found.indicators) {
                names.push_back(header_[indicator.column]);
                if (!glob_matches(name.text, names.back())) continue;
                indicator.reversed = any = true;
            }
            if (!any)
                say(name.place,
                    fmt::format("construct {} reverses {}, which is none of its indicators",
                                in_quotes(construct.name.text), in_quotes(name.text)),
                    did_you_mean(name.text, names));
            else if (!construct.range)
                say(name.place, fmt::format("construct {} reverses {} but has no range to reverse within",
                                            in_quotes(construct.name.text), in_quotes(name.text)));
        }
    }

    /// What is to be predicted must not be among what predicts it.
    void keep_target_apart() {
        std::set<std::size_t> of_target;
        for (const FoundConstruct& found : found_.constructs)
            if (found.is_target)
                for (const FoundIndicator& indicator : found.indicators) of_target.insert(indicator.column);
        const auto refuse = [&](std::size_t column, Place place, const FoundConstruct& found) {
            if (of_target.count(column) > 0)
                say(place, fmt::format("column {} measures the target {} and cannot also measure {}: it would predict "
                                       "itself",
                                       in_quotes(header_[column]), in_quotes(study_.target.text),
                                       in_quotes(found.construct->name.text)));
        };
        for (const FoundConstruct& found : found_.constructs) {
            if (!found.used || found.is_target) continue;
            for (const FoundIndicator& indicator : found.indicators) refuse(indicator.column, indicator.place, found);
            if (found.category) refuse(*found.category, found.construct->category->place, found);
        }
        if (found_.segment && of_target.count(*found_.segment) > 0)
            say(study_.data.segment->column.place,
                fmt::format(
                    "the segment column {} measures the target {}; expected another column: segments cut by the "
                    "outcome hide what is to be predicted",
                    in_quotes(header_[*found_.segment]), in_quotes(study_.target.text)));
    }

    void say(Place place, std::string message, std::string hint = {}) {
        faults_.push_back(study_.fault_at(place, std::move(message), std::move(hint)));
    }

    const Study& study_;
    const std::vector<std::string>& header_;
    std::unordered_map<std::string_view, std::size_t> positions_;
    FoundColumns found_;
    std::vector<Fault> faults_;
};

}  // namespace

FoundColumns find_columns(const Study& study, const std::vector<std::string>& header) {
    return Finder(study, header).find();
}

bool glob_matches(std::string_view pattern, std::string_view name) {
    std::size_t p = 0;
    std::size_t n = 0;
    std::size_t star = std::string_view::npos;  // the last * met, and where in the name it may still stretch to
    std::size_t resume = 0;
    while (n < name.size()) {
        if (p < pattern.size() && pattern[p] == '*') {
            star = p++;
            resume = n;
        } else if (p < pattern.size() && pattern[p] == name[n]) {
            ++p;
            ++n;
        } else if (star != std::string_view::npos) {
            p = star + 1;
            n = ++resume;
        } else {
            return false;
        }
    }
    return pattern.find_first_not_of('*', p) == std::string_view::npos;
}

const std::string& data_name(const Study& study) {
    return study.data.path.empty() ? study.data.file.text : study.data.path;
}

}  // namespace rivalfold
