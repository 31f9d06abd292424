// The cells of a data file that a study asks for. Knows nothing of constructs or theories.
#pragma once

#include <Eigen/Core>

#include <cstddef>
#include <functional>
#include <string>
#include <vector>

namespace rivalfold {

/// Columns asked of a reader once it knows the header. A column may be asked for both ways.
struct ColumnChoice {
    std::vector<std::size_t> numbers;  ///< header positions to read as numbers
    std::vector<std::size_t> texts;    ///< header positions to read as text
};

/// Given the header names (in file order, trimmed), says which to read; may throw FaultError.
using ChooseColumns = std::function<ColumnChoice(const std::vector<std::string>& header)>;

struct Table {
    std::vector<std::string> header;              ///< every column name of the file
    ColumnChoice chosen;                          ///< what was read
    std::size_t n_rows = 0;                       ///< data rows; row r (from 0) is file row r + 1
    Eigen::MatrixXd numbers;                      ///< n_rows x chosen.numbers.size(); NaN = no answer
    std::vector<std::vector<std::string>> texts;  ///< one vector per chosen text column; "" = no answer
};

struct ReadRules {
    char delimiter = 0;                      ///< 0: found from the first lines among , ; tab |
    std::vector<std::string> missing_codes;  ///< cells that mean "no answer", by text or, for numbers, by value
};

}  // namespace rivalfold
