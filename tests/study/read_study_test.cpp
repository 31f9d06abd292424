// What a well-formed study file becomes.
#include "rivalfold/study/read_study.hpp"

#include <clocale>
#include <cmath>
#include <filesystem>
#include <fstream>
#include <locale>

#include "study/changed_study.hpp"

using namespace rivalfold;
using namespace rivalfold::test;

namespace {

const std::string kEveryKey = R"(# invented
study: >
  What carries
  a refit
data:
  file: ../refits.csv
  delimiter: tab
  missing_codes: [-9, "NA", 1.50]
  rows: mean
  where: {phase: closed, wave: [1, true]}
  cluster: yard
  segment: {column: complexity, cuts: [-0.0, 4, 5.5]}
constructs:
  planning: {indicators: ["*pln1", pln2], reversed: ["*1"], range: [1, 7.5], weights: mode_b}
  skill: {indicators: [skl*], weights: equal}
  1997: {indicators: [2001], weights: principal}
  sector: {category: sector}
  delivery: {indicators: [dlv1, dlv2], weights: mode_a}
target: delivery
controls: [sector, 1997]
metric: response
theories:
  - name: 1997
    claim: "Each factor helps,
      whatever the others are."
    equations:
      delivery: [planning, {product: [skill, planning]}, {minimum: [planning, skill]}, {maximum: [planning, skill]},
                 {square: planning}, {geometric_mean: [planning, skill]}]
  - name: chain
    equations:
      skill: [planning]
      delivery: [skill, nearness]
    constructs:
      skill: {indicators: [skl1, skl2]}
      nearness: {indicators: [ner1]}
trial: {folds: 2, repeats: 10000, seed: 18446744073709551615, loss: absolute, mediators: predicted}
verdict: {level: 1e-3, margin: 0, completeness: true}
)";

std::vector<std::string> texts(const std::vector<Name>& names) {
    std::vector<std::string> all;
    for (const Name& name : names) all.push_back(name.text);
    return all;
}

// The terms of the first theory's only equation with its list replaced.
std::vector<std::string> terms_of(const std::string& list) {
    const Study study = read_study_text(changed(kStudy, {{"[planning, skill]", list}}), "study.yaml");
    std::vector<std::string> terms;
    for (const Term& term : study.theories.at(0).equations.at(0).terms)
        terms.push_back(describe(term) + (term.from_crossed ? " (crossed)" : ""));
    return terms;
}

using Texts = std::vector<std::string>;

}  // namespace

TEST_CASE("a small study gets every default", "[study]") {
    const Study study =
        read_study_text(changed(kStudy, {{"trial:\n  folds: 5\n", ""}, {"controls: [sector]\n", ""}}), "s/study.yaml");
    CHECK(study.title == "Refits");
    CHECK(study.path == "s/study.yaml");
    CHECK(study.data.path == "s/refits.csv");
    CHECK(study.data.delimiter == 0);
    CHECK(study.data.missing_codes.empty());
    CHECK(study.data.rows == RowRule::drop);
    CHECK(study.data.where.empty());
    CHECK_FALSE(study.data.cluster.has_value());
    CHECK_FALSE(study.data.segment.has_value());
    CHECK(study.constructs.at(0).weights == Weights::mode_a);
    CHECK_FALSE(study.constructs.at(0).weights_given);
    CHECK(study.controls.empty());
    CHECK(study.metric == Metric::standard);
    CHECK(study.theories.at(0).claim.empty());
    CHECK(study.trial.folds == 10);
    CHECK(study.trial.repeats == 50);
    CHECK_FALSE(study.trial.auto_repeats);
    CHECK(study.trial.seed == 1);
    CHECK_FALSE(study.trial.folds_file.has_value());
    CHECK(study.trial.loss == Loss::squared);
    CHECK(study.trial.mediators == Mediators::measured);
    CHECK(study.verdict.level == 0.05);
    CHECK(study.verdict.margin == 0.02);
    CHECK_FALSE(study.verdict.completeness);
}

