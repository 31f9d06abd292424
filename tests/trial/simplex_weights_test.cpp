#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include "trial/simplex_weights.hpp"

#include <nlohmann/json.hpp>

#include <Eigen/LU>

using namespace rivalfold;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

VectorXd vector_of(const nlohmann::json& values) {
    const auto numbers = values.get<std::vector<double>>();
    return Eigen::Map<const VectorXd>(numbers.data(), static_cast<Index>(numbers.size()));
}

MatrixXd matrix_of(const nlohmann::json& rows) {
    MatrixXd out(static_cast<Index>(rows.size()), static_cast<Index>(rows.size()));
    for (Index i = 0; i < out.rows(); ++i) out.row(i) = vector_of(rows[static_cast<std::size_t>(i)]).transpose();
    return out;
}

nlohmann::json frozen_cases() {
    const auto cases = nlohmann::json::parse(file_text("reference/outside/simplex_weights.json"));
    REQUIRE(cases.size() == 12);
    return cases;
}

/// Sums of products of m columns of n invented errors; `alike` is the share that they have in common.
MatrixXd products(Index m, double alike, std::uint32_t draw) {
    RandomStream stream(31, Purpose::simulation, draw);
    MatrixXd e(40, m);
    for (Index i = 0; i < e.rows(); ++i) {
        const double common = bell(stream);
        for (Index j = 0; j < m; ++j) e(i, j) = alike * common + (1 - alike) * bell(stream);
    }
    return e.transpose() * e;
}

/// The minimum of w'Gw over the simplex by trying every set of positive weights: each solves a linear system.
double smallest_spread(const MatrixXd& g) {
    double best = g.diagonal().minCoeff();
    for (unsigned set = 1; set < 1u << g.rows(); ++set) {
        std::vector<Index> in;
        for (Index j = 0; j < g.rows(); ++j)
            if (set >> j & 1u) in.push_back(j);
        const MatrixXd part = g(in, in);
        const VectorXd x = part.fullPivLu().solve(VectorXd::Ones(part.rows()));
        if (x.minCoeff() > 0) best = std::min(best, 1 / x.sum());  // w = x / sum x, w'Gw = 1 / sum x
    }
    return best;
}

}  // namespace

// Frozen in tests/reference/outside/simplex_weights.py: scipy.optimize.nnls.
TEST_CASE("non-negative least squares are those of scipy", "[simplex]") {
    for (const auto& item : frozen_cases()) {
        INFO(item["name"].get<std::string>());
        const MatrixXd g = matrix_of(item["g"]);
        const VectorXd b = vector_of(item["b"]);
        const VectorXd x = nonnegative_least_squares(g, b);
        REQUIRE(x.size() == b.size());
        CHECK(x.minCoeff() >= 0);
        if (item["x"].is_null()) continue;
        const VectorXd expected = vector_of(item["x"]);
        for (Index j = 0; j < x.size(); ++j) {
            CHECK(x(j) == Approx(expected(j)).margin(1e-12).epsilon(1e-12));
            CHECK((x(j) == 0) == (expected(j) == 0));
        }
    }
}

// Karush-Kuhn-Tucker: the gradient Gx - b is 0 where x > 0 and at least 0 elsewhere. Holds also where x is not unique.
TEST_CASE("at a non-negative solution no step lowers the squared error", "[simplex]") {
    for (const auto& item : frozen_cases()) {
        INFO(item["name"].get<std::string>());
        const MatrixXd g = matrix_of(item["g"]);
        const VectorXd b = vector_of(item["b"]);
        const VectorXd x = nonnegative_least_squares(g, b);
        const VectorXd gradient = g * x - b;
        const double scale = g.diagonal().maxCoeff() + b.cwiseAbs().maxCoeff();
        for (Index j = 0; j < x.size(); ++j) {
            CHECK(gradient(j) > -1e-9 * scale);
            if (x(j) > 0) CHECK(std::fabs(gradient(j)) < 1e-9 * scale);
        }
    }
}

