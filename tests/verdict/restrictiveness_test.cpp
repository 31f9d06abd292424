#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include "verdict/kernel_ridge.hpp"
#include "verdict/restrictiveness.hpp"

#include <Eigen/Cholesky>
#include <Eigen/Eigenvalues>

using namespace rivalfold;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

const std::string kTheories = R"(  - {name: additive, equations: {delivery: [planning, skill, supply]}}
  - {name: amplifying, equations: {delivery: [{crossed: [planning, skill, supply]}]}}
  - {name: planning only, equations: {delivery: [planning]}}
  - {name: scarcest, equations: {delivery: [{minimum: [planning, skill, supply]}]}}
)";

struct Fitted {
    SmallContest contest;
    Trial trial;
};

Fitted fit_all(const Answers& answers, const std::string& theories, const std::string& more = "") {
    Fitted out;
    out.contest = prepare(
        "study: refits\ndata: {file: refits.csv}\nconstructs:\n  planning: {indicators: [\"pln*\"], weights: equal}\n"
        "  skill: {indicators: [\"skl*\"], weights: equal}\n  supply: {indicators: [\"sup*\"], weights: equal}\n"
        "  delivery: {indicators: [\"dlv*\"]}\ntarget: delivery\n" +
            more + "theories:\n" + theories + "trial: {folds: 5, repeats: 1}\n",
        answers.csv());
    out.trial = fit_all_rows(out.contest.study, out.contest.survey, *out.contest.sample, 1);
    return out;
}

RestrictivenessReport restrictiveness(const Fitted& fitted, std::size_t most_rows = 1500) {
    return measure_restrictiveness(fitted.contest.study, *fitted.contest.sample, fitted.trial, most_rows);
}

/// Equally weighted standardised indicators, standardised.
VectorXd score(const Answers& answers, const std::vector<std::string>& names) {
    VectorXd sum = VectorXd::Zero(answers.values.rows());
    for (const std::string& name : names) {
        const VectorXd x = answers.values.col(answers.at(name)).array() - answers.values.col(answers.at(name)).mean();
        sum += x / x.norm();
    }
    return sum * std::sqrt(static_cast<double>(sum.size())) / sum.norm();
}

}  // namespace

TEST_CASE("a theory with more free terms is less restrictive", "[verdict]") {
    const RestrictivenessReport report = restrictiveness(fit_all(invented_answers(200), kTheories));
    REQUIRE(report.theories.size() == 4);
    CHECK(report.antecedents == std::vector<std::string>{"planning", "skill", "supply"});
    CHECK(report.rows == 200);
    const auto value = [&](std::size_t t) { return report.theories[t].value; };
    CHECK(value(1) < value(0) - 0.1);
    CHECK(value(0) < value(2) - 0.1);
    CHECK(value(0) < value(3) - 0.1);
    for (const Restrictiveness& theory : report.theories) {
        CHECK((theory.value > 0 && theory.value < 1));
        CHECK((theory.standard_error > 0 && theory.standard_error < 0.03));
    }
}

TEST_CASE("restrictiveness agrees with other draws, made from the kernel's eigenvectors, and plain projections",
          "[verdict]") {
    const Answers answers = invented_answers(150);
    const RestrictivenessReport report = restrictiveness(fit_all(answers, kTheories));
    MatrixXd x(150, 3);
    x << score(answers, {"pln1", "pln2", "pln3"}), score(answers, {"skl1", "skl2", "skl3"}),
        score(answers, {"sup1", "sup2"});
    const Eigen::SelfAdjointEigenSolver<MatrixXd> eigen(gaussian_kernel(x, x, median_distance(x)));
    MatrixXd draws(150, 1000);
    RandomStream stream(2, Purpose::simulation, 1);
    for (double& value : draws.reshaped()) value = bell(stream);
    draws = eigen.eigenvectors() * eigen.eigenvalues().cwiseMax(0).cwiseSqrt().asDiagonal() * draws;
    draws = draws.rowwise() - draws.colwise().mean();
    const auto expected = [&](const MatrixXd& columns) {
        const MatrixXd centred = columns.rowwise() - columns.colwise().mean();
        const MatrixXd left =
            draws - centred * (centred.transpose() * centred).ldlt().solve(centred.transpose() * draws);
        return (left.colwise().squaredNorm().array() / draws.colwise().squaredNorm().array()).mean();
    };
    MatrixXd crossed(150, 7);
    crossed << x, x.col(0).cwiseProduct(x.col(1)), x.col(0).cwiseProduct(x.col(2)), x.col(1).cwiseProduct(x.col(2)),
        x.rowwise().prod();
    const double theirs[] = {expected(x), expected(crossed), expected(x.col(0)), expected(x.rowwise().minCoeff())};
    for (std::size_t t = 0; t < 4; ++t) {
        INFO(t << ": " << report.theories[t].value << ", other draws " << theirs[t]);
        CHECK(std::fabs(report.theories[t].value - theirs[t]) < 4 * report.theories[t].standard_error);
    }
}

TEST_CASE("a theory with as many terms as rows could fit anything", "[verdict]") {
    const RestrictivenessReport report = restrictiveness(fit_all(invented_answers(8), kTheories));
    CHECK(report.theories[1].value < 1e-8);  // seven terms and an intercept, eight rows
    CHECK(report.theories[2].value > 0.1);
}

TEST_CASE("the outcome plays no part in restrictiveness", "[verdict]") {
    Answers answers = invented_answers(100);
    const RestrictivenessReport before = restrictiveness(fit_all(answers, kTheories));
    answers.values.rightCols(3) = answers.values.rightCols(3).rowwise().reverse().array().square() +
                                  3 * answers.values.col(0).replicate(1, 3).array();
    const RestrictivenessReport after = restrictiveness(fit_all(answers, kTheories));
    for (std::size_t t = 0; t < 4; ++t)
        CHECK(after.theories[t].value == Approx(before.theories[t].value).epsilon(1e-9));
}

TEST_CASE("controls are fitted with each theory, and are no antecedents of the random outcomes", "[verdict]") {
    const std::string theories =
        "  - {name: first, equations: {delivery: [planning]}}\n  - {name: second, equations: {delivery: [{square: "
        "planning}, planning]}}\n";
    const Answers answers = invented_answers(100);
    const RestrictivenessReport plain = restrictiveness(fit_all(answers, theories));
    const RestrictivenessReport controlled = restrictiveness(fit_all(answers, theories, "controls: [skill]\n"));
    CHECK(controlled.antecedents == std::vector<std::string>{"planning"});
    for (std::size_t t = 0; t < 2; ++t) CHECK(controlled.theories[t].value < plain.theories[t].value);
    CHECK(controlled.theories[0].value > plain.theories[0].value - 0.05);  // the same outcomes, one more column
}

TEST_CASE("more rows than the limit are thinned from the seed", "[verdict]") {
    const Fitted fitted = fit_all(invented_answers(300), kTheories);
    const RestrictivenessReport few = restrictiveness(fitted, 120), all = restrictiveness(fitted, 300);
    CHECK(few.rows == 120);
    CHECK(all.rows == 300);
    CHECK(few.theories[0].value == Approx(all.theories[0].value).margin(0.08));
    CHECK(few.theories[0].value != all.theories[0].value);
    CHECK(restrictiveness(fitted, 120).theories[0].value == few.theories[0].value);
}
