// Every key and word that a study file may hold, in one place: the reader, its messages and the help page's test agree
// on it.
#pragma once

#include <array>
#include <string_view>

namespace rivalfold {

/// A key of one group; `needed` says what a required key must hold and is empty for the others.
struct Key {
    std::string_view name;
    std::string_view needed = {};
};

inline constexpr std::array kStudyKeys = {Key{"study", "a title"},
                                          Key{"data", "where the survey's rows are"},
                                          Key{"constructs", "what is measured, and by which columns"},
                                          Key{"target", "the construct whose indicators every theory must predict"},
                                          Key{"controls"},
                                          Key{"metric"},
                                          Key{"theories", "two or more rival theories"},
                                          Key{"trial"},
                                          Key{"verdict"}};
inline constexpr std::array kDataKeys = {Key{"file", "the name of a data file"},
                                         Key{"delimiter"},
                                         Key{"missing_codes"},
                                         Key{"rows"},
                                         Key{"where"},
                                         Key{"cluster"},
                                         Key{"segment"},
                                         Key{"holdout"},
                                         Key{"order"}};
inline constexpr std::array kSegmentKeys = {Key{"column", "a column name"}, Key{"cuts"}};
inline constexpr std::array kConstructKeys = {Key{"indicators"}, Key{"reversed"}, Key{"range"}, Key{"weights"},
                                              Key{"category"}};
inline constexpr std::array kTheoryKeys = {Key{"name", "a name of its own"}, Key{"claim"},
                                           Key{"equations", "an outcome and its terms, the target among the outcomes"},
                                           Key{"constructs"}};
inline constexpr std::array kTermKeys = {Key{"product"}, Key{"crossed"}, Key{"minimum"},
                                         Key{"maximum"}, Key{"square"},  Key{"geometric_mean"}};
inline constexpr std::array kTrialKeys = {Key{"folds"},      Key{"repeats"}, Key{"seed"},
                                          Key{"folds_file"}, Key{"loss"},    Key{"mediators"}};
inline constexpr std::array kVerdictKeys = {Key{"level"}, Key{"margin"}, Key{"completeness"}};

}  // namespace rivalfold
