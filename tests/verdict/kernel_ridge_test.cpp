#include "verdict/kernel_ridge.hpp"
#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include <Eigen/Eigenvalues>

#include <map>

using namespace rivalfold;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

MatrixXd random_matrix(Index rows, Index columns, std::uint32_t stream_number) {
    RandomStream stream(11, Purpose::simulation, stream_number);
    MatrixXd out(rows, columns);
    for (Index j = 0; j < columns; ++j)
        for (Index i = 0; i < rows; ++i) out(i, j) = bell(stream);
    return out;
}

double largest(const MatrixXd& x) { return x.cwiseAbs().maxCoeff(); }

MatrixXd without_row(const MatrixXd& x, Index row) {
    MatrixXd out(x.rows() - 1, x.cols());
    out << x.topRows(row), x.bottomRows(x.rows() - row - 1);
    return out;
}

MatrixXd refitted_without_each(const MatrixXd& x, const MatrixXd& y, double length, double penalty) {
    MatrixXd out(y.rows(), y.cols());
    for (Index i = 0; i < x.rows(); ++i) {
        const MatrixXd others = without_row(x, i);
        const KernelRidge fit = fit_kernel_ridge(gaussian_kernel(others, others, length), without_row(y, i), penalty);
        out.row(i) = y.row(i) - fit.predict(gaussian_kernel(x.row(i), others, length));
    }
    return out;
}

/// Columns `names` of linnerud.csv.
MatrixXd linnerud(const std::vector<std::string>& names) {
    const auto cells = frozen_cells("reference/outside/linnerud.csv");
    MatrixXd out(static_cast<Index>(cells.size()) - 1, static_cast<Index>(names.size()));
    for (std::size_t j = 0; j < names.size(); ++j) {
        const auto at =
            static_cast<std::size_t>(std::find(cells[0].begin(), cells[0].end(), names[j]) - cells[0].begin());
        for (std::size_t i = 1; i < cells.size(); ++i)
            out(static_cast<Index>(i) - 1, static_cast<Index>(j)) = std::stod(cells[i].at(at));
    }
    return out;
}

}  // namespace

// scikit-learn's KernelRidge on kernels from KernelCenterer: tests/reference/outside/kernel_ridge.py.
TEST_CASE("predictions and leave-one-out residuals are those of scikit-learn", "[verdict]") {
    const MatrixXd raw = linnerud({"Chins", "Situps", "Jumps"}), targets = linnerud({"Weight", "Waist", "Pulse"});
    const Eigen::RowVectorXd mean = raw.topRows(15).colwise().mean();
    MatrixXd z = raw.rowwise() - mean;
    const Eigen::RowVectorXd sd = (z.topRows(15).colwise().squaredNorm() / 14).cwiseSqrt();
    z.array().rowwise() /= sd.array();
    const MatrixXd train = z.topRows(15), y = targets.topRows(15);
    const auto cells = frozen_cells("reference/outside/kernel_ridge.csv");
    REQUIRE(cells.size() == 1 + 9 * 20);
    for (std::size_t line = 1; line < cells.size(); line += 20) {
        const double length = std::stod(cells[line][0]), penalty = std::stod(cells[line][1]);
        const MatrixXd kernel = gaussian_kernel(train, train, length);
        MatrixXd mine(20, 3), frozen(20, 3);
        mine << fit_kernel_ridge(kernel, y, penalty).predict(gaussian_kernel(z.bottomRows(5), train, length)),
            LeaveOneOut(kernel, y).residuals(penalty);
        for (Index i = 0; i < 20; ++i)
            for (Index j = 0; j < 3; ++j)
                frozen(i, j) = std::stod(cells[line + static_cast<std::size_t>(i)][4 + static_cast<std::size_t>(j)]);
        INFO("length " << length << ", penalty " << penalty);
        CHECK(cells[line][2] == "prediction");
        CHECK(cells[line + 5][2] == "left out");
        CHECK(largest(mine - frozen) < 1e-9 * largest(frozen));
    }
}

TEST_CASE("leave-one-out residuals are those of refits without each row", "[verdict]") {
    MatrixXd x = random_matrix(40, 4, 1);
    x.row(17) = x.row(3);       // equal rows
    x.row(39).setConstant(50);  // a row far from all others
    const MatrixXd y = 1e3 + random_matrix(40, 2, 2).array();
    for (const double length : {0.3, 2.0, 30.0}) {
        const LeaveOneOut left_out(gaussian_kernel(x, x, length), y);
        for (const double penalty : {1e-4, 1e-2, 1.0, 1e4}) {
            INFO("length " << length << ", penalty " << penalty);
            CHECK(largest(left_out.residuals(penalty) - refitted_without_each(x, y, length, penalty)) < 1e-9);
        }
    }
}

