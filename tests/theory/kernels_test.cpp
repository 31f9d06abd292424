#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include "rivalfold/theory/kernels.hpp"

using namespace rivalfold;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

MatrixXd noise(Index rows, Index columns, std::uint64_t seed) {
    RandomStream stream(seed, Purpose::simulation, 0);
    MatrixXd x(rows, columns);
    for (Index k = 0; k < x.size(); ++k) x.data()[k] = bell(stream);
    return x;
}

/// The promised order of a sum: four lanes, each in row order, added in pairs.
template <class Value>
double lane_sum(Index n, const Value& value) {
    double lane[4] = {0, 0, 0, 0};
    for (Index i = 0; i < n; ++i) lane[i % 4] += value(i);
    return (lane[0] + lane[1]) + (lane[2] + lane[3]);
}

}  // namespace

TEST_CASE("cross-products of any number of columns have the bits of a plain sum in four lanes", "[theory]") {
    for (Index m = 1; m <= 9; ++m)
        for (const Index rows : {0, 4, 8, 60, 1024}) {
            const MatrixXd x =
                noise(rows + 3, m, static_cast<std::uint64_t>(m));  // columns longer than the rows asked for
            MatrixXd gram = MatrixXd::Constant(m + 2, m, 0.25);
            add_gram(x.data(), x.rows(), rows, m, gram.data(), gram.rows());
            for (Index j = 0; j < m; ++j)
                for (Index i = 0; i < m + 2; ++i) {
                    INFO(m << " columns, " << rows << " rows, at " << i << ", " << j);
                    const bool lower = i >= j && i < m;
                    CHECK(gram(i, j) ==
                          (lower ? 0.25 + lane_sum(rows, [&](Index r) { return x(r, j) * x(r, i); }) : 0.25));
                }
        }
}

TEST_CASE("cross-products agree with X'X, and rows of zeros at the end change no bit", "[theory]") {
    for (const Index n : {1, 2, 3, 5, 61, 1021}) {
        MatrixXd x = MatrixXd::Zero(padded(n) + 8, 5);
        x.topRows(n) = noise(n, 5, 77);
        MatrixXd gram = MatrixXd::Zero(5, 5), longer = gram;
        add_gram(x.data(), x.rows(), padded(n), 5, gram.data(), 5);
        add_gram(x.data(), x.rows(), padded(n) + 8, 5, longer.data(), 5);
        CHECK(gram == longer);
        const MatrixXd plain = x.transpose() * x;
        for (Index j = 0; j < 5; ++j)
            for (Index i = j; i < 5; ++i)
                CHECK(std::fabs(gram(i, j) - plain(i, j)) <= 1e-14 * std::sqrt(plain(i, i) * plain(j, j)));
    }
    CHECK(padded(0) == 0);
    CHECK(padded(1) == 4);
    CHECK(padded(4) == 4);
    CHECK(padded(5) == 8);
}

TEST_CASE("the row loops do what a plain loop does and stop where told", "[theory]") {
    const Index n = 7;
    const MatrixXd x = noise(9, 2, 5);
    const auto run = [&](const auto& act) {
        VectorXd out = x.col(0);
        act(out.data(), x.col(1).data());
        CHECK(out.tail(2) == x.col(0).tail(2));
        return out;
    };
    const VectorXd filled = run([&](double* out, const double*) { fill(out, n, 2.5); });
    const VectorXd scaled = run([&](double* out, const double* y) { add_scaled(out, y, n, 0.3); });
    const VectorXd times = run([&](double* out, const double* y) { multiply(out, y, n); });
    const VectorXd less = run([&](double* out, const double* y) { keep_smaller(out, y, n); });
    const VectorXd more = run([&](double* out, const double* y) { keep_larger(out, y, n); });
    for (Index i = 0; i < n; ++i) {
        CHECK(filled(i) == 2.5);
        CHECK(scaled(i) == x(i, 0) + 0.3 * x(i, 1));
        CHECK(times(i) == x(i, 0) * x(i, 1));
        CHECK(less(i) == std::min(x(i, 0), x(i, 1)));
        CHECK(more(i) == std::max(x(i, 0), x(i, 1)));
    }
}

TEST_CASE("errors are added per row and in total, whatever the number of rows", "[theory]") {
    const MatrixXd x = noise(40, 2, 6);
    VectorXd inverse = x.col(0).cwiseAbs().cwiseInverse();
    inverse(3) = 0;
    const double per_unit = 1 / 0.7;
    for (const Index n : {0, 1, 3, 4, 7, 8, 33}) {
        VectorXd squared = VectorXd::Constant(40, 1), absolute = VectorXd::Constant(40, 2);
        ErrorSums sums{10, 20, 30};
        add_errors(x.col(0).data(), x.col(1).data(), inverse.data(), n, per_unit, squared.data(), absolute.data(),
                   sums);
        const auto error = [&](Index i) { return x(i, 0) - x(i, 1); };
        for (Index i = 0; i < 40; ++i) {
            const double scaled = i < n ? error(i) * per_unit : 0;
            CHECK(squared(i) == 1 + scaled * scaled);
            CHECK(absolute(i) == 2 + std::fabs(scaled));
        }
        CHECK(sums.squared == 10 + lane_sum(n, [&](Index i) { return error(i) * error(i); }));
        CHECK(sums.absolute == 20 + lane_sum(n, [&](Index i) { return std::fabs(error(i)); }));
        CHECK(sums.proportional == 30 + lane_sum(n, [&](Index i) { return std::fabs(error(i)) * inverse(i); }));
    }
}