TEST_CASE("a study that uses every key is read as written", "[study]") {
    const Study study = read_study_text(kEveryKey, "/surveys/plans/study.yaml");
    CHECK(study.source == kEveryKey);
    CHECK(study.title == "What carries a refit");
    CHECK(study.data.file.text == "../refits.csv");
    CHECK(study.data.file.place.line == 6);
    CHECK(study.data.file.place.column == 9);
    CHECK(study.data.path == "/surveys/plans/../refits.csv");
    CHECK(study.data.delimiter == '\t');
    CHECK(study.data.missing_codes == Texts{"-9", "NA", "1.50"});
    CHECK(study.data.rows == RowRule::mean);
    REQUIRE(study.data.where.size() == 2);
    CHECK(study.data.where[0].values == Texts{"closed"});
    CHECK(study.data.where[1].column.text == "wave");
    CHECK(study.data.where[1].values == Texts{"1", "true"});
    CHECK(study.data.cluster.value().text == "yard");
    REQUIRE(study.data.segment.has_value());
    CHECK(study.data.segment->column.text == "complexity");
    CHECK(study.data.segment->column.place.line == 12);
    CHECK(study.data.segment->column.place.column == 21);
    CHECK(study.data.segment->cuts == std::vector<double>{0, 4, 5.5});
    CHECK_FALSE(std::signbit(study.data.segment->cuts[0]));
    const Construct& planning = study.constructs.at(0);
    CHECK(texts(planning.indicators) == Texts{"*pln1", "pln2"});
    CHECK(texts(planning.reversed) == Texts{"*1"});
    CHECK(planning.range.value() == std::pair(1.0, 7.5));
    CHECK(planning.weights == Weights::mode_b);
    CHECK(planning.weights_given);
    CHECK(study.constructs.at(1).weights == Weights::equal);
    CHECK(study.constructs.at(2).name.text == "1997");
    CHECK(texts(study.constructs.at(2).indicators) == Texts{"2001"});
    CHECK(study.constructs.at(2).weights == Weights::principal);
    CHECK(study.constructs.at(3).category.value().text == "sector");
    CHECK(study.target.text == "delivery");
    CHECK(texts(study.controls) == Texts{"sector", "1997"});
    CHECK(study.metric == Metric::response);
    CHECK(study.trial.folds == 2);
    CHECK(study.trial.repeats == 10000);
    CHECK(study.trial.seed == 18446744073709551615ULL);
    CHECK(study.trial.loss == Loss::absolute);
    CHECK(study.trial.mediators == Mediators::predicted);
    CHECK(study.verdict.level == 0.001);
    CHECK(study.verdict.margin == 0.0);
    CHECK(study.verdict.completeness);
}

TEST_CASE("theories hold their equations in file order and their own constructs", "[study]") {
    const Study study = read_study_text(kEveryKey, "study.yaml");
    const Theory& first = study.theories.at(0);
    CHECK(first.name.text == "1997");
    CHECK(first.claim == "Each factor helps, whatever the others are.");
    Texts terms;
    for (const Term& term : first.equations.at(0).terms) terms.push_back(describe(term));
    CHECK(terms == Texts{"planning", "skill x planning", "minimum(planning, skill)", "maximum(planning, skill)",
                         "square(planning)", "geometric_mean(planning, skill)"});
    const Theory& chain = study.theories.at(1);
    CHECK(chain.equations.at(0).outcome.text == "skill");
    CHECK(chain.equations.at(1).outcome.text == "delivery");
    CHECK(study.construct(1, "skill")->indicators.size() == 2);
    CHECK(study.construct(0, "skill")->indicators.size() == 1);
    CHECK(study.construct("skill") == study.construct(0, "skill"));
    CHECK(study.construct(0, "nearness") == nullptr);
    CHECK(study.construct(1, "nearness")->indicators.at(0).text == "ner1");
    CHECK(study.construct(7, "delivery") == study.construct("delivery"));
    CHECK(study.construct("nobody") == nullptr);
}

