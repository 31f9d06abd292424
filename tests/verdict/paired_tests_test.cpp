#include "judged.hpp"

#include "rivalfold/verdict/paired_tests.hpp"

using namespace rivalfold;
using Eigen::Index;
using Eigen::VectorXd;

namespace {

VectorXd column(const std::vector<std::map<std::string, std::string>>& table, const std::string& name) {
    VectorXd out(static_cast<Index>(table.size()));
    for (std::size_t i = 0; i < table.size(); ++i) out(static_cast<Index>(i)) = number(table[i], name);
    return out;
}

const double kNaN = std::numeric_limits<double>::quiet_NaN();
const std::string kAllEqual = "the differences are all equal, so nothing varies that could be tested";

}  // namespace

// Student 1908, the sleep data; R t.test and scipy ttest_rel (tests/reference/outside).
TEST_CASE("the row test is the paired t test, with its interval", "[verdict]") {
    const auto sleep = frozen_table("reference/outside/sleep.csv");
    const auto r = frozen_table("reference/outside/paired_t.csv").front();
    const PairedTest test = row_test(column(sleep, "first") - column(sleep, "second"), 0.05);
    CHECK(test.t == Approx(-4.06212768338204).epsilon(1e-13));
    CHECK(test.df == 9);
    CHECK(test.p == Approx(.00283289019738427).epsilon(1e-12));
    CHECK(test.t == Approx(number(r, "t")).epsilon(1e-13));
    CHECK(test.se == Approx(number(r, "se")).epsilon(1e-13));
    CHECK(test.p == Approx(number(r, "p")).epsilon(1e-12));
    CHECK(test.low == Approx(number(r, "low")).epsilon(1e-12));
    CHECK(test.high == Approx(number(r, "high")).epsilon(1e-12));
    CHECK(test.reason.empty());
    CHECK(std::isnan(test.p_holm));
    // Two losses per row as a contest has them (scipy).
    const auto attitude = frozen_table("reference/open_data/attitude/data.csv");
    const VectorXd y = column(attitude, "rating"), x = column(attitude, "complaints");
    const VectorXd cx = x.array() - x.mean(), cy = y.array() - y.mean();
    const VectorXd rest = cy - cx * (cx.dot(cy) / cx.squaredNorm());
    const auto known = frozen_table("reference/outside/paired_t_scipy.csv");
    const PairedTest squared = row_test(cy.cwiseAbs2() - rest.cwiseAbs2(), 0.05),
                     absolute = row_test(cy.cwiseAbs() - rest.cwiseAbs(), 0.05);
    for (const auto& [test_of, line] : {std::pair{&squared, known[1]}, std::pair{&absolute, known[2]}}) {
        CHECK(test_of->t == Approx(number(line, "t")).epsilon(1e-11));
        CHECK(test_of->se == Approx(number(line, "se")).epsilon(1e-11));
        CHECK(test_of->p == Approx(number(line, "p")).epsilon(1e-11));
    }
}

// scikit-learn, example "Statistical comparison of models using grid search" (printed .750 and 2.611: from memory); the
// digits by exact arithmetic (tests/reference/outside/corrected_t.py). Bouckaert & Frank 2004: for 10 x 10 folds
// corrected / uncorrected = sqrt(.01 / (.01 + 1/9)).
TEST_CASE("the corrected repeated k-fold test is the published one", "[verdict]") {
    const auto table = frozen_table("reference/open_data/corrected_t/fold_scores.csv");
    const VectorXd s = column(table, "model_1") - column(table, "model_2");
    REQUIRE(s.size() == 100);
    const PairedTest corrected = corrected_test(s, 10, s.mean(), 0.05), uncorrected = row_test(s, 0.05);
    CHECK(corrected.t == Approx(0.7503126954482318).epsilon(1e-12));
    CHECK(corrected.df == 99);
    CHECK(corrected.p == Approx(0.4548459420267329).epsilon(1e-12));
    CHECK(corrected.se == Approx(0.013327776619887865).epsilon(1e-12));
    CHECK(uncorrected.t == Approx(2.6111648393354643).epsilon(1e-12));
    CHECK(uncorrected.p == Approx(2 * 0.0052130131503932385).epsilon(1e-12));
    CHECK(corrected.t / uncorrected.t == Approx(.2873478855663454).epsilon(1e-14));
    // The interval lies around the given difference, the t value does not move with it.
    const PairedTest moved = corrected_test(s, 10, 0.5, 0.05);
    CHECK(moved.t == corrected.t);
    CHECK((moved.low + moved.high) / 2 == Approx(0.5).epsilon(1e-14));
    CHECK(moved.high - moved.low == Approx(corrected.high - corrected.low).epsilon(1e-12));
    CHECK(corrected.high - corrected.low ==
          Approx(2 * 1.9842169515864172 * corrected.se).epsilon(1e-12));  // R qt(.975, 99)
}

