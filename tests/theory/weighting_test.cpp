#include "fitted.hpp"
#include "support/catch.hpp"

#include <Eigen/QR>

using namespace rivalfold;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

std::string study(const std::string& constructs, const std::string& equations, const std::string& settings = "") {
    return "study: refits\ndata: {file: refits.csv}\nconstructs:\n" + constructs + "target: delivery\n" + settings +
           "theories:\n  - {name: one, equations: " + equations +
           "}\n  - {name: two, equations: {delivery: [planning]}}\ntrial: {folds: 5, repeats: 2}\n";
}

const char* const kConstructs = R"(  planning: {indicators: ["pln*"]}
  skill: {indicators: ["skl*"], weights: mode_b}
  supply: {indicators: ["sup*"]}
  delivery: {indicators: ["dlv*"]}
)";

/// Columns named a to d of +-1 in every combination, and sums of them: correlations that are exact fractions.
Answers crossed_columns(const std::vector<std::pair<std::string, Eigen::Vector4d>>& wanted) {
    Answers out;
    out.values.resize(16, static_cast<Index>(wanted.size()));
    for (std::size_t j = 0; j < wanted.size(); ++j) {
        out.names.push_back(wanted[j].first);
        for (int i = 0; i < 16; ++i) {
            double value = 0;
            for (int k = 0; k < 4; ++k) value += wanted[j].second(k) * ((i >> k & 1) != 0 ? 1 : -1);
            out.values(i, static_cast<Index>(j)) = value;
        }
    }
    return out;
}

}  // namespace

// Wold 1982; Lohmoeller 1989, ch. 2: what the iteration must leave unchanged, from raw rows and an orthogonal
// decomposition.
TEST_CASE("settled weights reproduce themselves on the path scheme", "[theory]") {
    const Answers answers = invented_answers(150);
    const Fitted fitted = fit_all(
        prepare(study(kConstructs, "{skill: [supply], delivery: [planning, skill, {product: [planning, supply]}]}"),
                answers.csv()),
        0);
    REQUIRE(fitted.fit.status == FitStatus::fitted);
    const MatrixXd z = standardised(answers.values);
    const MatrixXd planning = z.leftCols(3), skill = z.middleCols(3, 3), supply = z.middleCols(6, 2),
                   delivery = z.rightCols(3);
    const auto score = [&](const MatrixXd& block, const char* name) -> VectorXd {
        return block * fitted.weights(name);
    };
    const VectorXd p = score(planning, "planning"), k = score(skill, "skill"), s = score(supply, "supply"),
                   d = score(delivery, "delivery");
    const double df = static_cast<double>(z.rows() - 1);
    for (const VectorXd& x : {p, k, s, d}) CHECK(x.squaredNorm() / df == Approx(1).epsilon(1e-12));
    const auto correlation = [&](const VectorXd& a, const VectorXd& b) { return a.dot(b) / df; };
    // The product counts as a path from each of its members.
    MatrixXd predecessors(z.rows(), 3);
    predecessors << p, k, s;
    const VectorXd b = predecessors.householderQr().solve(d);
    const auto check = [&](const MatrixXd& block, const char* name, const VectorXd& proxy, bool mode_b) {
        VectorXd expected = block.transpose() * proxy / df;
        if (mode_b) expected = block.householderQr().solve(proxy);
        expected /= std::sqrt((block * expected).squaredNorm() / df);
        CHECK((expected - fitted.weights(name)).cwiseAbs().maxCoeff() < 1e-9);
        CHECK((block.transpose() * (block * fitted.weights(name)) / df - fitted.loadings(name)).cwiseAbs().maxCoeff() <
              1e-12);
        CHECK(fitted.loadings(name).sum() > 0);
    };
    check(delivery, "delivery", predecessors * b, false);
    check(planning, "planning", correlation(p, d) * d, false);
    check(skill, "skill", correlation(k, d) * d + correlation(k, s) * s, true);
    check(supply, "supply", correlation(s, d) * d + correlation(s, k) * k, false);
}

