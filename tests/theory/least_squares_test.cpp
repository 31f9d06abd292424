#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include "rivalfold/theory/least_squares.hpp"
#include "rivalfold/theory/sample.hpp"

#include <nlohmann/json.hpp>

#include <Eigen/QR>

#include <numeric>

using namespace rivalfold;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

/// Means and cross-products of columns x with outcomes y, two passes.
CrossProducts sums_of(const MatrixXd& x, const MatrixXd& y) {
    CrossProducts sums;
    sums.n = static_cast<double>(x.rows());
    sums.mean_x = x.colwise().mean().transpose();
    sums.mean_y = y.colwise().mean().transpose();
    const MatrixXd cx = x.rowwise() - sums.mean_x.transpose(), cy = y.rowwise() - sums.mean_y.transpose();
    sums.xx = cx.transpose() * cx;
    sums.xy = cx.transpose() * cy;
    sums.yy = cy.colwise().squaredNorm().transpose();
    sums.scale = x.colwise().squaredNorm().transpose();
    return sums;
}

/// Raw rows on the way of the engine: centred once by build_sample, then moments.
CrossProducts sums_by_sample(const MatrixXd& y_then_x) {
    Survey survey;
    survey.values = y_then_x;
    const Sample sample = build_sample(survey);
    std::vector<Index> all(static_cast<std::size_t>(sample.n));
    std::iota(all.begin(), all.end(), Index{0});
    Moments moments;
    moments_of_rows(sample, all, moments);
    const Index c = y_then_x.cols() - 1;
    CrossProducts sums;
    sums.n = moments.n;
    const VectorXd mean = sample.centre + moments.mean;
    sums.mean_x = mean.tail(c);
    sums.mean_y = mean.head(1);
    sums.xx = moments.ss.bottomRightCorner(c, c);
    sums.xy = moments.ss.bottomLeftCorner(c, 1);
    sums.yy = moments.ss.diagonal().head(1);
    sums.scale = sums.xx.diagonal();
    return sums;
}

/// The outcome and the powers of x (or the several x) of a certified problem.
MatrixXd certified_rows(const std::string& name, Index coefficients) {
    const auto cells = frozen_cells("reference/open_data/nist/" + name + ".csv");
    MatrixXd rows(static_cast<Index>(cells.size()) - 1, coefficients);
    for (Index i = 0; i < rows.rows(); ++i) {
        const auto& line = cells[static_cast<std::size_t>(i) + 1];
        for (Index j = 0; j < rows.cols(); ++j) {
            if (j < static_cast<Index>(line.size())) rows(i, j) = std::stod(line[static_cast<std::size_t>(j)]);
            if (line.size() == 2 && j > 1) rows(i, j) = rows(i, j - 1) * rows(i, 1);
        }
    }
    return rows;
}

/// Log relative error: digits that agree, at most 15; relative to `unit` where the certified value is 0.
double digits(double value, double certified, double unit) {
    const double error = std::fabs(value - certified) / (certified == 0 ? unit : std::fabs(certified));
    return error > 0 ? std::min(15.0, -std::log10(error)) : 15;
}

}  // namespace

// NIST Statistical Reference Datasets, linear regression, certified coefficients and standard errors (public domain),
// raw rows. Per problem the digits that must agree, half a digit or more below what was reached with g++ 12:
// coefficients 12.3, 11.9, 12.1, 7.0, 9.6, 7.0; standard errors 10.7, 10.2, 13.5, exact, exact, 10.2. Cross-products
// cost the square of the condition number (powers 1 to 5 of 0 .. 20 in Wampler), and a residual sum of squares that is
// 1e-5 of the total costs five digits of the standard errors.
TEST_CASE("certified regressions are met to the digits that their condition leaves", "[theory]") {
    struct Case {
        const char* name;
        double coefficient_digits, error_digits;
    };
    const auto certified = nlohmann::json::parse(file_text("reference/open_data/nist/certified.json"));
    for (const Case& c : {Case{"Norris", 11.5, 10}, Case{"Pontius", 11, 9.5}, Case{"Longley", 11.5, 12},
                          Case{"Wampler1", 6.5, 7}, Case{"Wampler2", 8.5, 7}, Case{"Wampler3", 6.5, 9.5}}) {
        const auto& known = certified.at(c.name);
        const auto b = known.at("b").get<std::vector<std::string>>();
        const auto se = known.at("se").get<std::vector<std::string>>();
        const CrossProducts sums = sums_by_sample(certified_rows(c.name, static_cast<Index>(b.size())));
        LeastSquares solution;
        solution.solve(sums);
        REQUIRE(solution.full_rank());
        CHECK(solution.rank() == static_cast<int>(b.size()));
        const MatrixXd inverse = solution.inverse();
        const double variance = solution.sse(sums) / (sums.n - static_cast<double>(b.size()));
        double worst = 15, worst_error = 15;
        for (std::size_t k = 0; k < b.size(); ++k) {
            const Index j = static_cast<Index>(k) - 1;
            const double factor = k == 0 ? 1 / sums.n + sums.mean_x.dot(inverse * sums.mean_x) : inverse(j, j);
            worst =
                std::min(worst, digits(k == 0 ? solution.intercept()(0) : solution.slopes()(j, 0), std::stod(b[k]), 1));
            worst_error = std::min(worst_error, digits(std::sqrt(variance * factor), std::stod(se[k]),
                                                       std::sqrt(sums.yy(0) / (sums.n - 1))));
        }
        INFO(c.name << ": " << worst << " digits of the coefficients, " << worst_error << " of the standard errors");
        CHECK(worst >= c.coefficient_digits);
        CHECK(worst_error >= c.error_digits);
    }
}

