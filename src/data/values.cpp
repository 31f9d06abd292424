#include "data/values.hpp"

#include <algorithm>
#include <limits>
#include <utility>

namespace rivalfold {
namespace {

void copy_column(const double* from, std::span<const std::size_t> rows, const ValueColumn& column, double* to) {
    // Ascending rows: a source row is never before the row that it becomes, so that `to` may overlap `from`.
    for (std::size_t i = 0; i < rows.size(); ++i) {
        const double value = from[rows[i]];
        to[i] = column.reversed ? column.reflect - value : value;
    }
}

bool are_first(const Eigen::MatrixXd& source, const std::vector<ValueColumn>& columns) {
    if (static_cast<Eigen::Index>(columns.size()) > source.cols()) return false;
    for (std::size_t i = 0; i < columns.size(); ++i)
        if (columns[i].source != static_cast<Eigen::Index>(i)) return false;
    return true;
}

}  // namespace

Eigen::MatrixXd gather_values(const Eigen::MatrixXd& source, std::span<const std::size_t> rows,
                              const std::vector<ValueColumn>& columns) {
    Eigen::MatrixXd values(static_cast<Eigen::Index>(rows.size()), static_cast<Eigen::Index>(columns.size()));
    for (std::size_t i = 0; i < columns.size(); ++i) {
        double* const to = values.col(static_cast<Eigen::Index>(i)).data();
        copy_column(source.col(columns[i].source).data(), rows, columns[i], to);
    }
    return values;
}

Eigen::MatrixXd take_values(Eigen::MatrixXd&& source, std::span<const std::size_t> rows,
                            const std::vector<ValueColumn>& columns) {
    if (!are_first(source, columns)) return gather_values(source, rows, columns);
    Eigen::MatrixXd values = std::move(source);
    const auto n_old = static_cast<std::size_t>(values.rows());
    const bool same_rows = rows.size() == n_old;
    for (std::size_t i = 0; i < columns.size(); ++i)
        if (!same_rows || columns[i].reversed)
            copy_column(values.data() + i * n_old, rows, columns[i], values.data() + i * rows.size());
    if (same_rows && static_cast<Eigen::Index>(columns.size()) == values.cols()) return values;
    // Seen as one long row, the matrix can be cut without a copy.
    const auto n_rows = static_cast<Eigen::Index>(rows.size());
    const auto n_columns = static_cast<Eigen::Index>(columns.size());
    values.resize(1, values.size());
    values.conservativeResize(1, n_rows * n_columns);
    values.resize(n_rows, n_columns);
    return values;
}

Spread spread_of(const double* values, std::size_t n) {
    constexpr std::size_t kLanes = 8;  // chains that do not wait for each other
    constexpr double kInfinity = std::numeric_limits<double>::infinity();
    double low[kLanes];
    double high[kLanes];
    bool missing[kLanes] = {};
    std::fill(low, low + kLanes, kInfinity);
    std::fill(high, high + kLanes, -kInfinity);
    for (std::size_t i = 0; i < n; ++i) {
        const std::size_t lane = i % kLanes;
        const double value = values[i];
        low[lane] = value < low[lane] ? value : low[lane];
        high[lane] = value > high[lane] ? value : high[lane];
        missing[lane] |= value != value;
    }
    Spread spread{kInfinity, -kInfinity, false};
    for (std::size_t lane = 0; lane < kLanes; ++lane) {
        spread.low = std::min(spread.low, low[lane]);
        spread.high = std::max(spread.high, high[lane]);
        spread.any_missing |= missing[lane];
    }
    return spread;
}

}  // namespace rivalfold
