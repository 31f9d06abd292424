// What is wrong with a file that the user wrote, said so that the user can act on it.
// A fault knows its place and renders itself; it does not know who found it.
#pragma once

#include <cstddef>
#include <exception>
#include <span>
#include <string>
#include <string_view>
#include <vector>

namespace rivalfold {

/// A position in a study file; line and column count from 1 (column in characters). Line 0: the file as a whole.
struct Place {
    std::size_t line = 0;
    std::size_t column = 0;
};

/// One thing wrong with a file. Study files use `place` and `source_line`, data files use `position`.
struct Fault {
    std::string file;         ///< as the user named it
    Place place;              ///< where in a study file
    std::string position;     ///< where in a data file, e.g. `row 7, column "pln1"`; empty otherwise
    std::string message;      ///< what is wrong and what was expected
    std::string hint;         ///< a further line, e.g. `did you mean "skill"?`; may be empty
    std::string source_line;  ///< the text of the faulty line, shown above a caret; may be empty
};

/// The fault as text, without a final newline:
///     study.yaml:14:9: error: theory "chain" uses the construct "skil", which nothing defines
///        14 |       delivery: [planning, skil]
///           |                            ^
///     did you mean "skill"?
/// or, for data,  `refits.csv: row 7, column "pln1": "abc" is not a number`.
std::string render(const Fault& fault);

/// At most `most` faults, one under the other, then a line that counts the rest.
std::string render(std::span<const Fault> faults, std::size_t most = 20);

/// The one exception for wrong input; holds every fault found, not only the first. what() is render(faults).
class FaultError : public std::exception {
public:
    explicit FaultError(std::vector<Fault> faults);
    explicit FaultError(Fault fault);
    const std::vector<Fault>& faults() const noexcept { return faults_; }
    const char* what() const noexcept override { return text_.c_str(); }

private:
    std::vector<Fault> faults_;
    std::string text_;
};

/// The name in `known` nearest to `wrong` by edit distance with swaps (Damerau 1964; optimal string alignment),
/// ignoring case; empty when none is near enough to be meant (more than a third of the letters differ).
std::string nearest_name(std::string_view wrong, std::span<const std::string> known);

/// `did you mean "skill"?`, or empty when no known name is near.
std::string did_you_mean(std::string_view wrong, std::span<const std::string> known);

}  // namespace rivalfold
