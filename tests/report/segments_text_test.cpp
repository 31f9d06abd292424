#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include "rivalfold/report/writers.hpp"

using namespace rivalfold;

namespace {

Outcome finished() {
    SmallContest contest = prepare(R"(study: refits
data: {file: refits.csv}
constructs:
  planning: {indicators: ["pln*"]}
  skill: {indicators: ["skl*"]}
  delivery: {indicators: ["dlv*"]}
target: delivery
trial: {folds: 5, repeats: 2}
theories:
  - {name: A, equations: {delivery: [planning]}}
  - {name: B, equations: {delivery: [skill]}}
)",
                                   invented_answers(60).csv());
    Outcome out;
    out.trial = run_trial(contest.study, contest.survey, *contest.sample, contest.plan, 1);
    out.verdict = reach_verdict(contest.study, contest.survey, *contest.sample, out.trial);
    out.study = contest.study;
    out.survey = contest.survey;
    out.plan = contest.plan;
    out.sample = std::shared_ptr<Sample>(std::move(contest.sample));
    return out;
}

/// What is printed of two segments with these two comparisons; line breaks as spaces.
std::string printed(double first_p, double second_p, const std::string& words = "") {
    Outcome whole = finished();
    for (const char* name : {"kind: old", "kind: new"}) {
        whole.segments.push_back(finished());
        whole.segments.back().segment_name = name;
    }
    whole.reversals.resize(2);
    whole.reversals[0].p_holm = first_p;
    whole.reversals[1].p_holm = second_p;
    whole.reversals[1].words = words;
    std::string text = write_tables(whole, {false, 100});
    std::replace(text.begin(), text.end(), '\n', ' ');
    std::string single;
    for (const char c : text)
        if (c != ' ' || single.empty() || single.back() != ' ') single += c;
    return single;
}

bool holds(const std::string& text, const std::string& part) { return text.find(part) != std::string::npos; }

}  // namespace

TEST_CASE("where no pair differs between segments the report says so, with the smallest p", "[report]") {
    CHECK(holds(printed(0.34, 0.125),
                "No pair's loss difference differs between segments (smallest Holm-adjusted p .125); that is no proof "
                "of sameness."));
    CHECK(holds(printed(std::nan(""), 0.34), "(smallest Holm-adjusted p .340); that is no proof of sameness."));
}

TEST_CASE("where a pair differs between segments its sentence stands instead", "[report]") {
    const std::string text = printed(0.34, 0.01, "The segments differ: in this made-up way.");
    CHECK(holds(text, "The segments differ: in this made-up way."));
    CHECK_FALSE(holds(text, "No pair's loss difference"));
}
