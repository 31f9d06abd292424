#include "contests.hpp"

#include "rivalfold/trial/standard_error.hpp"

using namespace rivalfold;
using Eigen::Index;
using Eigen::VectorXd;

namespace {

std::string study_with(const std::string& repeats, const std::string& theories, const std::string& data_keys = "") {
    return study_text("folds: 3, seed: 11, repeats: " + repeats, data_keys,
                      "constructs:\n  planning: {indicators: [\"pln*\"]}\n  skill: {indicators: [\"skl*\"]}\n"
                      "  supply: {indicators: [\"sup*\"]}\n  delivery: {indicators: [\"dlv*\"]}\ntarget: delivery\n",
                      "theories:\n" + theories);
}

const std::string kTwo =
    "  - {name: plain, equations: {delivery: [planning, skill]}}\n"
    "  - {name: amplifying, equations: {delivery: [{crossed: [planning, skill]}]}}\n";
const std::string kThree = kTwo + "  - {name: scarcest, equations: {delivery: [{minimum: [planning, supply]}]}}\n";

std::string answers_with_yards(Index rows) {
    Answers answers = invented_answers(rows, 21);
    answers.names.push_back("yard");
    answers.values.conservativeResize(Eigen::NoChange, 12);
    for (Index i = 0; i < rows; ++i) answers.values(i, 11) = static_cast<double>(i % 10);
    return answers.csv();
}

struct Grown {
    SmallContest contest;
    FoldPlan plan;
    Trial trial;
};

Grown grow(const std::string& study, const std::string& data) {
    Grown out;
    out.contest = prepare(study, data);
    out.plan = out.contest.plan;
    out.trial = run_trial(out.contest.study, out.contest.survey, *out.contest.sample, out.plan, 1);
    return out;
}

/// The largest ratio, over the pairs of theories, of the splits' Monte Carlo error to the error over rows or clusters.
double worst_ratio(const Grown& run) {
    double worst = 0;
    for (std::size_t a = 0; a < run.trial.theories.size(); ++a)
        for (std::size_t b = a + 1; b < run.trial.theories.size(); ++b) {
            const VectorXd r = run.trial.contestants[a].repeat_loss - run.trial.contestants[b].repeat_loss;
            const auto repeats = static_cast<double>(r.size());
            const double splits = std::sqrt((r.array() - r.mean()).square().sum() / (repeats - 1) / repeats);
            const VectorXd d = run.trial.contestants[a].row_loss - run.trial.contestants[b].row_loss;
            worst = std::max(worst, splits / standard_error(d, run.contest.survey.clusters,
                                                            run.contest.survey.cluster_names.size()));
        }
    return worst;
}

}  // namespace

TEST_CASE("repeats: auto stops at the first ten at which every pair's splits err by a tenth of the rows", "[trial]") {
    std::vector<int> stopped;
    for (const auto& [theories, rows, keys] :
         {std::tuple{kTwo, 150, ""}, std::tuple{kTwo, 900, ""}, std::tuple{kThree, 40, ", cluster: yard"}}) {
        const std::string data = answers_with_yards(rows);
        const Grown grown = grow(study_with("auto", theories, keys), data);
        int expected = 50;
        for (; expected < 200; expected += 10)
            if (worst_ratio(grow(study_with(std::to_string(expected), theories, keys), data)) <= 0.1) break;
        INFO(rows << " rows" << keys);
        CHECK(grown.trial.repeats == expected);
        CHECK(grown.plan.repeats == expected);
        stopped.push_back(expected);
        const Grown asked = grow(study_with(std::to_string(expected), theories, keys), data);
        check_same_bits(grown.trial, asked.trial);
        CHECK(grown.plan.fold_of == asked.plan.fold_of);
    }
    // One contest needs no growth, one stops on the way, one at the most that are allowed.
    std::sort(stopped.begin(), stopped.end());
    INFO(stopped[0] << " " << stopped[1] << " " << stopped[2]);
    CHECK(stopped[0] == 50);
    CHECK((stopped[1] > 50 && stopped[1] < 200));
    CHECK(stopped[2] == 200);
}

TEST_CASE("theories with the same predictions do not make repeats: auto grow", "[trial]") {
    const Grown grown = grow(study_with("auto",
                                        "  - {name: one, equations: {delivery: [planning, skill, supply]}}\n"
                                        "  - {name: copy, equations: {delivery: [supply, planning, skill]}}\n"),
                             answers_with_yards(24));
    CHECK(grown.trial.repeats == 50);
}
