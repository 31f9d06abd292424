#include "judged.hpp"

#include "verdict/in_sample.hpp"

using namespace rivalfold;

namespace {

const TheoryReport& theory(const Judged& judged, const std::string& name) {
    for (std::size_t t = 0; t < judged.trial.theories.size(); ++t)
        if (judged.trial.theories[t]->name() == name) return judged.verdict.theories[t];
    throw std::logic_error("no theory " + name);
}

}  // namespace

// R lm, AIC, BIC on standardised columns (tests/reference/outside/models.R); additive constants cancel in the
// differences.
TEST_CASE("differences of AIC and BIC, R2 and F are R's on open data", "[verdict]") {
    std::map<std::string, Judged> contests;
    for (const char* name : {"attitude", "swiss", "longley"})
        contests.emplace(name, run_reference(std::string("reference/open_data/") + name));
    std::map<std::string, const TheoryReport*> first;
    for (const auto& known : frozen_table("reference/outside/models.csv")) {
        INFO(known.at("data") << ", " << known.at("theory"));
        const TheoryReport& report = theory(contests.at(known.at("data")), known.at("theory"));
        const TheoryReport& base = *first.emplace(known.at("data"), &report).first->second;
        CHECK(report.fitted.coefficients == number(known, "p"));
        CHECK(report.criteria.aic - base.criteria.aic ==
              Approx(number(known, "aic_minus_first")).epsilon(1e-10).margin(1e-12));
        CHECK(report.criteria.bic - base.criteria.bic ==
              Approx(number(known, "bic_minus_first")).epsilon(1e-10).margin(1e-12));
        CHECK(report.fitted.r2 == Approx(number(known, "r2")).epsilon(1e-12));
        CHECK(report.fitted.adjusted_r2 == Approx(number(known, "adjusted_r2")).epsilon(1e-12));
        CHECK(report.fitted.f == Approx(number(known, "f")).epsilon(1e-10));
        CHECK(report.fitted.f_p == Approx(number(known, "f_p")).epsilon(1e-9));
    }
    // R's help page of step() prints 190.69 and 189.86.
    const Judged& swiss = contests.at("swiss");
    CHECK(theory(swiss, "all").criteria.aic - theory(swiss, "four").criteria.aic ==
          Approx(190.691346319309 - 189.860621942743).epsilon(1e-11));
}

// Hald's cement (Woods, Steinour & Starke 1932; Hald 1952): published Cp 2.7, 5.5, 3.0, 3.0, 138.7 (Draper & Smith,
// from memory); digits from R.
TEST_CASE("GM equals Mallows' Cp + n + p(ln n - 2) on Hald's cement", "[verdict]") {
    std::string study = "study: cement\ndata: {file: hald.csv}\nconstructs:\n";
    for (const char* name : {"x1", "x2", "x3", "x4", "y"})
        study += fmt::format("  {}: {{indicators: [{}]}}\n", name, name);
    study += "target: y\ntrial: {folds: 13}\ntheories:\n";
    const auto table = frozen_table("reference/outside/hald_cp.csv");
    for (const auto& known : table) {
        std::string terms = known.at("terms");
        std::replace(terms.begin(), terms.end(), ' ', ',');
        study += fmt::format("  - {{name: {}, equations: {{y: [{}]}}}}\n", known.at("terms"), terms);
    }
    const Judged judged = run_and_judge(study, file_text("reference/outside/hald.csv"));
    const double total = [&] {
        double sum = 0;
        for (Eigen::Index i = 0; i < 13; ++i)
            sum += std::pow(judged.contest.sample->values(i, judged.trial.theories[0]->blueprint().target_columns()[0]),
                            2);
        return sum / 12;
    }();
    for (const auto& known : table) {
        INFO(known.at("terms"));
        const TheoryReport& report = theory(judged, known.at("terms"));
        const double p = number(known, "p");
        CHECK(report.criteria.gm == Approx(number(known, "gm")).epsilon(1e-11));
        CHECK(report.criteria.gm - 13 - p * (std::log(13.0) - 2) == Approx(number(known, "cp")).epsilon(1e-10));
        CHECK(report.fitted.sse * total == Approx(number(known, "sse")).epsilon(1e-11));
    }
    CHECK(judged.trial.full_model.rank == 5);
}

