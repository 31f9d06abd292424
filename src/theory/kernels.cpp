#include "rivalfold/theory/kernels.hpp"

#include <cmath>
#include <cstring>

// One source, two machine codes, chosen when the program is loaded. Sanitizers cannot follow that choice.
#if defined(__x86_64__) && defined(__GNUC__) && !defined(__SANITIZE_ADDRESS__) && !defined(__SANITIZE_THREAD__) && \
    !defined(__AVX2__)
#if defined(__clang__)
#define RIVALFOLD_TWO_CODES
#else
#define RIVALFOLD_TWO_CODES __attribute__((target_clones("avx2", "default")))
#endif
#else
#define RIVALFOLD_TWO_CODES
#endif

namespace rivalfold {
namespace {

using Lanes = double __attribute__((vector_size(32)));

inline __attribute__((always_inline)) void load(Lanes& lanes, const double* from) {
    std::memcpy(&lanes, from, sizeof lanes);
}
inline __attribute__((always_inline)) double total(const Lanes& lanes) {
    return (lanes[0] + lanes[1]) + (lanes[2] + lanes[3]);
}

}  // namespace

RIVALFOLD_TWO_CODES
void add_gram(const double* x, std::ptrdiff_t stride, std::ptrdiff_t rows, std::ptrdiff_t m, double* gram,
              std::ptrdiff_t gram_stride) {
    std::ptrdiff_t j = 0;
    for (; j + 1 < m; j += 2) {
        const double* a0 = x + j * stride;
        const double* a1 = a0 + stride;
        std::ptrdiff_t i = j;
        for (; i + 1 < m; i += 2) {
            const double* b0 = x + i * stride;
            const double* b1 = b0 + stride;
            Lanes s00{}, s01{}, s10{}, s11{}, p0, p1, q0, q1;
            for (std::ptrdiff_t r = 0; r < rows; r += kLanes) {
                load(p0, a0 + r);
                load(p1, a1 + r);
                load(q0, b0 + r);
                load(q1, b1 + r);
                s00 += p0 * q0;
                s01 += p1 * q0;
                s10 += p0 * q1;
                s11 += p1 * q1;
            }
            gram[i + j * gram_stride] += total(s00);
            if (i > j) gram[i + (j + 1) * gram_stride] += total(s01);
            gram[i + 1 + j * gram_stride] += total(s10);
            gram[i + 1 + (j + 1) * gram_stride] += total(s11);
        }
        if (i < m) {
            const double* b0 = x + i * stride;
            Lanes s0{}, s1{}, p0, p1, q0;
            for (std::ptrdiff_t r = 0; r < rows; r += kLanes) {
                load(p0, a0 + r);
                load(p1, a1 + r);
                load(q0, b0 + r);
                s0 += p0 * q0;
                s1 += p1 * q0;
            }
            gram[i + j * gram_stride] += total(s0);
            gram[i + (j + 1) * gram_stride] += total(s1);
        }
    }
    if (j < m) {
        const double* a0 = x + j * stride;
        Lanes s{}, p;
        for (std::ptrdiff_t r = 0; r < rows; r += kLanes) {
            load(p, a0 + r);
            s += p * p;
        }
        gram[j + j * gram_stride] += total(s);
    }
}

RIVALFOLD_TWO_CODES
void fill(double* out, std::ptrdiff_t n, double value) {
    for (std::ptrdiff_t i = 0; i < n; ++i) out[i] = value;
}

RIVALFOLD_TWO_CODES
void add_scaled(double* __restrict out, const double* __restrict x, std::ptrdiff_t n, double factor) {
    for (std::ptrdiff_t i = 0; i < n; ++i) out[i] += factor * x[i];
}

RIVALFOLD_TWO_CODES
void add_scaled_4(double* __restrict out, const double* const x[4], std::ptrdiff_t n, const double factor[4]) {
    const double* __restrict a = x[0], * __restrict b = x[1], * __restrict c = x[2], * __restrict d = x[3];
    const double fa = factor[0], fb = factor[1], fc = factor[2], fd = factor[3];
    for (std::ptrdiff_t i = 0; i < n; ++i) out[i] = out[i] + fa * a[i] + fb * b[i] + fc * c[i] + fd * d[i];
}

RIVALFOLD_TWO_CODES
void multiply(double* __restrict out, const double* __restrict x, std::ptrdiff_t n) {
    for (std::ptrdiff_t i = 0; i < n; ++i) out[i] *= x[i];
}

RIVALFOLD_TWO_CODES
void keep_smaller(double* __restrict out, const double* __restrict x, std::ptrdiff_t n) {
    for (std::ptrdiff_t i = 0; i < n; ++i) out[i] = x[i] < out[i] ? x[i] : out[i];
}

RIVALFOLD_TWO_CODES
void keep_larger(double* __restrict out, const double* __restrict x, std::ptrdiff_t n) {
    for (std::ptrdiff_t i = 0; i < n; ++i) out[i] = x[i] > out[i] ? x[i] : out[i];
}

RIVALFOLD_TWO_CODES
void add_errors(const double* __restrict actual, const double* __restrict predicted,
                const double* __restrict inverse_actual, std::ptrdiff_t n, double one_over_unit,
                double* __restrict row_squared, double* __restrict row_absolute, ErrorSums& sums) {
    Lanes squared{}, absolute{}, proportional{};
    std::ptrdiff_t i = 0;
    for (; i + kLanes <= n; i += kLanes)
        for (int l = 0; l < kLanes; ++l) {
            const double error = actual[i + l] - predicted[i + l];
            const double size = std::fabs(error);
            const double scaled = error * one_over_unit;
            row_squared[i + l] += scaled * scaled;
            row_absolute[i + l] += std::fabs(scaled);
            squared[l] += error * error;
            absolute[l] += size;
            proportional[l] += size * inverse_actual[i + l];
        }
    for (; i < n; ++i) {
        const double error = actual[i] - predicted[i];
        const double size = std::fabs(error);
        const double scaled = error * one_over_unit;
        row_squared[i] += scaled * scaled;
        row_absolute[i] += std::fabs(scaled);
        squared[i % kLanes] += error * error;
        absolute[i % kLanes] += size;
        proportional[i % kLanes] += size * inverse_actual[i];
    }
    sums.squared += total(squared);
    sums.absolute += total(absolute);
    sums.proportional += total(proportional);
}

}  // namespace rivalfold
