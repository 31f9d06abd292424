#include "judged.hpp"

#include "rivalfold/verdict/distributions.hpp"

using namespace rivalfold;

// R qt, pt, pf, qnorm, pnorm (tests/reference/outside/tests.R), tails out to 1e-300. x of a quantile is the lower
// tail's area.
TEST_CASE("tail areas and quantiles are R's", "[verdict]") {
    std::map<std::string, int> seen;
    for (const auto& line : frozen_table("reference/outside/quantiles.csv")) {
        const std::string& what = line.at("what");
        const double x = number(line, "x"), expected = number(line, "value");
        INFO(what << " at " << x << " with " << line.at("df1"));
        ++seen[what];
        if (what == "t_quantile")
            CHECK(student_quantile(1 - x, number(line, "df1")) == Approx(expected).epsilon(1e-12));
        if (what == "t_two_sided_p") {
            // Boost 1.74 is 2.3e-12 off at t = 1e-8 with one degree of freedom, where p is 1 for every purpose.
            CHECK(student_two_sided(x, number(line, "df1")) ==
                  Approx(expected).epsilon(x == 1e-8 ? 5e-12 : 1e-12).margin(1e-307));
            CHECK(student_two_sided(-x, number(line, "df1")) == student_two_sided(x, number(line, "df1")));
        }
        if (what == "f_upper_p")
            CHECK(f_upper(x, number(line, "df1"), number(line, "df2")) ==
                  Approx(expected).epsilon(1e-11).margin(1e-307));
        if (what == "normal_upper_p") CHECK(normal_upper(x) == Approx(expected).epsilon(1e-12).margin(1e-307));
    }
    CHECK(seen["t_quantile"] == 63);
    CHECK(seen["t_two_sided_p"] == 99);
    CHECK(seen["f_upper_p"] == 56);
    CHECK(seen["normal_upper_p"] == 10);
}

TEST_CASE("one and two degrees of freedom have closed forms", "[verdict]") {
    // Cauchy: P(|T| >= t) = 1 - 2/pi atan t; two degrees: 1 - t / sqrt(t^2 + 2).
    for (const double t : {0.1, 1.0, 3.0}) {
        CHECK(student_two_sided(t, 1) == Approx(1 - 2 / 3.14159265358979323846 * std::atan(t)).epsilon(1e-13));
        CHECK(student_two_sided(t, 2) == Approx(1 - t / std::sqrt(t * t + 2)).epsilon(1e-13));
    }
    CHECK(student_two_sided(0, 5) == Approx(1).epsilon(1e-15));
}
