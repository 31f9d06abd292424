#include "calibration/designs.hpp"

#include "rivalfold/data/survey.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <numbers>

namespace rivalfold::calibration {
namespace {

constexpr double kLoading = 0.8;
constexpr int kItems = 3;
constexpr std::size_t kGroup = 10;
constexpr double kGroupShare = 0.5;  // of variance: the intraclass correlation
constexpr double kMargin = 0.02;

/// Draws of mean 0 and variance 1: normal (Box & Muller 1958, Annals of Mathematical Statistics 29, 610-611), or
/// Student's t with 4 degrees of freedom, a normal over the root of a chi-squared that is -2 ln(u u') for two uniforms.
class Draws {
public:
    Draws(RandomStream& stream, bool heavy) : stream_(stream), heavy_(heavy) {}
    double next() {
        const double z = normal();
        return heavy_ ? z / std::sqrt(-std::log((1 - stream_.unit()) * (1 - stream_.unit()))) : z;
    }

private:
    double normal() {
        if (has_spare_) {
            has_spare_ = false;
            return spare_;
        }
        const double radius = std::sqrt(-2 * std::log(1 - stream_.unit()));
        const double angle = 2 * std::numbers::pi * stream_.unit();
        spare_ = radius * std::sin(angle);
        has_spare_ = true;
        return radius * std::cos(angle);
    }