TEST_CASE("a full-rank design gives the same coefficients as an orthogonal decomposition of the raw rows", "[theory]") {
    RandomStream stream(1, Purpose::simulation, 0);
    for (const Index c : {1, 2, 5, 9}) {
        MatrixXd x(40, c), y(40, 3);
        for (Index k = 0; k < x.size(); ++k) x.data()[k] = 3 + bell(stream);
        for (Index k = 0; k < y.size(); ++k) y.data()[k] = bell(stream) + x.data()[k % x.size()];
        const CrossProducts sums = sums_of(x, y);
        LeastSquares solution;
        solution.solve(sums);
        MatrixXd design(40, c + 1);
        design << VectorXd::Ones(40), x;
        const MatrixXd other = design.householderQr().solve(y);
        CHECK((solution.intercept() - other.row(0).transpose()).cwiseAbs().maxCoeff() < 1e-12);
        CHECK((solution.slopes() - other.bottomRows(c)).cwiseAbs().maxCoeff() < 1e-12);
        for (int k = 0; k < 3; ++k)
            CHECK(solution.sse(sums, k) == Approx((y.col(k) - design * other.col(k)).squaredNorm()).epsilon(1e-12));
        CHECK((solution.inverse() * sums.xx - MatrixXd::Identity(c, c)).cwiseAbs().maxCoeff() < 1e-12);
    }
}

// The four conditions that define the generalised inverse (Penrose 1955): with one outcome per row, each 1 there and 0
// elsewhere, the coefficients are the columns of the inverse of [1, X].
TEST_CASE("rank-deficient designs give the solution of smallest norm: Penrose's four conditions", "[theory]") {
    RandomStream stream(2, Purpose::simulation, 0);
    const auto noise = [&](Index n, Index c) {
        MatrixXd x(n, c);
        for (Index k = 0; k < x.size(); ++k) x.data()[k] = 0.5 + bell(stream);
        return x;
    };
    struct Case {
        std::string what;
        MatrixXd x;
        int rank;
    };
    std::vector<Case> cases;
    MatrixXd x = noise(12, 4);
    x.col(3) = x.col(1);
    cases.push_back({"a column twice", x, 4});
    x = noise(12, 4);
    x.col(2) = 2 * x.col(0) - 3 * x.col(1);
    cases.push_back({"a column that two others make", x, 4});
    x = noise(12, 5);
    x.col(4) = x.col(0) + x.col(1);
    x.col(3) = x.col(0) - x.col(2);
    cases.push_back({"two such columns", x, 4});
    x = MatrixXd::Zero(12, 3);
    for (Index i = 0; i < 12; ++i) x(i, i % 3) = 1;
    cases.push_back({"all levels of a category", x, 3});
    x = noise(12, 3);
    x.col(1).setConstant(4);
    cases.push_back({"a constant column", x, 3});
    x = noise(12, 3);
    x.col(1).setZero();
    cases.push_back({"a column of zeros", x, 3});
    cases.push_back({"nothing varies", MatrixXd::Constant(5, 2, 3), 1});
    cases.push_back({"more columns than rows", noise(6, 9), 6});
    cases.push_back({"far more columns than rows", noise(4, 20), 4});
    for (const Case& c : cases) {
        INFO(c.what);
        const Index n = c.x.rows(), p = c.x.cols();
        LeastSquares solution;
        const CrossProducts sums = sums_of(c.x, MatrixXd::Identity(n, n));
        solution.solve(sums);
        CHECK(solution.rank() == c.rank);
        CHECK_FALSE(solution.full_rank());
        MatrixXd a(n, p + 1), inverse(p + 1, n);
        a << VectorXd::Ones(n), c.x;
        inverse << solution.intercept().transpose(), solution.slopes();
        const double size = a.norm() * inverse.norm();
        CHECK((a * inverse * a - a).norm() < 1e-12 * size * a.norm());
        CHECK((inverse * a * inverse - inverse).norm() < 1e-12 * size * inverse.norm());
        CHECK((a * inverse - (a * inverse).transpose()).norm() < 1e-12 * size);
        CHECK((inverse * a - (inverse * a).transpose()).norm() < 1e-12 * size);
        // The second way: a complete orthogonal decomposition of the raw rows.
        const MatrixXd other = a.completeOrthogonalDecomposition().pseudoInverse();
        CHECK((inverse - other).norm() < 1e-10 * other.norm());
    }
}

TEST_CASE("no predictor leaves the mean, and a perfect fit has a residual of zero, never below", "[theory]") {
    const VectorXd y = VectorXd::LinSpaced(7, 1, 4);
    LeastSquares solution;
    CrossProducts none = sums_of(MatrixXd(7, 0), y);
    solution.solve(none);
    CHECK(solution.intercept()(0) == Approx(2.5).epsilon(1e-15));
    CHECK(solution.full_rank());
    CHECK(solution.sse(none) == Approx(none.yy(0)).epsilon(1e-15));
    CrossProducts perfect = sums_of(2 * y.array() + 1, y);
    solution.solve(perfect);
    CHECK(solution.slopes()(0, 0) == Approx(0.5).epsilon(1e-14));
    CHECK(solution.sse(perfect) >= 0);
    CHECK(solution.sse(perfect) < 1e-14 * perfect.yy(0));
}