TEST_CASE("crossed stands for the scores and then the products of two and three", "[study]") {
    const std::string with_supply = "[{crossed: [skill, planning, supply]}]";
    const Study study = read_study_text(
        changed(kStudy, {{"[planning, skill]", with_supply}, {"target:", "  supply: {indicators: [sup1]}\ntarget:"}}),
        "study.yaml");
    Texts terms;
    for (const Term& term : study.theories.at(0).equations.at(0).terms) terms.push_back(describe(term));
    CHECK(terms == Texts{"skill", "planning", "supply", "skill x planning", "skill x supply", "planning x supply",
                         "skill x planning x supply"});
    CHECK(terms_of("[{crossed: [skill]}]") == Texts{"skill (crossed)"});
}

TEST_CASE("terms that crossed repeats are merged", "[study]") {
    CHECK(terms_of("[planning, {crossed: [planning, skill]}]") ==
          Texts{"planning", "skill (crossed)", "planning x skill (crossed)"});
    CHECK(terms_of("[{crossed: [planning, skill]}, {product: [skill, planning]}, planning]") ==
          Texts{"planning", "skill (crossed)", "skill x planning"});
    CHECK(terms_of("[{crossed: [planning]}, {crossed: [planning, skill]}]") ==
          Texts{"planning (crossed)", "skill (crossed)", "planning x skill (crossed)"});
    // The control stands in the equation already; its product does not.
    CHECK(terms_of("[{crossed: [planning, sector]}]") == Texts{"planning (crossed)", "planning x sector (crossed)"});
}

TEST_CASE("a byte order mark and any line ends leave the places as they are", "[study]") {
    const std::string faulty = changed(kStudy, {{"[planning, skill]", "[planning, skil]"}});
    const std::string expected = faults_in(faulty);
    for (const std::string end : {"\r\n", "\r"}) {
        std::string text = "\xEF\xBB\xBF";
        for (const char letter : faulty) text += letter == '\n' ? end : std::string(1, letter);
        CHECK(faults_in(text) == expected);
    }
    const Study study = read_study_text("\xEF\xBB\xBF" + kStudy, "study.yaml");
    CHECK(study.source.size() == kStudy.size() + 3);
    CHECK(render(study.fault_at({9, 9}, "no such target", "try again")) == R"(study.yaml:9:9: error: no such target
    9 | target: delivery
      |         ^
try again)");
    CHECK(study.fault_at({99, 1}, "beyond").source_line.empty());
}

TEST_CASE("places count characters, not bytes", "[study]") {
    CHECK(faults_after({{"[skl1, skl2]", "[größe, größe]"}}) == R"(
study.yaml:6:31: error: "indicators" of construct "skill" lists "größe" twice, first in line 6; expected it once
    6 |   skill: {indicators: [größe, größe]}
      |                               ^
)");
}

TEST_CASE("all faults of a file are told at once and in the order of their places", "[study]") {
    try {
        read_study_text(changed(kStudy, {{"refits.csv", "refits.sav"},
                                         {"range: [1, 7]", "range: [7, 1]"},
                                         {"[planning, skill]", "[planing]"},
                                         {"folds: 5", "fold: 5"}}),
                        "study.yaml");
        FAIL("no fault");
    } catch (const FaultError& error) {
        std::vector<std::size_t> lines;
        for (const Fault& fault : error.faults()) lines.push_back(fault.place.line);
        CHECK(lines == std::vector<std::size_t>{3, 5, 13, 19});
    }
}

TEST_CASE("a data path is relative to the study file's folder unless it is absolute", "[study]") {
    const auto path_of = [](const std::string& study, const std::string& file) {
        return read_study_text(changed(kStudy, {{"refits.csv", file}}), study).data.path;
    };
    CHECK(path_of("study.yaml", "refits.csv") == "refits.csv");
    CHECK(path_of("a/b/study.yaml", "c/refits.TSV") == "a/b/c/refits.TSV");
    CHECK(path_of("a/study.yaml", "/surveys/refits.txt") == "/surveys/refits.txt");
    const Study study = read_study_text(changed(kStudy, {{"folds: 5", "folds_file: splits.csv"}}), "a/study.yaml");
    CHECK(study.trial.folds_file.value().text == "splits.csv");
    CHECK(study.trial.folds_path == "a/splits.csv");
}

