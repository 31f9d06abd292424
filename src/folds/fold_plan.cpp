#include "rivalfold/folds/fold_plan.hpp"

#include "rivalfold/data/read_delimited.hpp"
#include "rivalfold/folds/random.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <map>

namespace rivalfold {
namespace {

constexpr std::uint32_t kNoFold = 0xffffffffU;

std::vector<std::size_t> fold_sizes(const FoldPlan& plan, int r) {
    std::vector<std::size_t> sizes(static_cast<std::size_t>(plan.folds), 0);
    for (const std::uint32_t fold : plan.repeat(r)) ++sizes[fold];
    return sizes;
}

void deal_rows(std::span<std::uint32_t> fold_of, int folds, RandomStream& stream) {
    const std::vector<std::uint32_t> order = shuffled(fold_of.size(), stream);
    for (std::size_t position = 0; position < order.size(); ++position)
        fold_of[order[position]] = static_cast<std::uint32_t>(position % static_cast<std::size_t>(folds));
}

void deal_clusters(std::span<std::uint32_t> fold_of, const std::vector<int>& clusters, std::size_t n_clusters,
                   int folds, RandomStream& stream) {
    std::vector<std::size_t> cluster_size(n_clusters, 0);
    for (const int cluster : clusters) ++cluster_size[static_cast<std::size_t>(cluster)];
    std::vector<std::size_t> load(static_cast<std::size_t>(folds), 0);
    std::vector<std::uint32_t> fold_of_cluster(n_clusters, 0);
    for (const std::uint32_t cluster : shuffled(n_clusters, stream)) {
        const auto lightest = std::min_element(load.begin(), load.end());
        *lightest += cluster_size[cluster];
        fold_of_cluster[cluster] = static_cast<std::uint32_t>(lightest - load.begin());
    }
    for (std::size_t i = 0; i < fold_of.size(); ++i)
        fold_of[i] = fold_of_cluster[static_cast<std::size_t>(clusters[i])];
}

Fault file_fault(const Study& study, std::string position, std::string message) {
    Fault fault;
    fault.file = study.trial.folds_file->text;
    fault.position = std::move(position);
    fault.message = std::move(message);
    return fault;
}

/// A whole number from 1 up in a cell of the folds file, or 0 with a fault noted.
std::size_t whole_number(const Study& study, const Table& table, Eigen::Index row, Eigen::Index column,
                         std::vector<Fault>& faults) {
    static constexpr std::array<const char*, 3> kNames = {"row", "repeat", "fold"};
    const double value = table.numbers(row, column);
    if (value >= 1 && value <= 1e9 && value == std::floor(value)) return static_cast<std::size_t>(value);
    if (faults.size() < 20)
        faults.push_back(
            file_fault(study, fmt::format("row {}, column \"{}\"", row + 1, kNames[static_cast<std::size_t>(column)]),
                       "expected a whole number from 1 up"));
    return 0;
}

Table read_three_columns(const Study& study) {
    return read_delimited(study.trial.folds_path, ReadRules{}, [&](const std::vector<std::string>& header) {
        ColumnChoice choice;
        std::vector<Fault> faults;
        for (const char* name : {"row", "repeat", "fold"}) {
            const auto found = std::find(header.begin(), header.end(), name);
            if (found == header.end())
                faults.push_back(file_fault(
                    study, {},
                    fmt::format("the column \"{}\" is missing; a folds file has the columns row, repeat, fold", name)));
            else
                choice.numbers.push_back(static_cast<std::size_t>(found - header.begin()));
        }
        if (!faults.empty()) throw FaultError(std::move(faults));
        return choice;
    });
}

struct Split {
    std::size_t row, repeat, fold;
};

/// Every line as (row, repeat, fold), faults for cells that are no such numbers.
std::vector<Split> read_splits(const Study& study, const Table& table) {
    std::vector<Fault> faults;
    std::vector<Split> splits;
    splits.reserve(table.n_rows);
    for (Eigen::Index r = 0; r < table.numbers.rows(); ++r) {
        Split split{whole_number(study, table, r, 0, faults), whole_number(study, table, r, 1, faults),
                    whole_number(study, table, r, 2, faults)};
        if (split.row && split.repeat && split.fold) splits.push_back(split);
    }
    if (!faults.empty()) throw FaultError(std::move(faults));
    if (splits.empty())
        throw FaultError(
            file_fault(study, {}, "the folds file has no rows; expected row, repeat and fold of every used row"));
    return splits;
}

void check_every_fold_used(const Study& study, const FoldPlan& plan, std::vector<Fault>& faults) {
    for (int r = 0; r < plan.repeats; ++r) {
        const std::vector<std::size_t> sizes = fold_sizes(plan, r);
        for (std::size_t k = 0; k < sizes.size(); ++k)
            if (sizes[k] == 0)
                faults.push_back(file_fault(
                    study, {},
                    fmt::format("repeat {} holds out no used row in fold {}; every repeat needs the folds 1 to {}",
                                r + 1, k + 1, plan.folds)));
    }
}

void check_clusters_whole(const Study& study, const Survey& survey, const FoldPlan& plan, std::vector<Fault>& faults) {
    if (survey.clusters.empty()) return;
    for (int r = 0; r < plan.repeats; ++r) {
        std::vector<std::uint32_t> fold_of_cluster(survey.cluster_names.size(), kNoFold);
        for (std::size_t i = 0; i < plan.n_rows; ++i) {
            std::uint32_t& fold = fold_of_cluster[static_cast<std::size_t>(survey.clusters[i])];
            if (fold == kNoFold) fold = plan.fold(r, i);
            if (fold == plan.fold(r, i)) continue;
            faults.push_back(
                file_fault(study, {},
                           fmt::format("repeat {} splits the cluster \"{}\" between the folds {} and {}; "
                                       "with data: cluster, the rows of a cluster stay together",
                                       r + 1, survey.cluster_names[static_cast<std::size_t>(survey.clusters[i])],
                                       fold + 1, plan.fold(r, i) + 1)));
            return;
        }
    }
}

FoldPlan folds_from_file(const Study& study, const Survey& survey) {
    const std::vector<Split> splits = read_splits(study, read_three_columns(study));
    FoldPlan plan;
    plan.n_rows = survey.n();
    for (const Split& split : splits) {
        plan.repeats = std::max(plan.repeats, static_cast<int>(split.repeat));
        plan.folds = std::max(plan.folds, static_cast<int>(split.fold));
    }
    std::vector<Fault> faults;
    if (plan.repeats > 10000)
        throw FaultError(
            file_fault(study, {}, fmt::format("repeats run up to {}; at most 10000 are possible", plan.repeats)));
    if (static_cast<std::size_t>(plan.folds) > survey.n() || plan.folds < 2)
        throw FaultError(file_fault(
            study, {},
            fmt::format("folds run up to {}; expected 2 to {}, the number of rows used", plan.folds, survey.n())));
    std::vector<std::size_t> used_index(survey.rows_read + 1, 0);  // 0: not used
    for (std::size_t i = 0; i < survey.n(); ++i) used_index[survey.rows[i]] = i + 1;
    plan.fold_of.assign(static_cast<std::size_t>(plan.repeats) * plan.n_rows, kNoFold);
    std::size_t unused = 0;
    for (const Split& split : splits) {
        if (split.row > survey.rows_read) {
            if (faults.size() < 20)
                faults.push_back(file_fault(
                    study, {}, fmt::format("names row {}, but the data have {} rows", split.row, survey.rows_read)));
            continue;
        }
        if (used_index[split.row] == 0) {
            ++unused;
            continue;
        }
        std::uint32_t& fold = plan.fold_of[(split.repeat - 1) * plan.n_rows + used_index[split.row] - 1];
        if (fold != kNoFold && faults.size() < 20)
            faults.push_back(
                file_fault(study, {}, fmt::format("row {} stands twice in repeat {}", split.row, split.repeat)));
        fold = static_cast<std::uint32_t>(split.fold - 1);
    }
    for (std::size_t cell = 0; cell < plan.fold_of.size() && faults.size() < 20; ++cell)
        if (plan.fold_of[cell] == kNoFold)
            faults.push_back(
                file_fault(study, {},
                           fmt::format("row {} has no fold in repeat {}; every used row needs one in every repeat",
                                       survey.rows[cell % plan.n_rows], cell / plan.n_rows + 1)));
    if (!faults.empty()) throw FaultError(std::move(faults));
    check_every_fold_used(study, plan, faults);
    check_clusters_whole(study, survey, plan, faults);
    if (!faults.empty()) throw FaultError(std::move(faults));
    if (unused > 0)
        plan.advice.push_back(fmt::format("{}: {} lines name rows that the study does not use; they were passed over.",
                                          study.trial.folds_file->text, unused));
    return plan;
}

}  // namespace

std::size_t FoldPlan::smallest_training() const {
    std::size_t largest_held_out = 0;
    for (int r = 0; r < repeats; ++r)
        for (const std::size_t size : fold_sizes(*this, r)) largest_held_out = std::max(largest_held_out, size);
    return n_rows - largest_held_out;
}

FoldPlan draw_folds(std::size_t n_rows, const std::vector<int>& clusters, int folds, int repeats, std::uint64_t seed) {
    FoldPlan plan;
    plan.n_rows = n_rows;
    plan.folds = folds;
    const std::size_t n_clusters =
        clusters.empty() ? 0 : static_cast<std::size_t>(*std::max_element(clusters.begin(), clusters.end())) + 1;
    const std::size_t n_units = clusters.empty() ? n_rows : n_clusters;
    plan.repeats = static_cast<std::size_t>(folds) == n_units ? 1 : repeats;
    if (plan.repeats < repeats)
        plan.advice.push_back(
            fmt::format("Leaving one {} out at a time splits the rows in only one way: 1 repeat was run instead of {}.",
                        clusters.empty() ? "row" : "cluster", repeats));
    const int wanted = plan.repeats;
    plan.repeats = 0;
    extend_folds(plan, clusters, wanted, seed);
    return plan;
}

void extend_folds(FoldPlan& plan, const std::vector<int>& clusters, int repeats, std::uint64_t seed) {
    const std::size_t n_clusters =
        clusters.empty() ? 0 : static_cast<std::size_t>(*std::max_element(clusters.begin(), clusters.end())) + 1;
    plan.fold_of.resize(static_cast<std::size_t>(repeats) * plan.n_rows);
    for (int r = plan.repeats; r < repeats; ++r) {
        RandomStream stream(seed, Purpose::folds, static_cast<std::uint32_t>(r));
        const std::span<std::uint32_t> fold_of(plan.fold_of.data() + static_cast<std::size_t>(r) * plan.n_rows,
                                               plan.n_rows);
        if (clusters.empty())
            deal_rows(fold_of, plan.folds, stream);
        else
            deal_clusters(fold_of, clusters, n_clusters, plan.folds, stream);
    }
    plan.repeats = repeats;
}

FoldPlan plan_folds(const Study& study, const Survey& survey) {
    if (study.trial.folds_file) return folds_from_file(study, survey);
    const std::size_t units = survey.clusters.empty() ? survey.n() : survey.cluster_names.size();
    if (static_cast<std::size_t>(study.trial.folds) > units)
        throw FaultError(
            study.fault_at(study.trial.folds_place,
                           fmt::format("folds: {} asks for more folds than there are {} ({})", study.trial.folds,
                                       survey.clusters.empty() ? "rows used" : "clusters", units),
                           fmt::format("use folds: {} or fewer", units)));
    return draw_folds(survey.n(), survey.clusters, study.trial.folds, study.trial.repeats, study.trial.seed);
}

}  // namespace rivalfold