TEST_CASE("criteria are their published formulas", "[verdict]") {
    // Akaike 1974; Hurvich & Tsai 1989; Schwarz 1978; Hannan & Quinn 1979; Geweke & Meese 1981.
    const Criteria c = criteria_of(20, 50, 4, 0.4);
    const double fit = 50 * std::log(20.0 / 50);
    CHECK(c.aic == Approx(fit + 8).epsilon(1e-15));
    CHECK(c.aicc == Approx(fit + 8 + 2.0 * 4 * 5 / 45).epsilon(1e-15));
    CHECK(c.bic == Approx(fit + 4 * std::log(50.0)).epsilon(1e-15));
    CHECK(c.hq == Approx(fit + 8 * std::log(std::log(50.0))).epsilon(1e-15));
    CHECK(c.gm == Approx(50 + 4 * std::log(50.0)).epsilon(1e-15));
    CHECK(c.reason.empty());
}

TEST_CASE("a criterion that does not exist has no number but a reason", "[verdict]") {
    const Criteria exact = criteria_of(0, 50, 4, 0.4);
    for (const double value : {exact.aic, exact.aicc, exact.bic, exact.hq, exact.gm, exact.bic_weight})
        CHECK(std::isnan(value));
    CHECK(exact.reason == "the equation fits every row exactly, so ln(SSE) does not exist");
    const Criteria few = criteria_of(20, 5, 4, 0.4);
    CHECK(std::isnan(few.aicc));
    CHECK(std::isfinite(few.aic));
    CHECK(few.reason == "AICc needs more rows than coefficients + 1");
    const Criteria no_full = criteria_of(20, 50, 4, std::numeric_limits<double>::quiet_NaN());
    CHECK(std::isnan(no_full.gm));
    CHECK(std::isfinite(no_full.bic));
    CHECK(no_full.reason == "GM needs a full model with residual degrees of freedom");
}

TEST_CASE("BIC weights add up to 1, follow the differences, and leave out theories without a BIC", "[verdict]") {
    std::vector<TheoryReport> theories(4);
    theories[0].criteria.bic = -1000;
    theories[1].criteria.bic = -998;
    theories[2].criteria.bic = std::numeric_limits<double>::quiet_NaN();
    theories[3].criteria.bic = 100000;
    weigh_by_bic(theories);
    CHECK(theories[0].criteria.bic_weight + theories[1].criteria.bic_weight + theories[3].criteria.bic_weight ==
          Approx(1).epsilon(1e-15));
    CHECK(theories[0].criteria.bic_weight / theories[1].criteria.bic_weight == Approx(std::exp(1.0)).epsilon(1e-14));
    CHECK(theories[3].criteria.bic_weight == 0);
    CHECK(std::isnan(theories[2].criteria.bic_weight));
}

// Cohen 1988: f2 of a term; for a single column it is t^2 over the residual degrees of freedom (an identity of least
// squares).
TEST_CASE("coefficients have the standard errors, t, p and f2 of ordinary least squares", "[verdict]") {
    const Judged judged = run_reference("reference/open_data/attitude");
    const TheoryReport& all = theory(judged, "all");
    REQUIRE(all.equations.size() == 1);
    const EquationReport& equation = all.equations.front();
    CHECK(equation.outcome == "rating");
    CHECK(equation.r2 == Approx(all.fitted.r2).epsilon(1e-13));
    REQUIRE(equation.terms.size() == 7);
    CHECK(equation.terms[0].term == "1");
    CHECK(std::isnan(equation.terms[0].f2));
    for (std::size_t k = 1; k < 7; ++k) {
        const TermReport& term = equation.terms[k];
        INFO(term.term);
        CHECK(term.t == Approx(term.coefficient / term.se).epsilon(1e-15));
        CHECK(term.f2 == Approx(term.t * term.t / 23).epsilon(1e-10));
        CHECK((term.p > 0 && term.p < 1));
    }
    // R: summary(lm(rating ~ ., attitude)).
    const std::map<std::string, std::pair<double, double>> known = {
        {"complaints", {3.8090181584, 0.000902867884}}, {"privileges", {-0.5382229496, 0.595593920508}},
        {"learning", {1.9008515951, 0.069925345949}},   {"raises", {0.3690310215, 0.715480088439}},
        {"critical", {0.2611063766, 0.796334264210}},   {"advance", {-1.2179862287, 0.235577048629}}};
    for (std::size_t k = 1; k < 7; ++k) {
        CHECK(equation.terms[k].t == Approx(known.at(equation.terms[k].term).first).epsilon(1e-9));
        CHECK(equation.terms[k].p == Approx(known.at(equation.terms[k].term).second).epsilon(1e-8));
    }
}