// Rifkin & Lippert (2007): from the eigendecomposition of the centred kernel.
TEST_CASE("leave-one-out residuals are those of an eigendecomposition", "[verdict]") {
    const MatrixXd x = random_matrix(60, 3, 3), y = random_matrix(60, 3, 4);
    const MatrixXd kernel = gaussian_kernel(x, x, 1.5);
    const MatrixXd centring = MatrixXd::Identity(60, 60).array() - 1.0 / 60;
    const Eigen::SelfAdjointEigenSolver<MatrixXd> eigen(centring * kernel * centring);
    const LeaveOneOut left_out(kernel, y);
    for (const double penalty : {1e-3, 1.0, 100.0}) {
        const VectorXd kept = eigen.eigenvalues().array() / (eigen.eigenvalues().array() + penalty);
        const MatrixXd hat =
            (eigen.eigenvectors() * kept.asDiagonal() * eigen.eigenvectors().transpose()).array() + 1.0 / 60;
        MatrixXd expected = y - hat * y;
        expected.array().colwise() /= 1 - hat.diagonal().array();
        CHECK(largest(left_out.residuals(penalty) - expected) < 1e-10);
    }
}

TEST_CASE("the smallest training sets have leave-one-out residuals", "[verdict]") {
    const MatrixXd x = random_matrix(2, 2, 5);
    MatrixXd y(2, 1);
    y << 3, 5;
    const MatrixXd residuals = LeaveOneOut(gaussian_kernel(x, x, 1), y).residuals(0.1);
    CHECK(residuals(0, 0) == Approx(-2).epsilon(1e-12));  // the other row alone predicts its own value
    CHECK(residuals(1, 0) == Approx(2).epsilon(1e-12));
}

TEST_CASE("a huge penalty predicts the mean, a tiny one the training outcomes", "[verdict]") {
    const MatrixXd x = random_matrix(30, 2, 6), y = random_matrix(30, 2, 7);
    const MatrixXd kernel = gaussian_kernel(x, x, 0.5), cross = gaussian_kernel(random_matrix(5, 2, 8), x, 0.5);
    const MatrixXd far = fit_kernel_ridge(kernel, y, 1e12).predict(cross);
    CHECK(largest(far.rowwise() - y.colwise().mean()) < 1e-9);
    CHECK(largest(fit_kernel_ridge(kernel, y, 1e-10).predict(kernel) - y) < 1e-3);
    // The intercept bears no penalty: moving the outcomes moves the predictions alike.
    const MatrixXd here = fit_kernel_ridge(kernel, y, 3).predict(cross),
                   there = fit_kernel_ridge(kernel, y.array() + 1e4, 3).predict(cross);
    CHECK(largest((there - here).array() - 1e4) < 1e-9);
    CHECK(largest(fit_kernel_ridge(kernel, y, 3).dual.colwise().sum()) < 1e-12);
}

TEST_CASE("the Gaussian kernel has its values, and only the lower triangle of a kernel is read", "[verdict]") {
    MatrixXd x(2, 2), y(1, 2);
    x << 0, 0, 3, 4;
    y << 3, 4;
    const MatrixXd kernel = gaussian_kernel(x, y, 5);
    CHECK(kernel(0, 0) == Approx(std::exp(-0.5)).epsilon(1e-15));
    CHECK(kernel(1, 0) == 1);
    const MatrixXd points = random_matrix(12, 2, 9), outcomes = random_matrix(12, 1, 10);
    const MatrixXd whole = gaussian_kernel(points, points, 1);
    const MatrixXd lower = whole.triangularView<Eigen::Lower>();
    CHECK(fit_kernel_ridge(lower, outcomes, 0.3).dual == fit_kernel_ridge(whole, outcomes, 0.3).dual);
}

TEST_CASE("the median distance is that of the pairs of rows", "[verdict]") {
    MatrixXd three(3, 1), four(4, 1);
    three << 0, 1, 5;      // 1, 4, 5
    four << 0, 1, 5, 100;  // 1, 4, 5, 95, 99, 100
    CHECK(median_distance(three) == Approx(4).epsilon(1e-14));
    CHECK(median_distance(four) == Approx(50).epsilon(1e-14));
    // Most rows alike: the root mean square distance. Of 10 pairs 4 lie 2 apart.
    MatrixXd alike = MatrixXd::Constant(5, 3, 0.1);
    alike(4, 1) += 2;
    CHECK(median_distance(alike) == Approx(std::sqrt(1.6)).epsilon(1e-12));
    CHECK(median_distance(MatrixXd::Constant(5, 3, 0.1)) == 1);
}