// statsmodels cov_type="cluster" (Liang & Zeger 1986), tests/reference/outside/cluster_se.py.
TEST_CASE("the row test by cluster has statsmodels' cluster-robust standard error", "[verdict]") {
    const Table answers = read_delimited(
        std::string(RIVALFOLD_TESTS) + "/reference/studies/answers.csv", {},
        [](const std::vector<std::string>& header) {
            const auto at = [&](const char* name) {
                return static_cast<std::size_t>(std::find(header.begin(), header.end(), name) - header.begin());
            };
            return ColumnChoice{{at("hours")}, {at("crew"), at("phase")}};
        });
    for (const auto& known : frozen_table("reference/outside/cluster_se.csv")) {
        std::vector<double> values;
        std::vector<int> cluster;
        std::map<std::string, int> crews;
        for (std::size_t row = 0; row < answers.n_rows; ++row) {
            if (known.at("rows") == "closed" && answers.texts[1][row] != "closed") continue;
            values.push_back(answers.numbers(static_cast<Index>(row), 0) - 30);
            cluster.push_back(crews.emplace(answers.texts[0][row], static_cast<int>(crews.size())).first->second);
        }
        const VectorXd d = Eigen::Map<VectorXd>(values.data(), static_cast<Index>(values.size()));
        INFO(known.at("rows"));
        CHECK(static_cast<double>(d.size()) == number(known, "n"));
        CHECK(static_cast<double>(crews.size()) == number(known, "clusters"));
        const PairedTest test = cluster_test(d, cluster, crews.size(), 0.05);
        CHECK(d.mean() == Approx(number(known, "mean")).epsilon(1e-12));
        CHECK(test.se == Approx(number(known, "se")).epsilon(1e-12));
        CHECK(test.t == Approx(number(known, "t")).epsilon(1e-12));
        CHECK(test.df == number(known, "df"));
        CHECK(test.p == Approx(number(known, "p")).epsilon(1e-12));
    }
}

TEST_CASE("clusters of one row each give the row test", "[verdict]") {
    VectorXd d(7);
    d << .3, -.1, .4, .2, .9, -.6, .25;
    const PairedTest rows = row_test(d, 0.1), clusters = cluster_test(d, {3, 1, 0, 2, 6, 5, 4}, 7, 0.1);
    CHECK(clusters.se == Approx(rows.se).epsilon(1e-14));
    CHECK(clusters.p == Approx(rows.p).epsilon(1e-13));
    CHECK(clusters.low == Approx(rows.low).epsilon(1e-13));
    // A higher level gives a narrower interval.
    CHECK(row_test(d, 0.2).high < rows.high);
}

TEST_CASE("differences that are all equal give no t and no p, but the reason", "[verdict]") {
    for (const double value : {0.0, 0.1}) {
        const VectorXd d = VectorXd::Constant(9, value);
        for (const PairedTest& test : {row_test(d, 0.05), cluster_test(d, {0, 0, 0, 1, 1, 1, 2, 2, 2}, 3, 0.05),
                                       corrected_test(d, 3, value, 0.05)}) {
            CHECK(std::isnan(test.t));
            CHECK(std::isnan(test.p));
            CHECK(test.reason == kAllEqual);
            CHECK(test.se == 0);
            CHECK(test.low == Approx(value).epsilon(1e-15));
            CHECK(test.high == Approx(value).epsilon(1e-15));
        }
    }
}

// R p.adjust(method = "holm"), tests/reference/outside/tests.R.
TEST_CASE("Holm's adjustment is R's", "[verdict]") {
    std::map<std::string, std::pair<std::vector<double>, std::vector<double>>> examples;
    for (const auto& line : frozen_table("reference/outside/holm.csv")) {
        examples[line.at("example")].first.push_back(number(line, "p"));
        examples[line.at("example")].second.push_back(number(line, "p_holm"));
    }
    REQUIRE(examples.size() == 7);
    for (const auto& [name, example] : examples) {
        const std::vector<double> adjusted = holm(example.first);
        REQUIRE(adjusted.size() == example.second.size());
        for (std::size_t i = 0; i < adjusted.size(); ++i) {
            INFO(name << ", " << i);
            CHECK(adjusted[i] == Approx(example.second[i]).epsilon(1e-15));
        }
    }
}

TEST_CASE("a p that does not exist counts for nothing in Holm's adjustment", "[verdict]") {
    const std::vector<double> adjusted = holm({.04, kNaN, .01, kNaN});
    CHECK(adjusted[2] == Approx(.02).epsilon(1e-15));
    CHECK(adjusted[0] == Approx(.04).epsilon(1e-15));
    CHECK(std::isnan(adjusted[1]));
    CHECK(std::isnan(adjusted[3]));
    CHECK(holm({}).empty());
}
