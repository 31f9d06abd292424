// From the table and the names resolved in its header to the survey: rows, variables, categories, clusters, segments,
// and what is wrong with them. Knows nothing of files.
#pragma once

#include "data/choose_rows.hpp"
#include "data/values.hpp"

#include "rivalfold/data/survey.hpp"

#include <cstddef>
#include <functional>
#include <span>
#include <string>
#include <vector>

namespace rivalfold {

class SurveyBuilder {
public:
    /// Makes the matrix of the used rows from the table's; last user of the table's numbers.
    using MakeValues =
        std::function<Eigen::MatrixXd(std::span<const std::size_t> rows, const std::vector<ValueColumn>& columns)>;

    /// Both must outlive the builder.
    SurveyBuilder(const Study& study, const Table& table);

    /// Throws FaultError with all that is wrong with the cells of the used columns.
    Survey build(const MakeValues& make_values);

private:
    void add_construct(const FoundConstruct& found);
    int variable_of(const FoundConstruct& found, const FoundIndicator& indicator);
    int category_of(const FoundConstruct& found);
    void need(NeededColumn column);
    void add_range(RangeRule rule);
    int number_index(std::size_t column) const;
    int text_index(std::size_t column) const;
    void check_answers(const std::vector<std::size_t>& rows);
    void check_variables();
    void code_categories();
    void code_clusters();
    void code_segments();
    void advise();
    void say(Place place, std::string message);

    const Study& study_;
    const Table& table_;
    FoundColumns found_;
    Survey survey_;
    std::vector<ValueColumn> value_columns_;      ///< per variable
    std::vector<const FoundConstruct*> owners_;   ///< per variable, the construct that first used it
    std::vector<Place> places_;                   ///< per variable, where the study names it
    std::vector<NeededColumn> category_columns_;  ///< per category
    std::vector<NeededColumn> needed_;
    std::vector<RangeRule> ranges_;
    RowChoice choice_;
    std::vector<Fault> faults_;
};

}  // namespace rivalfold
