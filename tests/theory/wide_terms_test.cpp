#include "fitted.hpp"
#include "support/catch.hpp"

#include "rivalfold/theory/blueprint.hpp"
#include "rivalfold/theory/least_squares.hpp"

#include <set>

using namespace rivalfold;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

constexpr int kMembers = 20;
constexpr Index kRows = 40;

/// Twenty one-item scores q1 .. q20 and an outcome.
Answers twenty() {
    RandomStream stream(81, Purpose::simulation, 0);
    Answers out;
    for (int k = 1; k <= kMembers; ++k) out.names.push_back(fmt::format("q{}", k));
    out.names.push_back("y");
    out.values.resize(kRows, kMembers + 1);
    for (Index k = 0; k < out.values.size(); ++k) out.values.data()[k] = 1 + bell(stream) / 10;
    return out;
}

std::string study_of_twenty(const std::string& kind) {
    std::string constructs, members;
    for (int k = 1; k <= kMembers; ++k) {
        constructs += fmt::format("  s{0}: {{indicators: [q{0}]}}\n", k);
        members += fmt::format("{}s{}", k > 1 ? ", " : "", k);
    }
    return "study: refits\ndata: {file: refits.csv}\nmetric: response\nconstructs:\n" + constructs +
           "  y: {indicators: [y]}\ntarget: y\ntrial: {folds: 5, repeats: 2}\ntheories:\n  - {name: wide, equations: "
           "{y: [{" +
           kind + ": [" + members + "]}]}}\n  - {name: one, equations: {y: [s1]}}\n";
}

/// A study of a product of categories with these numbers of levels; every level stands in the data.
std::string fault_of_product(const std::vector<int>& levels) {
    std::string constructs, members, header = "y,x";
    for (std::size_t k = 0; k < levels.size(); ++k) {
        header += fmt::format(",k{}", k + 1);
        constructs += fmt::format("  c{0}: {{category: k{0}}}\n", k + 1);
        members += fmt::format("{}c{}", k > 0 ? ", " : "", k + 1);
    }
    std::string data = header + "\n";
    for (int row = 0; row < 120; ++row) {
        data += fmt::format("{},{}", row * row % 17, row % 5);
        for (const int n : levels) data += fmt::format(",v{}", row % n);
        data += "\n";
    }
    const std::string study = "study: refits\ndata: {file: refits.csv}\nconstructs:\n" + constructs +
                              "  x: {indicators: [x]}\n  y: {indicators: [y]}\ntarget: y\ntrial: {folds: 5}\n"
                              "theories:\n  - {name: one, equations: {y: [x]}}\n  - name: wide\n    equations:\n"
                              "      y:\n        - x\n        - product: [" +
                              members + "]\n";
    return fault_of([&] {
        const SmallContest contest = prepare(study, data);
        build_blueprints(contest.study, contest.survey, *contest.sample);
    });
}

CrossProducts sums_of(const MatrixXd& x) {
    CrossProducts sums;
    const VectorXd y = VectorXd::LinSpaced(x.rows(), -1, 2).cwiseAbs2();
    sums.n = static_cast<double>(x.rows());
    sums.mean_x = x.colwise().mean().transpose();
    sums.mean_y = VectorXd::Constant(1, y.mean());
    const MatrixXd cx = x.rowwise() - sums.mean_x.transpose();
    sums.xx = cx.transpose() * cx;
    sums.xy = cx.transpose() * (y.array() - y.mean()).matrix();
    sums.yy = VectorXd::Constant(1, (y.array() - y.mean()).matrix().squaredNorm());
    sums.scale = x.colwise().squaredNorm().transpose();
    return sums;
}

std::vector<Index> dependent_of(const MatrixXd& x) {
    LeastSquares solution;
    solution.solve(sums_of(x));
    return solution.dependent();
}

MatrixXd noise(Index columns) {
    RandomStream stream(82, Purpose::simulation, 0);
    MatrixXd x(15, columns);
    for (Index k = 0; k < x.size(); ++k) x.data()[k] = 0.5 + bell(stream);
    return x;
}

}  // namespace

TEST_CASE("a minimum, a maximum and a product of twenty scores have their value in every row", "[theory]") {
    const Answers answers = twenty();
    for (const std::string kind : {"minimum", "maximum", "product"}) {
        const SmallContest contest = prepare(study_of_twenty(kind), answers.csv());
        const Fitted fitted = fit_all(contest, 0);
        const TheoryContestant contestant(*contest.sample, fitted.plan, true);
        const Sample& sample = *contest.sample;
        const RowBlock rows{sample.values.data(), nullptr, sample.n, sample.n};
        RowScratch scratch;
        REQUIRE(fitted.plan.target_plan().columns.size() == 1);
        REQUIRE(fitted.plan.target_plan().columns.front().blocks.size() == kMembers);
        VectorXd column(kRows);
        contestant.form_column(fitted.fit, fitted.plan.target_plan().columns.front(), rows, scratch, column.data());
        for (Index i = 0; i < kRows; ++i) {
            const auto members = answers.values.row(i).leftCols(kMembers);
            const double expected = kind == "minimum"   ? members.minCoeff()
                                    : kind == "maximum" ? members.maxCoeff()
                                                        : members.prod();
            CHECK(column(i) == Approx(expected).epsilon(1e-12));
        }
    }
}

TEST_CASE("a product of categories with more than 500 columns is a fault at the term", "[theory]") {
    CHECK(fault_of_product({20, 25}) == "nothing thrown");
    CHECK(fault_of_product({3, 6, 28}) ==
          "study.yaml:17:11: error: c1 x c2 x c3 makes 504 columns, one for each combination of levels; at most "
          "500 are possible\n   17 |         - product: [c1, c2, c3]\n      |           ^\nmerge levels, or "
          "leave out a category");
}

// 32^13 = 2^65 columns: a count of 64 bits would come round to 0.
TEST_CASE("a product of so many categories that its columns cannot be counted is a fault, too", "[theory]") {
    const std::string fault = fault_of_product(std::vector<int>(13, 32));
    CHECK(fault.find("x c13 makes at least 1000000000 columns, one for each combination of levels; at most 500 are "
                     "possible\n") != std::string::npos);
}

TEST_CASE("dependent columns are those without which the rest has the same rank, and nothing else", "[theory]") {
    CHECK(dependent_of(noise(4)).empty());
    CHECK(dependent_of(MatrixXd(15, 0)).empty());
    MatrixXd x = noise(4);
    x.col(2).setConstant(7);
    CHECK(dependent_of(x) == std::vector<Index>{2});
    x = noise(3);
    x.col(2) = x.col(0);
    CHECK(dependent_of(x) == std::vector<Index>{2});  // of two equal columns the later one
    x = noise(6);
    x.col(3) = x.col(0) - 2 * x.col(5);
    x.col(1) = x.col(2) + x.col(4);
    const std::vector<Index> left_out = dependent_of(x);
    REQUIRE(left_out.size() == 2);
    std::vector<Index> kept;
    for (Index j = 0; j < 6; ++j)
        if (std::count(left_out.begin(), left_out.end(), j) == 0) kept.push_back(j);
    REQUIRE(kept.size() == 4);
    CHECK(dependent_of(x(Eigen::all, kept)).empty());
    CHECK(dependent_of(MatrixXd::Constant(15, 2, 3)).size() == 2);
}
