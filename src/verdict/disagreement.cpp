#include "verdict/disagreement.hpp"

#include "rivalfold/trial/standard_error.hpp"

#include <algorithm>
#include <cmath>
#include <numeric>

namespace rivalfold {
namespace {

constexpr std::size_t kMostRows = 10000;

/// Calls use(name, score of every row in standard units) for the antecedents in either target equation, controls and
/// category levels left out, each construct once.
template <class Use>
void for_each_antecedent(const Study& study, const Sample& sample, const Trial& trial, const Disagreement& out,
                         Use use) {
    const RowBlock rows{sample.values.data(), sample.gappy.empty() ? nullptr : sample.gaps.data(), sample.n, sample.n};
    std::vector<std::string> seen;
    Eigen::VectorXd score(sample.n);
    for (const std::size_t theory : {out.first, out.second}) {
        const Blueprint& plan = trial.theories[theory]->blueprint();
        for (const int b : plan.target_plan().predecessors) {
            const Block& block = plan.blocks[static_cast<std::size_t>(b)];
            const bool control = std::any_of(study.controls.begin(), study.controls.end(),
                                             [&](const Name& name) { return name.text == block.construct; });
            if (block.is_level() || control || std::find(seen.begin(), seen.end(), block.construct) != seen.end())
                continue;
            seen.push_back(block.construct);
            const Fit& fit = trial.whole[theory].fit;
            trial.theories[theory]->form_score(fit, b, rows, score.data());
            const ScoreMap& map = fit.scores[static_cast<std::size_t>(b)];
            score = (score.array() - map.mean) / map.sd;
            use(block.construct, score);
        }
    }
}

void add_thirds(const std::string& along, const Eigen::VectorXd& values, const Eigen::VectorXd& d, const Survey& survey,
                Disagreement& out) {
    std::vector<Eigen::Index> order(static_cast<std::size_t>(values.size()));
    std::iota(order.begin(), order.end(), Eigen::Index{0});
    const auto less = [&](Eigen::Index a, Eigen::Index b) {
        return values(a) < values(b) || (values(a) == values(b) && a < b);
    };
    const auto cut = [&](std::size_t third) {
        return order.begin() + static_cast<std::ptrdiff_t>(order.size() * third / 3);
    };
    if (order.size() < 6) return;
    std::nth_element(order.begin(), cut(1), order.end(), less);
    std::nth_element(cut(1), cut(2), order.end(), less);
    for (std::size_t third = 0; third < 3; ++third) {
        std::sort(cut(third), cut(third + 1));  // rows in their own order, so that sums do not depend on the partition
        const std::size_t from = order.size() * third / 3, to = order.size() * (third + 1) / 3;
        const std::vector<Eigen::Index> rows(order.begin() + static_cast<std::ptrdiff_t>(from),
                                             order.begin() + static_cast<std::ptrdiff_t>(to));
        std::vector<int> clusters;
        std::vector<int> number(survey.cluster_names.size(), -1);
        int n_clusters = 0;
        for (const Eigen::Index row : rows) {
            if (survey.clusters.empty()) break;
            int& mine = number[static_cast<std::size_t>(survey.clusters[static_cast<std::size_t>(row)])];
            if (mine < 0) mine = n_clusters++;
            clusters.push_back(mine);
        }
        const Eigen::VectorXd part = d(rows);
        const double se =
            n_clusters == 1 ? std::nan("") : standard_error(part, clusters, static_cast<std::size_t>(n_clusters));
        const Eigen::VectorXd along_values = values(rows);
        out.thirds.push_back({along, static_cast<int>(third) + 1, along_values.minCoeff(), along_values.maxCoeff(),
                              rows.size(), part.mean(), se});
    }
}

}  // namespace

Disagreement find_disagreement(const Study& study, const Survey& survey, const Sample& sample, const Trial& trial,
                               std::size_t first, std::size_t second) {
    Disagreement out;
    const auto& members = trial.errors.members;
    const auto a = std::find(members.begin(), members.end(), first),
               b = std::find(members.begin(), members.end(), second);
    if (a == members.end() || b == members.end()) return out;
    const Eigen::VectorXd d =
        without_rounding(trial.contestants[first].row_loss - trial.contestants[second].row_loss, trial.loss_scale());
    if (d.isZero(0)) return out;  // the same predictions: they part nowhere
    out.present = true;
    out.first = first;
    out.second = second;
    std::vector<std::size_t> order(static_cast<std::size_t>(d.size()));
    std::iota(order.begin(), order.end(), std::size_t{0});
    const auto larger = [&](std::size_t i, std::size_t k) {
        const double x = std::fabs(d(static_cast<Eigen::Index>(i))), y = std::fabs(d(static_cast<Eigen::Index>(k)));
        return x > y || (x == y && i < k);
    };
    const std::size_t listed = std::min(kMostRows, order.size());
    std::partial_sort(order.begin(), order.begin() + static_cast<std::ptrdiff_t>(listed), order.end(), larger);
    out.rows.assign(order.begin(), order.begin() + static_cast<std::ptrdiff_t>(listed));
    const std::vector<int>& target = trial.theories[first]->blueprint().target_columns();
    out.actual = Eigen::VectorXd::Zero(static_cast<Eigen::Index>(listed));
    for (const int column : target)
        out.actual += (sample.values.col(column)(out.rows).array() + sample.centre(column)).matrix() /
                      static_cast<double>(target.size());
    out.predicted_first = out.actual - trial.errors.mean_error.col(a - members.begin())(out.rows);
    out.predicted_second = out.actual - trial.errors.mean_error.col(b - members.begin())(out.rows);
    std::vector<Eigen::VectorXd> listed_scores;
    Eigen::VectorXd highest, lowest;
    for_each_antecedent(study, sample, trial, out, [&](const std::string& name, const Eigen::VectorXd& score) {
        out.antecedents.push_back(name);
        listed_scores.emplace_back(score(out.rows));
        add_thirds(name, score, d, survey, out);
        highest = highest.size() == 0 ? score : Eigen::VectorXd(highest.cwiseMax(score));
        lowest = lowest.size() == 0 ? score : Eigen::VectorXd(lowest.cwiseMin(score));
    });
    out.scores.resize(static_cast<Eigen::Index>(listed), static_cast<Eigen::Index>(listed_scores.size()));
    for (std::size_t c = 0; c < listed_scores.size(); ++c)
        out.scores.col(static_cast<Eigen::Index>(c)) = listed_scores[c];
    if (out.antecedents.size() > 1) add_thirds("spread of the antecedents", highest - lowest, d, survey, out);
    return out;
}

}  // namespace rivalfold
