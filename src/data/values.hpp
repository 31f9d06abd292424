// The used rows of the chosen columns as the survey's matrix, made from the table's in place where that is possible.
// Knows nothing of why a row or a column was chosen.
#pragma once

#include <Eigen/Core>

#include <cstddef>
#include <span>
#include <vector>

namespace rivalfold {

/// One column of the result: a column of the source, as it is or as reflect - value.
struct ValueColumn {
    Eigen::Index source = 0;
    bool reversed = false;
    double reflect = 0;
};

/// Given rows (ascending) x given columns of `source`; NaN stays NaN.
Eigen::MatrixXd gather_values(const Eigen::MatrixXd& source, std::span<const std::size_t> rows,
                              const std::vector<ValueColumn>& columns);

/// The same without a second matrix, if the columns are the first of the source in its order; else a copy.
Eigen::MatrixXd take_values(Eigen::MatrixXd&& source, std::span<const std::size_t> rows,
                            const std::vector<ValueColumn>& columns);

/// The smallest and largest value that is not NaN (low > high if there is none), and whether some are NaN.
struct Spread {
    double low = 0;
    double high = 0;
    bool any_missing = false;
};
Spread spread_of(const double* values, std::size_t n);

}  // namespace rivalfold
