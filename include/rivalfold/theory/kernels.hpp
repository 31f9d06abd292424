// The few loops over rows that the engine spends its time in. Pure functions on columns; no allocation, no state.
// Each is compiled for plain and for AVX2 machines and gives the same bits on both: sums always run in four lanes and
// products are never fused with additions.
#pragma once

#include <cstddef>

namespace rivalfold {

/// Rows are padded to a multiple of this with rows of zeros.
inline constexpr std::ptrdiff_t kLanes = 4;

inline constexpr std::ptrdiff_t padded(std::ptrdiff_t rows) { return (rows + kLanes - 1) / kLanes * kLanes; }

/// Adds X'X of a rows x m column-major block (columns `stride` apart) to the lower triangle of `gram` (m x m, columns
/// `gram_stride` apart). rows must be a multiple of kLanes.
void add_gram(const double* x, std::ptrdiff_t stride, std::ptrdiff_t rows, std::ptrdiff_t m, double* gram,
              std::ptrdiff_t gram_stride);

/// out[i] = value
void fill(double* out, std::ptrdiff_t n, double value);
/// out[i] += factor * x[i]
void add_scaled(double* out, const double* x, std::ptrdiff_t n, double factor);
/// The same for four columns in one pass, added in their order: the bits of four calls of add_scaled.
void add_scaled_4(double* out, const double* const x[4], std::ptrdiff_t n, const double factor[4]);
/// out[i] *= x[i]
void multiply(double* out, const double* x, std::ptrdiff_t n);
/// out[i] = the smaller (larger) of out[i] and x[i]
void keep_smaller(double* out, const double* x, std::ptrdiff_t n);
void keep_larger(double* out, const double* x, std::ptrdiff_t n);

/// For one target indicator, prediction errors e = actual - predicted over n rows, u = its fixed unit:
/// row_squared[i] += (e/u)^2, row_absolute[i] += |e/u|; and adds sums of e^2, |e|, |e| * inverse_actual to `sums`.
struct ErrorSums {
    double squared = 0, absolute = 0, proportional = 0;
};
void add_errors(const double* actual, const double* predicted, const double* inverse_actual, std::ptrdiff_t n,
                double one_over_unit, double* row_squared, double* row_absolute, ErrorSums& sums);

}  // namespace rivalfold