TEST_CASE("equal weights are equal, principal ones the first eigenvector, and neither iterates", "[theory]") {
    const Answers answers = invented_answers(80);
    const Fitted fitted = fit_all(prepare(study(R"(  planning: {indicators: ["pln*"], weights: principal}
  skill: {indicators: [skl1], weights: mode_a}
  delivery: {indicators: ["dlv*"], weights: equal}
)",
                                                "{delivery: [planning, skill]}"),
                                          answers.csv()),
                                  0);
    REQUIRE(fitted.fit.status == FitStatus::fitted);
    CHECK(fitted.fit.rounds == 0);
    const MatrixXd z = standardised(answers.values);
    const double df = 79;
    const MatrixXd r = z.rightCols(3).transpose() * z.rightCols(3) / df;
    CHECK((fitted.weights("delivery") - VectorXd::Constant(3, 1 / std::sqrt(r.sum()))).cwiseAbs().maxCoeff() < 1e-14);
    CHECK(fitted.weights("skill") == VectorXd::Ones(1));
    CHECK(fitted.loadings("skill")(0) == Approx(1).epsilon(1e-15));
    // Hotelling 1933, by the power method.
    const MatrixXd inside = z.leftCols(3).transpose() * z.leftCols(3) / df;
    VectorXd w = VectorXd::Ones(3);
    for (int round = 0; round < 500; ++round) w = (inside * w).normalized();
    w /= std::sqrt(w.dot(inside * w));
    CHECK((fitted.weights("planning") - w).cwiseAbs().maxCoeff() < 1e-12);
}

TEST_CASE("a construct points where its loadings add up to a positive number, whatever its relations", "[theory]") {
    Answers answers = invented_answers(80);
    for (const char* name : {"dlv1", "dlv2", "dlv3"}) answers.column(name) = 8 - answers.column(name).array();
    const Fitted fitted =
        fit_all(prepare(study(kConstructs, "{delivery: [planning, skill, supply]}"), answers.csv()), 0);
    for (const char* name : {"planning", "skill", "supply", "delivery"}) CHECK(fitted.loadings(name).sum() > 0);
    CHECK(fitted.fit.score_correlations(fitted.block("planning"), fitted.block("delivery")) < 0);
    CHECK((fitted.weights("delivery").array() > 0).all());
}

TEST_CASE("indicators that cancel each other are a failed fit with the reason", "[theory]") {
    Answers answers = invented_answers(40);
    answers.column("sup2") = 8 - answers.column("sup1").array();
    for (const char* weights : {"equal", "mode_a", "mode_b"}) {
        std::string constructs = kConstructs;
        constructs.replace(constructs.find("[\"sup*\"]"), 8, fmt::format("[\"sup*\"], weights: {}", weights));
        const Fitted fitted = fit_all(prepare(study(constructs, "{delivery: [planning, supply]}"), answers.csv()), 0);
        CHECK(fitted.fit.status == FitStatus::failed);
        CHECK(fitted.fit.reason ==
              "the indicators of \"supply\" cancel each other: their equally weighted sum does not vary; reverse the "
              "negatively keyed ones");
    }
    std::string constructs = kConstructs;
    constructs.replace(constructs.find("[\"sup*\"]"), 8, "[\"sup*\"], weights: principal");
    CHECK(fit_all(prepare(study(constructs, "{delivery: [planning, supply]}"), answers.csv()), 0).fit.status ==
          FitStatus::fitted);
}

TEST_CASE("mode B of collinear indicators is a failed fit with the reason", "[theory]") {
    Answers answers = invented_answers(40);
    answers.column("skl3") = answers.column("skl1") + 2 * answers.column("skl2");
    const SmallContest contest = prepare(study(kConstructs, "{delivery: [planning, skill]}"), answers.csv());
    const Fitted fitted = fit_all(contest, 0);
    CHECK(fitted.fit.status == FitStatus::failed);
    CHECK(fitted.fit.reason ==
          "weights: mode_b of \"skill\" needs indicators that are no linear combinations of each other; drop one or "
          "use mode_a");
    CHECK(fit_all(contest, 1).fit.status == FitStatus::fitted);
}

