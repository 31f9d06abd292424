#include "theory/weighting/path_stage.hpp"

#include "theory/weighting/weighting.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

namespace rivalfold {
namespace {
constexpr int kMostRounds = 3000;
constexpr double kSettled = 1e-10;
}  // namespace

PathStage::PathStage(const Blueprint& blueprint) : plan_(blueprint) {
    for (const Block& block : plan_.blocks) {
        span_.push_back({static_cast<Eigen::Index>(stacked_.size()), static_cast<Eigen::Index>(block.columns.size())});
        stacked_.insert(stacked_.end(), block.columns.begin(), block.columns.end());
    }
    successors_.resize(plan_.blocks.size());
    for (const EquationPlan& equation : plan_.equations)
        for (const int block : equation.predecessors)
            successors_[static_cast<std::size_t>(block)].push_back(equation.outcome);
    const auto stacked = static_cast<Eigen::Index>(stacked_.size());
    const auto blocks = static_cast<Eigen::Index>(plan_.blocks.size());
    correlations_.resize(stacked, stacked);
    with_scores_.resize(stacked, blocks);
    among_scores_.resize(blocks, blocks);
    proxies_.resize(blocks, blocks);
    factors_.resize(plan_.blocks.size());
}

void PathStage::run(const Moments& moments, Fit& fit) {
    gather(moments, fit);
    if (!start(fit)) return;
    correlate(fit);
    fit.rounds = 0;
    const bool iterate =
        std::any_of(plan_.blocks.begin(), plan_.blocks.end(), [](const Block& block) { return block.iterates(); });
    while (iterate) {
        find_proxies(fit);
        const double moved = renew(fit);
        if (fit.status == FitStatus::failed) return;
        correlate(fit);
        ++fit.rounds;
        if (moved < kSettled) break;
        if (fit.rounds == kMostRounds)
            return fit.fail(fmt::format("the indicator weights did not settle within {} rounds (last change {:.1e})",
                                        kMostRounds, moved));
    }
    settle_signs(fit);
}

// Correlations of the stacked indicators, and which levels of each category are in force.
void PathStage::gather(const Moments& moments, Fit& fit) {
    fit.scores.resize(plan_.blocks.size());
    for (std::size_t b = 0; b < plan_.blocks.size(); ++b) {
        const Block& block = plan_.blocks[b];
        fit.scores[b].active =
            !block.is_level() || moments.in_force[static_cast<std::size_t>(block.columns.front())] != 0;
        if (block.is_level() && !(moments.mean(block.columns.front()) > 0)) fit.unseen_level = true;
    }
    const double divisor = moments.n - 1;
    for (std::size_t j = 0; j < stacked_.size(); ++j)
        for (std::size_t i = 0; i < stacked_.size(); ++i) {
            const double scale = moments.sd(stacked_[i]) * moments.sd(stacked_[j]) * divisor;
            correlations_(static_cast<Eigen::Index>(i), static_cast<Eigen::Index>(j)) =
                scale > 0 ? moments.ss(stacked_[i], stacked_[j]) / scale : 0;
        }
}

bool PathStage::start(Fit& fit) {
    fit.weights.resize(plan_.blocks.size());
    for (std::size_t b = 0; b < plan_.blocks.size(); ++b) {
        const Block& block = plan_.blocks[b];
        const Span& span = span_[b];
        fit.weights[b].resize(span.size);
        if (span.size == 1) {
            fit.weights[b](0) = 1;
            continue;
        }
        const auto inside = correlations_.block(span.first, span.first, span.size, span.size);
        first_weights(block.weights, inside, fit.weights[b]);
        if (!rescale_to_unit_score(inside, fit.weights[b])) {
            fit.fail(fmt::format(
                "the indicators of \"{}\" cancel each other: their equally weighted sum does not vary; reverse the "
                "negatively keyed ones",
                block.construct));
            return false;
        }
        if (block.weights != Weights::mode_b) continue;
        factors_[b].compute(inside);
        if (factors_[b].info() != Eigen::Success || factors_[b].rcond() < 1e-13) {
            fit.fail(
                fmt::format("weights: mode_b of \"{}\" needs indicators that are no linear combinations of each other; "
                            "drop one or use mode_a",
                            block.construct));
            return false;
        }
    }
    return true;
}

void PathStage::correlate(const Fit& fit) {
    for (std::size_t b = 0; b < span_.size(); ++b) {
        const auto column = static_cast<Eigen::Index>(b);
        with_scores_.col(column).noalias() = correlations_.middleCols(span_[b].first, span_[b].size) * fit.weights[b];
    }
    for (std::size_t b = 0; b < span_.size(); ++b)
        for (std::size_t a = 0; a < span_.size(); ++a)
            among_scores_(static_cast<Eigen::Index>(a), static_cast<Eigen::Index>(b)) = fit.weights[a].dot(
                with_scores_.col(static_cast<Eigen::Index>(b)).segment(span_[a].first, span_[a].size));
}

void PathStage::find_proxies(const Fit& fit) {
    proxies_.setZero();
    for (std::size_t b = 0; b < plan_.blocks.size(); ++b)
        for (const int successor : successors_[b])
            proxies_(successor, static_cast<Eigen::Index>(b)) += among_scores_(successor, static_cast<Eigen::Index>(b));
    for (const EquationPlan& equation : plan_.equations) {
        if (!plan_.blocks[static_cast<std::size_t>(equation.outcome)].iterates()) continue;
        Eigen::Index c = 0;
        for (const int block : equation.predecessors) c += fit.scores[static_cast<std::size_t>(block)].active;
        sums_.n = 1;
        sums_.mean_x.setZero(c);
        sums_.mean_y.setZero(1);
        sums_.xx.resize(c, c);
        sums_.xy.resize(c, 1);
        sums_.scale.setOnes(c);
        Eigen::Index row = 0;
        for (const int a : equation.predecessors) {
            if (!fit.scores[static_cast<std::size_t>(a)].active) continue;
            Eigen::Index column = 0;
            for (const int b : equation.predecessors)
                if (fit.scores[static_cast<std::size_t>(b)].active) sums_.xx(row, column++) = among_scores_(a, b);
            sums_.xy(row++, 0) = among_scores_(a, equation.outcome);
        }
        regression_.solve(sums_);
        row = 0;
        for (const int a : equation.predecessors)
            if (fit.scores[static_cast<std::size_t>(a)].active)
                proxies_(a, equation.outcome) += regression_.slopes()(row++, 0);
    }
}

double PathStage::renew(Fit& fit) {
    double moved = 0;
    for (std::size_t b = 0; b < plan_.blocks.size(); ++b) {
        const Block& block = plan_.blocks[b];
        if (!block.iterates()) continue;
        const Span& span = span_[b];
        covariances_.noalias() =
            with_scores_.middleRows(span.first, span.size) * proxies_.col(static_cast<Eigen::Index>(b));
        renewed_.resize(span.size);
        bool good = true;
        if (block.weights == Weights::mode_a)
            update_mode_a(covariances_, renewed_);
        else
            good = update_mode_b(factors_[b], covariances_, renewed_);
        const auto inside = correlations_.block(span.first, span.first, span.size, span.size);
        if (!good || !rescale_to_unit_score(inside, renewed_)) {
            fit.fail(
                fmt::format("\"{}\" is uncorrelated with everything it is connected to, so its indicators have no {} "
                            "weights; use weights: equal",
                            block.construct, word(block.weights)));
            return 0;
        }
        for (Eigen::Index h = 0; h < span.size; ++h)
            moved = std::max(moved, std::fabs(renewed_(h) - fit.weights[b](h)));
        fit.weights[b] = renewed_;
    }
    return moved;
}

// A score points where the sum of its loadings is positive.
void PathStage::settle_signs(Fit& fit) {
    fit.loadings.resize(span_.size());
    for (std::size_t b = 0; b < span_.size(); ++b) {
        auto own = with_scores_.col(static_cast<Eigen::Index>(b)).segment(span_[b].first, span_[b].size);
        if (own.sum() < 0) {
            fit.weights[b] = -fit.weights[b];
            with_scores_.col(static_cast<Eigen::Index>(b)) *= -1;
            among_scores_.col(static_cast<Eigen::Index>(b)) *= -1;
            among_scores_.row(static_cast<Eigen::Index>(b)) *= -1;
        }
        fit.loadings[b] = own;
    }
    fit.score_correlations = among_scores_;
}

}  // namespace rivalfold
