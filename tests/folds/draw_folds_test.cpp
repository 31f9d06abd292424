#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include "rivalfold/folds/fold_plan.hpp"

#include <algorithm>
#include <set>

using namespace rivalfold;
using Folds = std::vector<std::uint32_t>;
using Texts = std::vector<std::string>;

namespace {

std::vector<std::size_t> sizes(const FoldPlan& plan, int repeat) {
    std::vector<std::size_t> counts(static_cast<std::size_t>(plan.folds), 0);
    for (const std::uint32_t fold : plan.repeat(repeat)) ++counts.at(fold);
    return counts;
}

const char* const kStudy = R"(study: refits
data: {file: refits.csv}
constructs:
  planning: {indicators: ["pln*"]}
  skill: {indicators: ["skl*"]}
  delivery: {indicators: ["dlv*"]}
target: delivery
trial: {folds: 7, repeats: 4, seed: 11}
theories:
  - {name: one, equations: {delivery: [planning, skill]}}
  - {name: two, equations: {delivery: [planning, skill, {product: [planning, skill]}]}}
)";

}  // namespace

// From a short Python program written from the papers and fold_plan.hpp alone; a change here moves the folds of every
// study.
TEST_CASE("the folds of a small plan never change", "[folds]") {
    const FoldPlan plan = draw_folds(10, {}, 3, 2, 1);
    CHECK(plan.fold_of == Folds{2, 0, 2, 2, 0, 1, 0, 1, 1, 0, 0, 1, 2, 0, 2, 2, 0, 0, 1, 1});
    const FoldPlan by_cluster = draw_folds(10, {0, 0, 0, 1, 1, 2, 2, 3, 4, 4}, 3, 2, 1);
    CHECK(by_cluster.fold_of == Folds{1, 1, 1, 2, 2, 1, 1, 0, 0, 0, 1, 1, 1, 0, 0, 0, 0, 2, 2, 2});
    CHECK(draw_folds(10, {}, 3, 1, 0xffffffff00000001U).fold_of != draw_folds(10, {}, 3, 1, 1).fold_of);
}

TEST_CASE("fold sizes differ by at most one row", "[folds]") {
    for (const std::size_t n : {std::size_t{2}, std::size_t{7}, std::size_t{30}, std::size_t{101}, std::size_t{420}})
        for (int folds = 2; folds <= std::min<int>(static_cast<int>(n), 12); ++folds) {
            const FoldPlan plan = draw_folds(n, {}, folds, 3, 42);
            REQUIRE(plan.fold_of.size() == n * static_cast<std::size_t>(plan.repeats));
            for (int r = 0; r < plan.repeats; ++r) {
                const std::vector<std::size_t> counts = sizes(plan, r);
                CHECK(*std::max_element(counts.begin(), counts.end()) -
                          *std::min_element(counts.begin(), counts.end()) <=
                      1);
                CHECK(*std::min_element(counts.begin(), counts.end()) >= 1);
            }
            CHECK(plan.smallest_training() ==
                  n - (n + static_cast<std::size_t>(folds) - 1) / static_cast<std::size_t>(folds));
        }
}

TEST_CASE("repeats differ, seeds differ, and more repeats leave the first ones as they are", "[folds]") {
    const FoldPlan plan = draw_folds(40, {}, 5, 20, 1);
    std::set<Folds> distinct;
    for (int r = 0; r < 20; ++r) distinct.emplace(plan.repeat(r).begin(), plan.repeat(r).end());
    CHECK(distinct.size() == 20);
    CHECK(draw_folds(40, {}, 5, 20, 2).fold_of != plan.fold_of);
    const FoldPlan longer = draw_folds(40, {}, 5, 30, 1);
    CHECK(std::equal(plan.fold_of.begin(), plan.fold_of.end(), longer.fold_of.begin()));
    CHECK(draw_folds(40, {}, 5, 20, 1).fold_of == plan.fold_of);
}

TEST_CASE("every row meets every fold equally often over many repeats", "[folds]") {
    const int repeats = 6000, folds = 3;
    const FoldPlan plan = draw_folds(6, {}, folds, repeats, 8);
    for (std::size_t row = 0; row < 6; ++row) {
        std::vector<double> counts(folds, 0);
        for (int r = 0; r < repeats; ++r) ++counts[plan.fold(r, row)];
        double chi_square = 0;
        for (const double count : counts) chi_square += (count - 2000) * (count - 2000) / 2000;
        CHECK(chi_square < 18.5);  // 2 degrees of freedom, 1 - 1e-4 (R qchisq, rounded up)
    }
}