TEST_CASE("dependent terms have coefficients but no standard errors, and an exact fit says so", "[verdict]") {
    Answers answers = invented_answers(30);
    answers.column("pln2") = 2 * answers.column("pln1");
    const std::string head = R"(study: refits
data: {file: refits.csv}
constructs:
  planning: {indicators: [pln1]}
  again: {indicators: [pln2]}
  delivery: {indicators: [dlv1]}
target: delivery
trial: {folds: 5, repeats: 2}
theories:
)";
    const Judged judged = run_and_judge(head +
                                            "  - {name: both, equations: {delivery: [planning, again]}}\n  - {name: "
                                            "one, equations: {delivery: [planning]}}\n",
                                        answers.csv());
    const TheoryReport& both = theory(judged, "both");
    const TheoryReport& one = theory(judged, "one");
    CHECK(both.fitted.r2 == Approx(one.fitted.r2).epsilon(1e-12));
    CHECK(both.fitted.f == Approx(one.fitted.f).epsilon(1e-11));  // dependent terms cost degrees of freedom once
    CHECK(both.fitted.f_df1 == 1);
    CHECK(both.fitted.f_df2 == 28);
    for (const TermReport& term : both.equations[0].terms) {
        CHECK(std::isfinite(term.coefficient));
        CHECK(std::isnan(term.se));
        CHECK(std::isnan(term.p));
        CHECK(term.reason == "the terms are linearly dependent, so single coefficients have no standard errors");
    }
    CHECK(both.equations[0].terms[1].f2 < 1e-12);
}

// Published: .84 (R psych, attitude); digits by the formula of Cronbach 1951 in R.
TEST_CASE("Cronbach's alpha of the attitude survey is the published one", "[verdict]") {
    std::string data = file_text("reference/open_data/attitude/data.csv");  // one more column to be the target
    for (std::size_t line = 0, at = 0; (at = data.find('\n', at)) != std::string::npos; ++line) {
        const std::string cell = line == 0 ? ",department" : fmt::format(",{}", line);
        data.insert(at, cell);
        at += cell.size() + 1;
    }
    const SmallContest contest = prepare(R"(study: attitude
data: {file: data.csv}
constructs:
  everything: {indicators: [rating, complaints, privileges, learning, raises, critical, advance]}
  department: {indicators: [department]}
target: department
theories:
  - {name: one, equations: {department: [{square: everything}]}}
  - {name: two, equations: {department: [everything]}}
trial: {folds: 5, repeats: 2}
)",
                                         data);
    CHECK(cronbach_alpha(*contest.sample, contest.survey.measurement(0, "everything")->variables) ==
          Approx(.84314276956476).epsilon(1e-13));
    CHECK(std::isnan(cronbach_alpha(*contest.sample, contest.survey.measurement(0, "department")->variables)));
}

TEST_CASE("Cronbach's alpha is taken over the rows that are complete on the construct", "[verdict]") {
    const std::string study = R"(study: refits
data: {file: refits.csv, rows: mean}
constructs:
  planning: {indicators: ["pln*"]}
  skill: {indicators: ["skl*"]}
  delivery: {indicators: ["dlv*"]}
target: delivery
theories:
  - {name: one, equations: {delivery: [planning, skill]}}
  - {name: two, equations: {delivery: [planning]}}
trial: {folds: 5, repeats: 2}
)";
    Answers answers = invented_answers(50);
    Answers complete = answers;
    complete.values = answers.values.bottomRows(45);
    for (Eigen::Index i = 0; i < 5; ++i) answers.values(i, i % 3) = std::numeric_limits<double>::quiet_NaN();
    const auto alpha = [](const SmallContest& contest, const char* construct) {
        return cronbach_alpha(*contest.sample, contest.survey.measurement(0, construct)->variables);
    };
    const SmallContest gappy = prepare(study, answers.csv()), shorter = prepare(study, complete.csv());
    CHECK(alpha(gappy, "planning") == Approx(alpha(shorter, "planning")).epsilon(1e-13));
    CHECK(alpha(gappy, "skill") != Approx(alpha(shorter, "skill")).epsilon(1e-13));
}
