#include "support/catch.hpp"
#include "support/small_contest.hpp"

#include "rivalfold/folds/fold_plan.hpp"
#include "rivalfold/report/writers.hpp"

#include <atomic>
#include <filesystem>

#include <unistd.h>

using namespace rivalfold;
using Texts = std::vector<std::string>;

namespace {

/// A folder with a study that reads its splits from splits.csv; eight rows, the fourth of them incomplete.
class PlaceWithSplits {
public:
    PlaceWithSplits() {
        static std::atomic<int> count{0};
        folder_ = std::filesystem::temp_directory_path() / fmt::format("rivalfold-folds-{}-{}", getpid(), count++);
        std::filesystem::create_directories(folder_);
    }
    ~PlaceWithSplits() {
        std::error_code ignored;
        std::filesystem::remove_all(folder_, ignored);
    }
    PlaceWithSplits(const PlaceWithSplits&) = delete;
    PlaceWithSplits& operator=(const PlaceWithSplits&) = delete;

    SmallContest read(const std::string& splits, const std::string& data_keys = "",
                      const std::string& trial = "folds_file: splits.csv") const {
        std::ofstream(folder_ / "splits.csv", std::ios::binary) << splits;
        return prepare("study: refits\ndata: {file: refits.csv" + data_keys + "}\n" + R"(constructs:
  skill: {indicators: [skl]}
  delivery: {indicators: [dlv]}
target: delivery
theories:
  - {name: one, equations: {delivery: [skill]}}
  - {name: two, equations: {delivery: [{square: skill}]}}
trial: {)" + trial + "}\n",
                       "skl,dlv,yard\n1,2,a\n2,3,a\n3,5,b\n,4,b\n5,4,c\n6,7,c\n7,6,b\n8,8,a\n",
                       (folder_ / "study.yaml").string());
    }
    std::string fault(const std::string& splits, const std::string& data_keys = "") const {
        std::string told = fault_of([&] { read(splits, data_keys); });
        const std::string folder = folder_.string() + "/";
        if (const std::size_t at = told.find(folder); at != std::string::npos) told.erase(at, folder.size());
        return told;
    }

private:
    std::filesystem::path folder_;
};

/// Two folds over the used rows 1 2 3 5 6 7 8, without the lines that name `without`.
std::string splits(const std::string& without = "none", const std::string& with = "") {
    std::string text = "row,repeat,fold\n";
    for (const char* line : {"1,1,1", "2,1,2", "3,1,1", "5,1,2", "6,1,1", "7,1,2", "8,1,1"})
        if (line != without) text += std::string(line) + "\n";
    return text + with;
}

}  // namespace

TEST_CASE("the folds that a run writes can be given back and are the same folds", "[folds]") {
    const PlaceWithSplits place;
    Outcome outcome;
    SmallContest drawn = place.read("", "", "folds: 3, repeats: 4, seed: 5");
    outcome.survey = drawn.survey;
    outcome.plan = drawn.plan;
    std::string written;
    write_folds_csv(outcome, [&](std::string_view piece) { written += piece; });
    const SmallContest given = place.read(written);
    CHECK(given.plan.fold_of == drawn.plan.fold_of);
    CHECK(given.plan.folds == 3);
    CHECK(given.plan.repeats == 4);
    CHECK(given.plan.n_rows == 7);
    CHECK(given.plan.advice.empty());
}

TEST_CASE("a folds file counts rows as the data file does, in any order, with any further columns", "[folds]") {
    const PlaceWithSplits place;
    const FoldPlan plan =
        place.read("fold;note;repeat;row\n2;x;1;8\n1;y;1;7\n2;;1;6\n1;;1;5\n2;;1;3\n1;;1;2\n2;;1;1\n").plan;
    CHECK(plan.fold_of == std::vector<std::uint32_t>{1, 0, 1, 0, 1, 0, 1});
    CHECK(plan.folds == 2);
    CHECK(plan.repeats == 1);
}