TEST_CASE("a construct that is uncorrelated with its neighbours is a failed fit with the reason", "[theory]") {
    const Answers answers = crossed_columns(
        {{"pln1", {1, 0, 0, 0}}, {"pln2", {1, 1, 0, 0}}, {"dlv1", {0, 0, 1, 0}}, {"dlv2", {0, 0, 1, 1}}});
    for (const std::string weights : {"mode_a", "mode_b"}) {
        const std::string constructs = "  planning: {indicators: [pln1, pln2], weights: " + weights +
                                       "}\n  delivery: {indicators: [dlv1, dlv2], weights: equal}\n";
        const Fitted fitted = fit_all(prepare(study(constructs, "{delivery: [{square: planning}]}"), answers.csv()), 0);
        CHECK(fitted.fit.status == FitStatus::failed);
        CHECK(fitted.fit.reason ==
              "\"planning\" is uncorrelated with everything it is connected to, so its indicators have no " + weights +
                  " weights; use weights: equal");
    }
}

// Two singular values of the cross-correlations are equal, so the two blocks turn each other to and fro for ever.
TEST_CASE("weights that do not settle are a failed fit that names the rounds", "[theory]") {
    const Answers answers = crossed_columns(
        {{"pln1", {1, 0, 0, 0}}, {"pln2", {0, 1, 0, 0}}, {"dlv1", {3, 4, 5, 0}}, {"dlv2", {-4, 3, 0, 5}}});
    const Fitted fitted =
        fit_all(prepare(study("  planning: {indicators: [pln1, pln2]}\n  delivery: {indicators: [dlv1, dlv2]}\n",
                              "{delivery: [{square: planning}]}"),
                        answers.csv()),
                0);
    CHECK(fitted.fit.status == FitStatus::failed);
    CHECK(fitted.fit.rounds == 3000);
    CHECK(fitted.fit.reason == "the indicator weights did not settle within 3000 rounds (last change 8.5e-01)");
}

TEST_CASE("response scores need weights of one sign", "[theory]") {
    // Two indicators that run together, of which the outcome follows the difference.
    const Answers answers = crossed_columns(
        {{"pln1", {2, 1, 0, 0}}, {"pln2", {2, -1, 0, 0}}, {"dlv1", {1, 3, 1, 0}}, {"dlv2", {0, 3, 0, 1}}});
    const std::string constructs =
        "  planning: {indicators: [pln1, pln2], weights: mode_b}\n  delivery: {indicators: [dlv1, dlv2]}\n";
    const Fitted failed =
        fit_all(prepare(study(constructs, "{delivery: [{square: planning}]}", "metric: response\n"), answers.csv()), 0);
    CHECK(failed.fit.status == FitStatus::failed);
    CHECK(failed.fit.reason ==
          "metric: response needs indicator weights of one sign, but those of \"planning\" differ in sign; reverse or "
          "drop an indicator, or use weights: equal");
    CHECK(fit_all(prepare(study(constructs, "{delivery: [{square: planning}]}"), answers.csv()), 0).fit.status ==
          FitStatus::fitted);
}

TEST_CASE("response scores are weighted means of the raw answers, standard ones have mean 0 and deviation 1",
          "[theory]") {
    const Answers answers = invented_answers(60);
    std::string constructs = kConstructs;
    constructs.erase(constructs.find(", weights: mode_b"), 17);
    const Fitted response =
        fit_all(prepare(study(constructs, "{delivery: [planning, skill]}", "metric: response\n"), answers.csv()), 0);
    REQUIRE(response.fit.status == FitStatus::fitted);
    const auto& score = response.fit.scores[static_cast<std::size_t>(response.block("planning"))];
    CHECK(score.coefficients.sum() == Approx(1).epsilon(1e-14));
    const VectorXd sd =
        ((answers.values.leftCols(3).rowwise() - answers.values.leftCols(3).colwise().mean()).colwise().squaredNorm() /
         59.0)
            .cwiseSqrt()
            .transpose();
    VectorXd w = response.weights("planning").cwiseQuotient(sd);
    w /= w.sum();
    const VectorXd raw = answers.values.leftCols(3) * w;
    CHECK((score.coefficients - w).cwiseAbs().maxCoeff() < 1e-14);
    CHECK(score.mean == Approx(raw.mean()).epsilon(1e-14));
    CHECK(score.sd == Approx(std::sqrt((raw.array() - raw.mean()).square().sum() / 59)).epsilon(1e-13));
    const Fitted standard = fit_all(prepare(study(constructs, "{delivery: [planning, skill]}"), answers.csv()), 0);
    CHECK(standard.weights("planning") == response.weights("planning"));
    CHECK(standard.fit.scores[0].mean == 0);
    CHECK(standard.fit.scores[0].sd == 1);
}
