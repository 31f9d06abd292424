#include "verdict/disagreement.hpp"

#include "rivalfold/trial/standard_error.hpp"

#include <algorithm>
#include <cmath>
#include <numeric>

namespace rivalfold {
namespace {

/// Scores of the antecedents in either target equation, controls and category levels left out, each construct once.
void add_scores(const Study& study, const Sample& sample, const Trial& trial, Disagreement& out) {
    const RowBlock rows{sample.values.data(), sample.gappy.empty() ? nullptr : sample.gaps.data(), sample.n, sample.n};
    std::vector<Eigen::VectorXd> columns;
    for (const std::size_t theory : {out.first, out.second}) {
        const Blueprint& plan = trial.theories[theory]->blueprint();
        for (const int b : plan.target_plan().predecessors) {
            const Block& block = plan.blocks[static_cast<std::size_t>(b)];
            const bool control = std::any_of(study.controls.begin(), study.controls.end(), [&](const Name& name) { return name.text == block.construct; });
            if (block.is_level() || control || std::find(out.antecedents.begin(), out.antecedents.end(), block.construct) != out.antecedents.end()) continue;
            out.antecedents.push_back(block.construct);
            Eigen::VectorXd score(sample.n);
            const Fit& fit = trial.whole[theory].fit;
            trial.theories[theory]->form_score(fit, b, rows, score.data());
            const ScoreMap& map = fit.scores[static_cast<std::size_t>(b)];
            columns.emplace_back((score.array() - map.mean) / map.sd);
        }
    }
    out.scores.resize(sample.n, static_cast<Eigen::Index>(columns.size()));
    for (std::size_t c = 0; c < columns.size(); ++c) out.scores.col(static_cast<Eigen::Index>(c)) = columns[c];
}

void add_thirds(const std::string& along, const Eigen::VectorXd& values, const Eigen::VectorXd& d, const Survey& survey, Disagreement& out) {
    std::vector<Eigen::Index> order(static_cast<std::size_t>(values.size()));
    std::iota(order.begin(), order.end(), Eigen::Index{0});
    std::stable_sort(order.begin(), order.end(), [&](Eigen::Index a, Eigen::Index b) { return values(a) < values(b); });
    for (std::size_t third = 0; third < 3; ++third) {
        const std::size_t from = order.size() * third / 3, to = order.size() * (third + 1) / 3;
        if (to - from < 2) continue;
        const std::vector<Eigen::Index> rows(order.begin() + static_cast<std::ptrdiff_t>(from), order.begin() + static_cast<std::ptrdiff_t>(to));
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
        const double se = n_clusters == 1 ? std::nan("") : standard_error(part, clusters, static_cast<std::size_t>(n_clusters));
        out.thirds.push_back({along, static_cast<int>(third) + 1, values(rows.front()), values(rows.back()), rows.size(), part.mean(), se});
    }
}

}  // namespace

Disagreement find_disagreement(const Study& study, const Survey& survey, const Sample& sample, const Trial& trial, std::size_t first, std::size_t second) {
    Disagreement out;
    const auto& members = trial.errors.members;
    const auto a = std::find(members.begin(), members.end(), first), b = std::find(members.begin(), members.end(), second);
    if (a == members.end() || b == members.end()) return out;
    out.present = true;
    out.first = first;
    out.second = second;
    const Eigen::VectorXd d = trial.contestants[first].row_loss - trial.contestants[second].row_loss;
    out.order.resize(static_cast<std::size_t>(d.size()));
    std::iota(out.order.begin(), out.order.end(), std::size_t{0});
    std::stable_sort(out.order.begin(), out.order.end(),
                     [&](std::size_t i, std::size_t k) { return std::fabs(d(static_cast<Eigen::Index>(i))) > std::fabs(d(static_cast<Eigen::Index>(k))); });
    const std::vector<int>& target = trial.theories[first]->blueprint().target_columns();
    out.actual = Eigen::VectorXd::Zero(sample.n);
    for (const int column : target) out.actual += (sample.values.col(column).array() + sample.centre(column)).matrix() / static_cast<double>(target.size());
    out.predicted_first = out.actual - trial.errors.mean_error.col(a - members.begin());
    out.predicted_second = out.actual - trial.errors.mean_error.col(b - members.begin());
    add_scores(study, sample, trial, out);
    for (std::size_t c = 0; c < out.antecedents.size(); ++c) add_thirds(out.antecedents[c], out.scores.col(static_cast<Eigen::Index>(c)), d, survey, out);
    if (out.antecedents.size() > 1)
        add_thirds("spread of the antecedents", out.scores.rowwise().maxCoeff() - out.scores.rowwise().minCoeff(), d, survey, out);
    return out;
}

}  // namespace rivalfold