TEST_CASE("repeats: auto keeps the default as the smallest number", "[study]") {
    const Study study = read_study_text(changed(kStudy, {{"folds: 5", "folds: 5\n  repeats: auto"}}), "study.yaml");
    CHECK(study.trial.auto_repeats);
    CHECK(study.trial.repeats == 50);
}

TEST_CASE("a segment is a column, alone or as a key without cuts", "[study]") {
    for (const std::string written : {"complexity", "{column: complexity}", "\"complexity\""}) {
        INFO(written);
        const Study study =
            read_study_text(changed(kStudy, {{"refits.csv", "refits.csv\n  segment: " + written}}), "study.yaml");
        REQUIRE(study.data.segment.has_value());
        CHECK(study.data.segment->column.text == "complexity");
        CHECK(study.data.segment->cuts.empty());
    }
    const std::string nine = "refits.csv\n  segment: {cuts: [-4, -3, -2, -1, 0, 1, 2, 3, 4], column: complexity}";
    CHECK(read_study_text(changed(kStudy, {{"refits.csv", nine}}), "study.yaml").data.segment->cuts.size() == 9);
}

TEST_CASE("every delimiter can be written", "[study]") {
    const std::vector<std::pair<std::string, char>> cases = {
        {"\",\"", ','}, {";", ';'}, {"\"|\"", '|'}, {"tab", '\t'}, {"\"\\t\"", '\t'}};
    for (const auto& [written, delimiter] : cases) {
        INFO(written);
        const std::string text = changed(kStudy, {{"refits.csv", "refits.csv\n  delimiter: " + written}});
        CHECK(read_study_text(text, "study.yaml").data.delimiter == delimiter);
    }
}

TEST_CASE("numbers are read the same under a foreign numeric locale", "[study]") {
    const std::string before = std::setlocale(LC_NUMERIC, nullptr);
    const char* foreign = nullptr;
    for (const char* name : {"de_DE.UTF-8", "de_DE.utf8", "fr_FR.UTF-8", "nl_NL.UTF-8", "de_DE"})
        if (!foreign) foreign = std::setlocale(LC_NUMERIC, name);
    if (!foreign) {
        WARN("skipped: no locale with a decimal comma is installed");
        return;
    }
    const Study study = read_study_text(kEveryKey, "study.yaml");
    std::setlocale(LC_NUMERIC, before.c_str());
    CHECK(study.constructs.at(0).range.value().second == 7.5);
}

TEST_CASE("numbers are read and shown the same when C++ streams group digits", "[study]") {
    struct Grouped : std::numpunct<char> {
        char do_decimal_point() const override { return ','; }
        char do_thousands_sep() const override { return '.'; }
        std::string do_grouping() const override { return "\3"; }
    };
    const std::locale before = std::locale::global(std::locale(std::locale::classic(), new Grouped));
    const Study study = read_study_text(kEveryKey, "study.yaml");
    const std::string faults = faults_after({{"folds: 5", "repeats: 20000"}});
    std::locale::global(before);
    CHECK(study.constructs.at(0).range.value().second == 7.5);
    CHECK(study.trial.seed == 18446744073709551615ULL);
    CHECK(faults == R"(
study.yaml:19:12: error: "repeats" of "trial" must be a whole number from 1 to 10000, or auto, found "20000"
   19 |   repeats: 20000
      |            ^
)");
}

TEST_CASE("every word and every term has its text", "[study]") {
    CHECK(std::string(word(TermKind::score)) == "name");
    CHECK(std::string(word(TermKind::geometric_mean)) == "geometric_mean");
    CHECK(std::string(word(RowRule::mean)) == "mean");
    CHECK(describe(Term{TermKind::product, {{"a", {}}, {"b", {}}, {"c", {}}}, {}, false}) == "a x b x c");
}