TEST_CASE("dropping or adding a theory moves no row, nor does a change of terms, loss or weights", "[folds]") {
    const std::string data = invented_answers(50).csv();
    const SmallContest both = prepare(kStudy, data);
    REQUIRE(both.plan.fold_of.size() == 200);
    CHECK(both.plan.fold_of == draw_folds(50, {}, 7, 4, 11).fold_of);
    std::string changed = kStudy;
    changed += "  - {name: three, equations: {delivery: [{minimum: [planning, skill]}]}}\n";
    CHECK(prepare(changed, data).plan.fold_of == both.plan.fold_of);
    changed = kStudy;
    changed.replace(changed.find("[planning, skill, {product"), 18, "[skill, ");
    changed.replace(changed.find("seed: 11"), 8, "seed: 11, loss: absolute, mediators: predicted");
    changed.replace(changed.find("[\"skl*\"]"), 8, "[skl1, skl2], weights: equal");
    CHECK(prepare(changed, data).plan.fold_of == both.plan.fold_of);
}

TEST_CASE("clusters stay whole and folds stay balanced", "[folds]") {
    // 23 clusters of 1 to 5 rows, the rows of each scattered through the data.
    std::vector<int> clusters;
    for (int pass = 0; pass < 5; ++pass)
        for (int c = 0; c < 23; ++c)
            if (c % 5 >= pass) clusters.push_back(c);
    for (int folds = 2; folds <= 12; ++folds) {
        const FoldPlan plan = draw_folds(clusters.size(), clusters, folds, 10, 4);
        for (int r = 0; r < plan.repeats; ++r) {
            std::vector<std::set<std::uint32_t>> folds_of(23);
            for (std::size_t i = 0; i < clusters.size(); ++i)
                folds_of[static_cast<std::size_t>(clusters[i])].insert(plan.fold(r, i));
            for (const auto& met : folds_of) CHECK(met.size() == 1);
            const std::vector<std::size_t> counts = sizes(plan, r);
            CHECK(*std::min_element(counts.begin(), counts.end()) >= 1);
            // Each cluster goes to the lightest fold, so no fold is heavier than the lightest by more than one cluster.
            CHECK(*std::max_element(counts.begin(), counts.end()) - *std::min_element(counts.begin(), counts.end()) <=
                  5);
        }
    }
}

TEST_CASE("as many folds as clusters leave each cluster out once, and no fold is empty", "[folds]") {
    const std::vector<int> clusters = {0, 1, 1, 1, 1, 2, 3, 3, 0};
    const FoldPlan plan = draw_folds(clusters.size(), clusters, 4, 50, 1);
    CHECK(plan.repeats == 1);
    CHECK(plan.advice ==
          Texts{"Leaving one cluster out at a time splits the rows in only one way: 1 repeat was run instead of 50."});
    for (const std::size_t count : sizes(plan, 0)) CHECK(count >= 1);
    CHECK(plan.smallest_training() == 5);
    const std::vector<int> uneven = {0, 0, 0, 0, 0, 0, 0, 1, 2, 3, 4};
    const FoldPlan near = draw_folds(uneven.size(), uneven, 4, 20, 1);
    CHECK(near.repeats == 20);
    for (int r = 0; r < 20; ++r)
        for (const std::size_t count : sizes(near, r)) CHECK(count >= 1);
}

TEST_CASE("leaving one row out needs one repeat only, and says so if more were asked for", "[folds]") {
    const FoldPlan plan = draw_folds(12, {}, 12, 50, 1);
    CHECK(plan.repeats == 1);
    Folds folds(plan.fold_of);
    std::sort(folds.begin(), folds.end());
    for (std::size_t i = 0; i < 12; ++i) CHECK(folds[i] == i);
    CHECK(plan.advice ==
          Texts{"Leaving one row out at a time splits the rows in only one way: 1 repeat was run instead of 50."});
    CHECK(plan.smallest_training() == 11);
    CHECK(draw_folds(12, {}, 12, 1, 1).advice.empty());
    CHECK(draw_folds(12, {}, 11, 50, 1).advice.empty());
}

TEST_CASE("more folds than rows or clusters are refused at their line", "[folds]") {
    CHECK(fault_of([] { prepare(kStudy, invented_answers(6).csv()); }) ==
          R"(study.yaml:8:16: error: folds: 7 asks for more folds than there are rows used (6)
    8 | trial: {folds: 7, repeats: 4, seed: 11}
      |                ^
use folds: 6 or fewer)");
    CHECK(fault_of([] { prepare(kStudy, invented_answers(7).csv()); }) == "nothing thrown");
    std::string clustered = kStudy;
    clustered.replace(clustered.find("refits.csv"), 10, "refits.csv, cluster: yard");
    Answers answers = invented_answers(30);
    answers.names.push_back("yard");
    answers.values.conservativeResize(Eigen::NoChange, 12);
    for (Eigen::Index i = 0; i < 30; ++i) answers.values(i, 11) = static_cast<double>(i % 6);
    CHECK(fault_of([&] { prepare(clustered, answers.csv()); }) ==
          R"(study.yaml:8:16: error: folds: 7 asks for more folds than there are clusters (6)
    8 | trial: {folds: 7, repeats: 4, seed: 11}
      |                ^
use folds: 6 or fewer)");
}
