// What the user declares: the study file as plain structs, each name with its place for later faults.
// Knows no YAML, no data and no numbers beyond those written in the file.
#pragma once

#include "rivalfold/study/fault.hpp"

#include <cstdint>
#include <optional>
#include <string>
#include <utility>
#include <vector>

namespace rivalfold {

/// A name or text as written, with its place in the study file.
struct Name {
    std::string text;
    Place place;
};

enum class Weights { mode_a, mode_b, equal, principal };  ///< how indicators are weighted into a score
enum class Metric { standard, response };                 ///< units in which terms are formed
enum class RowRule { drop, mean };                        ///< what happens to a row with a missing used cell
enum class Loss { squared, absolute };
enum class Mediators { measured, predicted };
enum class TermKind { score, product, minimum, maximum, square, geometric_mean };

/// The word that the study file uses for a value.
const char* word(Weights);
const char* word(Metric);
const char* word(RowRule);
const char* word(Loss);
const char* word(Mediators);
const char* word(TermKind);  ///< score gives "name"

/// A construct as declared: measured by indicators, or a category column.
struct Construct {
    Name name;
    std::vector<Name> indicators;  ///< column names; may hold `*`; empty for a category
    std::vector<Name> reversed;    ///< column names; may hold `*`
    std::optional<std::pair<double, double>> range;
    Place range_place;
    Weights weights = Weights::mode_a;
    bool weights_given = false;  ///< written in the file, not the default
    std::optional<Name> category;
};

/// One term of an equation. `crossed` never appears: reading expands it (from_crossed marks the pieces).
struct Term {
    TermKind kind = TermKind::score;
    std::vector<Name> members;  ///< construct names; exactly one for score and square
    Place place;
    bool from_crossed = false;
};

/// The term as text: `planning`, `planning x skill`, `minimum(planning, skill)`, `square(planning)`.
std::string describe(const Term& term);

struct Equation {
    Name outcome;
    std::vector<Term> terms;  ///< distinct; without the study's controls
};

struct Theory {
    Name name;
    std::string claim;
    std::vector<Equation> equations;    ///< in file order; one of them is the target's; no cycles
    std::vector<Construct> constructs;  ///< this theory's own measurement
};

/// `where: {column: value}` or `{column: [values]}`; a row stays if its cell equals any of the values.
struct Condition {
    Name column;
    std::vector<std::string> values;
};

/// `segment: column` or `{column: complexity, cuts: [4]}`: the contest is repeated within each segment.
struct Segmenting {
    Name column;
    std::vector<double>
        cuts;  ///< ascending; values <= the first cut are the first segment; empty: one segment per value
};

struct DataSource {
    Name file;           ///< as written
    std::string path;    ///< resolved against the study file's folder
    char delimiter = 0;  ///< 0: find it
    std::vector<std::string> missing_codes;
    RowRule rows = RowRule::drop;
    std::vector<Condition> where;
    std::optional<Name> cluster;
    std::optional<Segmenting> segment;
};

struct TrialPlan {
    int folds = 10;
    Place folds_place;
    int repeats = 50;           ///< under auto_repeats the smallest number that is run
    bool auto_repeats = false;  ///< repeats: auto
    std::uint64_t seed = 1;
    std::optional<Name> folds_file;
    std::string folds_path;  ///< resolved
    Loss loss = Loss::squared;
    Mediators mediators = Mediators::measured;
};

struct VerdictRules {
    double level = 0.05;
    double margin = 0.02;
    bool completeness = false;  ///< add the flexible benchmark, completeness and restrictiveness
};

struct Study {
    std::string title;
    DataSource data;
    std::vector<Construct> constructs;  ///< in file order
    Name target;
    std::vector<Name> controls;
    Metric metric = Metric::standard;
    std::vector<Theory> theories;  ///< in file order, two or more
    TrialPlan trial;
    VerdictRules verdict;

    std::string path;    ///< the study file as the user named it
    std::string source;  ///< its text, byte for byte

    /// A fault at a place of this study file, with the line's text.
    Fault fault_at(Place place, std::string message, std::string hint = {}) const;
    /// The construct as theory number `theory` measures it (its own declaration first, then the study's); null if
    /// unknown.
    const Construct* construct(std::size_t theory, std::string_view name) const;
    /// The construct of the study itself; null if unknown.
    const Construct* construct(std::string_view name) const;
};

}  // namespace rivalfold