// Frozen: scipy.optimize.nnls with a row for the sum (exact), and SLSQP on the simplex to seven digits.
TEST_CASE("stacking weights are those of scipy, by two routes", "[simplex]") {
    for (const auto& item : frozen_cases()) {
        INFO(item["name"].get<std::string>());
        const MatrixXd g = matrix_of(item["g"]);
        const VectorXd w = stacking_weights(g);
        CHECK(w.minCoeff() >= 0);
        CHECK(w.sum() == Approx(1).epsilon(1e-14));
        CHECK(w.dot(g * w) == Approx(item["spread"].get<double>()).epsilon(1e-10));
        if (item["weights"].is_null()) continue;
        const VectorXd expected = vector_of(item["weights"]), by_slsqp = vector_of(item["slsqp"]);
        for (Index j = 0; j < w.size(); ++j) {
            CHECK(w(j) == Approx(expected(j)).margin(1e-12));
            CHECK(w(j) == Approx(by_slsqp(j)).margin(1e-6));
        }
    }
}

TEST_CASE("stacking weights have the smallest spread of all combinations, however alike the theories", "[simplex]") {
    std::uint32_t draw = 0;
    for (const double alike : {0.0, 0.5, 0.9, 0.99, 0.9999})
        for (Index m = 1; m <= 6; ++m) {
            const MatrixXd g = products(m, alike, ++draw);
            const VectorXd w = stacking_weights(g);
            INFO("alike " << alike << ", " << m << " theories");
            REQUIRE(w.size() == m);
            CHECK(w.minCoeff() >= 0);
            CHECK(w.sum() == Approx(1).epsilon(1e-14));
            CHECK(w.dot(g * w) == Approx(smallest_spread(g)).epsilon(1e-9));
        }
}

TEST_CASE("two theories share by the textbook formula, uncorrelated ones in inverse proportion to their squared errors",
          "[simplex]") {
    MatrixXd g(2, 2);
    g << 4, 1, 1, 2;  // w1 = (g22 - g12) / (g11 + g22 - 2 g12)
    CHECK(stacking_weights(g)(0) == Approx(0.25).margin(1e-13));
    g << 4, 2.5, 2.5, 2;  // the covariance exceeds the smaller variance: all weight on one
    CHECK(stacking_weights(g)(0) == 0);
    CHECK(stacking_weights(g)(1) == 1);
    const VectorXd w = stacking_weights(Eigen::Vector3d(1, 2, 4).asDiagonal());
    CHECK(w(0) == Approx(4.0 / 7).margin(1e-13));
    CHECK(w(1) == Approx(2.0 / 7).margin(1e-13));
    CHECK(w(2) == Approx(1.0 / 7).margin(1e-13));
}

TEST_CASE("stacking weights do not depend on the unit of the errors", "[simplex]") {
    const MatrixXd g = products(5, 0.8, 100);
    const VectorXd w = stacking_weights(g);
    for (const double unit : {1e-12, 1e-3, 1e9}) {
        const VectorXd scaled = stacking_weights(g * unit);
        for (Index j = 0; j < w.size(); ++j) CHECK(scaled(j) == Approx(w(j)).margin(1e-13));
    }
}

TEST_CASE("theories that predict the same share a weight that is theirs together", "[simplex]") {
    const MatrixXd g = products(3, 0.5, 101);
    const std::vector<Index> twice{0, 1, 2, 1};
    const VectorXd alone = stacking_weights(g), doubled = stacking_weights(g(twice, twice));
    CHECK(doubled.allFinite());
    CHECK(doubled.minCoeff() >= 0);
    CHECK(doubled(0) == Approx(alone(0)).margin(1e-12));
    CHECK(doubled(1) + doubled(3) == Approx(alone(1)).margin(1e-12));
    const VectorXd same = stacking_weights(MatrixXd::Constant(3, 3, 2.5));
    CHECK(same.allFinite());
    CHECK(same.minCoeff() >= 0);
    CHECK(same.sum() == Approx(1).epsilon(1e-14));
}

TEST_CASE("theories without any error have weights all the same", "[simplex]") {
    const VectorXd w = stacking_weights(MatrixXd::Zero(3, 3));
    CHECK(w.allFinite());
    CHECK(w.minCoeff() >= 0);
    CHECK(w.sum() == Approx(1).epsilon(1e-14));
}