TEST_CASE("lines for rows that the study does not use are passed over, with advice", "[folds]") {
    const PlaceWithSplits place;
    const FoldPlan plan = place.read(splits("none", "4,1,2\n")).plan;
    CHECK(plan.fold_of == std::vector<std::uint32_t>{0, 1, 0, 1, 0, 1, 0});
    CHECK(plan.advice == Texts{"splits.csv: 1 lines name rows that the study does not use; they were passed over."});
}

TEST_CASE("every fault of a folds file is told in whole", "[folds]") {
    const PlaceWithSplits place;
    CHECK(place.fault(splits()) == "nothing thrown");
    CHECK(place.fault("row,split\n1,1\n") ==
          "splits.csv: error: the column \"repeat\" is missing; a folds file has the columns row, repeat, fold\n"
          "splits.csv: error: the column \"fold\" is missing; a folds file has the columns row, repeat, fold");
    CHECK(place.fault("row,repeat,fold\n") == "splits.csv: error: the file holds a header but no rows of data");
    CHECK(place.fault("row,repeat,fold\n1,1,1\n0,1,2\n3,1.5,1\n5,1,\n6,-1,1e10\n") ==
          "splits.csv: row 2, column \"row\": expected a whole number from 1 up\n"
          "splits.csv: row 3, column \"repeat\": expected a whole number from 1 up\n"
          "splits.csv: row 4, column \"fold\": expected a whole number from 1 up\n"
          "splits.csv: row 5, column \"repeat\": expected a whole number from 1 up\n"
          "splits.csv: row 5, column \"fold\": expected a whole number from 1 up");
    CHECK(place.fault(splits("5,1,2", "9,1,2\n")) ==
          "splits.csv: error: names row 9, but the data have 8 rows\n"
          "splits.csv: error: row 5 has no fold in repeat 1; every used row needs one in every repeat");
    CHECK(place.fault(splits("none", "3,1,2\n")) == "splits.csv: error: row 3 stands twice in repeat 1");
    CHECK(place.fault(splits("none", "1,10001,1\n")) ==
          "splits.csv: error: repeats run up to 10001; at most 10000 are possible");
    CHECK(place.fault(splits("8,1,1", "8,1,8\n")) ==
          "splits.csv: error: folds run up to 8; expected 2 to 7, the number of rows used");
    CHECK(place.fault("row,repeat,fold\n1,1,1\n2,1,1\n") ==
          "splits.csv: error: folds run up to 1; expected 2 to 7, the number of rows used");
    CHECK(place.fault(splits("8,1,1", "8,1,4\n")) ==
          "splits.csv: error: repeat 1 holds out no used row in fold 3; every repeat needs the folds 1 to 4");
}

TEST_CASE("a folds file may not split a cluster", "[folds]") {
    const PlaceWithSplits place;
    const std::string whole = "row,repeat,fold\n1,1,1\n2,1,1\n8,1,1\n3,1,2\n7,1,2\n5,1,2\n6,1,2\n";
    CHECK(place.fault(whole, ", cluster: yard") == "nothing thrown");
    CHECK(place.fault(splits(), ", cluster: yard") ==
          "splits.csv: error: repeat 1 splits the cluster \"a\" between the folds 1 and 2; with data: cluster, "
          "the rows of a cluster stay together");
}

TEST_CASE("at most twenty faults of a folds file are listed", "[folds]") {
    const PlaceWithSplits place;
    std::string many = splits();
    for (int k = 0; k < 30; ++k) many += fmt::format("{},1,1\n", 100 + k);
    const std::string told = place.fault(many);
    CHECK(std::count(told.begin(), told.end(), '\n') == 19);
    CHECK(told.substr(0, told.find('\n')) == "splits.csv: error: names row 100, but the data have 8 rows");
}

TEST_CASE("a folds file that is not there is named", "[folds]") {
    const PlaceWithSplits place;
    const std::string told = fault_of([&] { place.read("", "", "folds_file: elsewhere.csv"); });
    CHECK(told.find("elsewhere.csv") != std::string::npos);
    CHECK(told.find("nothing thrown") == std::string::npos);
}