    RandomStream& stream_;
    bool heavy_;
    bool has_spare_ = false;
    double spare_ = 0;
};

/// One latent draw per component and row; in a clustered design partly shared within the group.
class Latent {
public:
    Latent(const Design& design, Draws& draws, std::size_t components)
        : design_(design), draws_(draws), shared_(components) {}
    void open_row(std::size_t row) {
        if (design_.clustered && row % kGroup == 0)
            for (double& value : shared_) value = draws_.next();
    }
    double next(std::size_t component) {
        const double own = draws_.next();
        return design_.clustered ? std::sqrt(kGroupShare) * shared_[component] + std::sqrt(1 - kGroupShare) * own : own;
    }

private:
    const Design& design_;
    Draws& draws_;
    std::vector<double> shared_;
};

double disturbance_deviation(const Design& design) {
    double sum = 0, squares = 0;
    for (const double effect : design.effects) {
        sum += effect;
        squares += effect * effect;
    }
    const double r = design.correlation;
    const double explained = r * sum * sum + (1 - r) * squares + design.product * design.product * (1 + r * r);
    return std::sqrt(std::max(0.05, 1 - explained));
}

std::vector<std::string> column_names(const Design& design) {
    std::vector<std::string> names;
    for (std::size_t a = 1; a <= design.effects.size(); ++a)
        for (int item = 1; item <= kItems; ++item) names.push_back(fmt::format("x{}_{}", a, item));
    for (int item = 1; item <= kItems; ++item) names.push_back(fmt::format("outcome_{}", item));
    names.push_back("group");
    return names;
}

Design two_theories(std::string name, std::vector<double> effects, std::vector<std::string> theories) {
    Design design;
    design.name = std::move(name);
    design.effects = std::move(effects);
    design.theories = std::move(theories);
    design.best = {0, 1};
    return design;
}

Design symmetric(Design design) {
    design.symmetric = true;
    return design;
}

Design tuned_to(Design design, Tuned tuned, std::size_t extra_from, double wanted = 0) {
    design.tuned = tuned;
    design.extra_from = extra_from;
    design.wanted = wanted;
    return design;
}

Design aimed(Design design, Aim aim, std::vector<std::size_t> best) {
    design.aim = aim;
    design.best = std::move(best);
    return design;
}

Design four_theories(std::size_t tied) {
    std::vector<double> effects(4, 0.1);
    std::fill_n(effects.begin(), tied, 0.3);
    Design design = symmetric(
        two_theories(fmt::format("four theories, {} tied", tied), std::move(effects), {"x1", "x2", "x3", "x4"}));
    design.best.clear();
    for (std::size_t t = 0; t < tied; ++t) design.best.push_back(t);
    return design;
}

Design clustered(bool declared) {
    Design design =
        symmetric(two_theories(declared ? "clusters of 10" : "clusters of 10, not declared", {0.4, 0.4}, {"x1", "x2"}));
    design.clustered = true;
    design.cluster_declared = declared;
    return design;
}

}  // namespace

const char* word(Items items) {
    switch (items) {
        case Items::normal:
            return "normal";
        case Items::heavy_tailed:
            return "heavy-tailed";
        case Items::seven_point:
            return "seven-point";
    }
    return "";
}

std::string Cell::name() const { return fmt::format("{}; {}; n = {}", design.name, word(items), rows); }

std::vector<Cell> all_cells() {
    const std::vector<Items> every = {Items::normal, Items::heavy_tailed, Items::seven_point};
    const std::vector<Items> normal = {Items::normal}, bounded = {Items::normal, Items::seven_point};
    const std::vector<int> sizes = {60, 100, 200, 500}, from_100 = {100, 200, 500}, from_200 = {200, 500};
    std::vector<Cell> cells;
    std::uint32_t stream = 0;
    const auto add = [&](const Design& design, const std::vector<Items>& items, const std::vector<int>& rows) {
        for (const Items kind : items)
            for (const int n : rows) cells.push_back({design, kind, n, ++stream});
    };
    add(symmetric(two_theories("exchangeable", {0.4, 0.4}, {"x1", "x2"})), every, sizes);
    add(symmetric(two_theories("overlapping", {0.4, 0.3, 0.3}, {"x1, x2", "x1, x3"})), every, sizes);
    add(symmetric(two_theories("overlapping, weak own terms", {0.5, 0.3, 0.05, 0.05}, {"x1, x2, x3", "x1, x2, x4"})), bounded, sizes);
    add(tuned_to(two_theories("nested, one weak term", {0.5, 0.3, 0}, {"x1, x2", "x1, x2, x3"}), Tuned::extra_effects,
                 2),
        every, sizes);
    add(tuned_to(two_theories("nested, three weak terms", {0.4, 0.3, 0, 0, 0}, {"x1, x2", "x1, x2, x3, x4, x5"}),
                 Tuned::extra_effects, 2),
        every, sizes);
    add(tuned_to(two_theories("nested, weak product", {0.4, 0.4}, {"x1, x2", "{crossed: [x1, x2]}"}), Tuned::product,
                 0),
        bounded, sizes);
    add(clustered(true), every, from_100);
    const std::uint32_t same_samples = stream - 9;
    add(clustered(false), normal, from_100);
    for (std::uint32_t back = 1; back <= 3; ++back) cells[cells.size() - back].stream = same_samples + 4 - back;
    for (std::size_t tied = 2; tied <= 4; ++tied) add(four_theories(tied), tied == 4 ? every : normal, sizes);
    Design nested_four = tuned_to(
        two_theories("four theories, three nest the first", {0.5, 0, 0, 0}, {"x1", "x1, x2", "x1, x3", "x1, x4"}),
        Tuned::extra_effects, 1);
    nested_four.best = {0, 1, 2, 3};
    add(nested_four, normal, sizes);

    add(aimed(two_theories("difference, .5 against .3", {0.5, 0.3}, {"x1", "x2"}), Aim::alternative, {0}), every,
        sizes);
    Design interaction =
        aimed(two_theories("interaction that explains 4%", {0.4, 0.4}, {"x1, x2", "{crossed: [x1, x2]}"}),
              Aim::alternative, {});
    interaction.product = 0.2 / std::sqrt(1 + interaction.correlation * interaction.correlation);
    add(interaction, bounded, sizes);
    add(aimed(two_theories("extra term is noise", {0.5, 0.3, 0}, {"x1, x2", "x1, x2, x3"}), Aim::alternative, {0}),
        normal, sizes);

    Design alike =
        symmetric(aimed(two_theories("equal, correlated .95", {0.3, 0.3}, {"x1", "x2"}), Aim::equality, {0, 1}));
    alike.correlation = 0.95;
    add(alike, normal, from_100);
    add(tuned_to(aimed(two_theories("difference of the margin", {0.6, 0}, {"x1", "x2"}), Aim::equality, {0}),
                 Tuned::correlation, 0, kMargin),
        normal, from_100);
    add(tuned_to(aimed(two_theories("product worth the margin", {0.4, 0.4}, {"x1, x2", "{crossed: [x1, x2]}"}),
                       Aim::equality, {1}),
                 Tuned::product, 0, -kMargin),
        normal, from_200);
    return cells;
}

std::string study_text(const Cell& cell) {
    const Design& design = cell.design;
    std::string text = "study: a simulated survey with a known truth\n";
    text += fmt::format("data: {{file: simulated.csv{}}}\nconstructs:\n",
                        design.clustered && design.cluster_declared ? ", cluster: group" : "");
    for (std::size_t a = 1; a <= design.effects.size(); ++a)
        text += fmt::format("  x{0}: {{indicators: [x{0}_1, x{0}_2, x{0}_3]}}\n", a);
    text += "  outcome: {indicators: [outcome_1, outcome_2, outcome_3]}\ntarget: outcome\ntheories:\n";
    for (std::size_t t = 0; t < design.theories.size(); ++t)
        text += fmt::format("  - {{name: theory {}, equations: {{outcome: [{}]}}}}\n", t + 1, design.theories[t]);
    return text + fmt::format("trial: {{folds: 10, repeats: 10}}\nverdict: {{level: 0.05, margin: {}}}\n", kMargin);
}

Design with_tuned(const Design& design, double value) {
    Design out = design;
    if (design.tuned == Tuned::extra_effects)
        std::fill(out.effects.begin() + static_cast<std::ptrdiff_t>(design.extra_from), out.effects.end(), value);
    if (design.tuned == Tuned::product) out.product = value;
    if (design.tuned == Tuned::correlation) out.correlation = value;
    return out;
}

Table simulate(const Cell& cell, const Study& study, std::size_t rows, RandomStream& stream) {
    const Design& design = cell.design;
    const std::size_t n_antecedents = design.effects.size();
    const double spread = disturbance_deviation(design), shared = std::sqrt(design.correlation),
                 own = std::sqrt(1 - design.correlation);
    const double item_error = std::sqrt(1 - kLoading * kLoading);
    Draws draws(stream, cell.items == Items::heavy_tailed);
    Latent latent(design, draws, n_antecedents + 2);
    Eigen::MatrixXd answers(static_cast<Eigen::Index>(rows), static_cast<Eigen::Index>((n_antecedents + 1) * kItems));
    std::vector<double> score(n_antecedents + 1);
    for (std::size_t row = 0; row < rows; ++row) {
        latent.open_row(row);
        const double common = latent.next(n_antecedents + 1);
        double outcome = 0;
        for (std::size_t a = 0; a < n_antecedents; ++a) {
            score[a] = shared * common + own * latent.next(a);
            outcome += design.effects[a] * score[a];
        }
        if (design.product != 0) outcome += design.product * score[0] * score[1];
        score[n_antecedents] = outcome + spread * latent.next(n_antecedents);
        for (std::size_t column = 0; column < score.size() * kItems; ++column) {
            const double answer = kLoading * score[column / kItems] + item_error * draws.next();
            answers(static_cast<Eigen::Index>(row), static_cast<Eigen::Index>(column)) =
                cell.items == Items::seven_point ? std::clamp(std::round(4 + 1.3 * answer), 1.0, 7.0) : answer;
        }
    }
    Table table;
    table.header = column_names(design);
    table.chosen = survey_columns(study, table.header);
    table.n_rows = rows;
    table.numbers.resize(static_cast<Eigen::Index>(rows), static_cast<Eigen::Index>(table.chosen.numbers.size()));
    for (std::size_t k = 0; k < table.chosen.numbers.size(); ++k)
        table.numbers.col(static_cast<Eigen::Index>(k)) =
            answers.col(static_cast<Eigen::Index>(table.chosen.numbers[k]));
    for (std::size_t k = 0; k < table.chosen.texts.size(); ++k) {
        table.texts.emplace_back();
        for (std::size_t row = 0; row < rows; ++row) table.texts.back().push_back(std::to_string(row / kGroup));
    }
    return table;
}

}  // namespace rivalfold::calibration
