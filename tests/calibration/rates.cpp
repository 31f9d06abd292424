#include "calibration/rates.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

namespace rivalfold::calibration {
namespace {

constexpr double kMostFalse = 0.055, kLeastFalse = 0.02, kLeastCoverage = 0.93;

template <class Value>
Rate mean_over(const std::vector<const Judgement*>& judged, Value value) {
    double sum = 0, squares = 0;
    for (const Judgement* one : judged) {
        const auto x = static_cast<double>(value(*one));
        sum += x;
        squares += x * x;
    }
    const auto count = static_cast<double>(judged.size());
    const double mean = sum / count;
    return {mean, std::sqrt(std::max(0.0, squares / count - mean * mean) / count)};
}

bool among(const std::vector<std::size_t>& best, std::size_t theory) {
    return std::find(best.begin(), best.end(), theory) != best.end();
}

bool holds_best(const std::vector<double>& p, const std::vector<std::size_t>& best, double level) {
    return std::all_of(best.begin(), best.end(), [&](std::size_t theory) { return p[theory] > level; });
}

std::string percent(Rate rate) {
    return std::isnan(rate.value) ? "" : fmt::format("{:.1f} ({:.1f})", 100 * rate.value, 100 * rate.se);
}

std::string truth_columns(const Cell& cell) {
    return fmt::format("| {} | {} | {} |", cell.design.name, word(cell.items), cell.rows);
}

std::string tuned_words(const CellResult& result) {
    if (!result.tuned) return "";
    switch (result.cell.design.tuned) {
        case Tuned::extra_effects:
            return fmt::format("effect {:.4f}", *result.tuned);
        case Tuned::product:
            return fmt::format("product {:.4f}", *result.tuned);
        case Tuned::correlation:
            return fmt::format("correlation {:.4f}", *result.tuned);
        case Tuned::nothing:
            break;
    }
    return "";
}

std::string write_nulls(const std::vector<CellResult>& results, const std::vector<Rates>& rates) {
    std::string text =
        "| equal expected loss | items | n | false winner | both tests, margin 0 | row test alone | corrected alone | "
        "splits as independent | tied pair called different | "
        "called equal | coverage | Clark-West | T_R keeps all | T_max keeps all | bounds "
        "|\n|---|---|--:|--:|--:|--:|--:|--:|--:|--:|--:|--:|--:|--:|---|\n";
    for (std::size_t i = 0; i < results.size(); ++i) {
        const Cell& cell = results[i].cell;
        if (cell.design.aim != Aim::null) continue;
        const Rates& r = rates[i];
        const std::vector<std::string> faults = shortcomings(cell, r);
        text += fmt::format("{} {} | {} | {} | {} | {} | {} | {} | {} | {} | {} | {} | {} |\n", truth_columns(cell),
                            percent(r.wrong_winner), percent(r.tests_wrong), percent(r.rows_wrong),
                            percent(r.corrected_wrong), percent(r.splits_wrong), percent(r.tied_called_different),
                            percent(r.called_equal), percent(r.coverage), percent(r.clark_west), percent(r.range_keeps),
                            percent(r.max_keeps),
                            !has_bounds(cell) ? ""
                            : faults.empty()  ? "kept"
                                              : fmt::format("{}", fmt::join(faults, "; ")));
    }
    return text;
}

std::string write_others(const std::vector<CellResult>& results, const std::vector<Rates>& rates) {
    std::string text =
        "| other truths | items | n | better theory named | wrong winner | both tests, margin 0 | row test alone | "
        "corrected alone | splits as independent | "
        "called equal | coverage | Clark-West | T_R keeps best | T_max keeps best "
        "|\n|---|---|--:|--:|--:|--:|--:|--:|--:|--:|--:|--:|--:|--:|\n";
    for (std::size_t i = 0; i < results.size(); ++i) {
        const Cell& cell = results[i].cell;
        if (cell.design.aim == Aim::null) continue;
        const Rates& r = rates[i];
        text +=
            fmt::format("{} {} | {} | {} | {} | {} | {} | {} | {} | {} | {} | {} |\n", truth_columns(cell),
                        percent(r.right_winner), percent(r.wrong_winner), percent(r.tests_right), percent(r.rows_right),
                        percent(r.corrected_right), percent(r.splits_right), percent(r.called_equal),
                        percent(r.coverage), percent(r.clark_west), percent(r.range_keeps), percent(r.max_keeps));
    }
    return text;
}

std::string write_truths(const std::vector<CellResult>& results, const std::vector<Rates>& rates) {
    std::string text =
        "| cell | items | n | tuned number | true difference x 1000 | mean over samples x 1000 | standard deviation x "
        "1000 | samples not fitted |\n"
        "|---|---|--:|---|--:|--:|--:|--:|\n";
    for (std::size_t i = 0; i < results.size(); ++i) {
        const ExpectedLosses& truth = results[i].truth;
        const std::string expected =
            truth.difference_se[0] > 0
                ? fmt::format("{:.2f} ({:.2f})", 1000 * truth.difference[0], 1000 * truth.difference_se[0])
                : fmt::format("{:g}", truth.difference[0]);
        text += fmt::format("{} {} | {} | {:.2f} ({:.2f}) | {:.2f} | {} |\n", truth_columns(results[i].cell),
                            tuned_words(results[i]), expected, 1000 * rates[i].difference.value,
                            1000 * rates[i].difference.se, 1000 * rates[i].difference_sd, rates[i].not_fitted);
    }
    return text;
}

std::string write_summary(const std::vector<CellResult>& results, const std::vector<Rates>& rates) {
    std::size_t asked = 0, kept = 0, kept_by_tests = 0;
    std::string list, list_of_tests;
    for (std::size_t i = 0; i < results.size(); ++i) {
        if (!has_bounds(results[i].cell)) continue;
        ++asked;
        const std::vector<std::string> faults = shortcomings(results[i].cell, rates[i]);
        kept += faults.empty();
        const Rate tests = rates[i].tests_wrong;
        const bool within = tests.value <= false_winner_bound(rates[i].samples);
        kept_by_tests += within;
        if (!within) list_of_tests += fmt::format("- {}: {:.1f}%\n", results[i].cell.name(), 100 * tests.value);
        if (!faults.empty()) list += fmt::format("- {}: {}\n", results[i].cell.name(), fmt::join(faults, "; "));
    }
    return fmt::format(
        "{} of {} cells of equal expected loss keep every bound.{}\n{}\n{} of {} keep the bound on false winners with "
        "margin 0 too.{}\n{}",
        kept, asked, list.empty() ? "" : " Those that do not:", list, kept_by_tests, asked,
        list_of_tests.empty() ? "" : " Those that do not:", list_of_tests);
}

}  // namespace

Rates rates_of(const CellResult& result, double level) {
    Rates out;
    const std::vector<std::size_t>& best = result.best;
    std::vector<const Judgement*> judged;
    for (const Judgement& one : result.judgements)
        if (!one.failed) judged.push_back(&one);
    out.samples = judged.size();
    out.not_fitted = result.judgements.size() - judged.size();
    const auto right = [&](const std::optional<std::size_t>& winner) {
        return winner && best.size() == 1 && *winner == best.front();
    };
    const auto both = [&](auto winner_of, Rate& wrong_rate, Rate& right_rate) {
        right_rate = mean_over(judged, [&](const Judgement& one) { return right(winner_of(one)); });
        wrong_rate = mean_over(judged, [&](const Judgement& one) { return winner_of(one) && !right(winner_of(one)); });
    };
    both([](const Judgement& one) { return one.winner; }, out.wrong_winner, out.right_winner);
    both([&](const Judgement& one) { return one.leader(&PairJudgement::p_both, level); }, out.tests_wrong,
         out.tests_right);
    both([&](const Judgement& one) { return one.leader(&PairJudgement::p_rows, level); }, out.rows_wrong,
         out.rows_right);
    both([&](const Judgement& one) { return one.leader(&PairJudgement::p_corrected, level); }, out.corrected_wrong,
         out.corrected_right);
    both([&](const Judgement& one) { return one.leader(&PairJudgement::p_splits, level); }, out.splits_wrong,
         out.splits_right);
    out.tied_called_different = mean_over(judged, [&](const Judgement& one) {
        return std::any_of(one.pairs.begin(), one.pairs.end(), [&](const PairJudgement& pair) {
            return pair.called_different && among(best, pair.first) && among(best, pair.second);
        });
    });
    out.called_equal = mean_over(judged, [](const Judgement& one) { return one.pairs[0].called_equal; });
    out.coverage = mean_over(judged, [&](const Judgement& one) {
        double covered = 0, counted = 0;
        for (std::size_t k = 0; k < one.pairs.size(); ++k) {
            const PairJudgement& pair = one.pairs[k];
            if (best.size() > 1 ? !(among(best, pair.first) && among(best, pair.second)) : k > 0) continue;
            counted += 1;
            covered += pair.low <= result.truth.difference[k] && result.truth.difference[k] <= pair.high;
        }
        return covered / counted;
    });
    out.clark_west = mean_over(judged, [&](const Judgement& one) {
        const double p = one.pairs[0].p_clark_west;
        return std::isnan(p) ? p : static_cast<double>(p < level);
    });
    out.range_keeps = mean_over(judged, [&](const Judgement& one) { return holds_best(one.p_set_range, best, level); });
    out.max_keeps = mean_over(judged, [&](const Judgement& one) { return holds_best(one.p_set_max, best, level); });
    out.difference = mean_over(judged, [](const Judgement& one) { return one.pairs[0].difference; });
    out.difference_sd = out.difference.se * std::sqrt(static_cast<double>(judged.size()));
    return out;
}

double false_winner_bound(std::size_t samples) {
    return kMostFalse + 2 * std::sqrt(kMostFalse * (1 - kMostFalse) / static_cast<double>(samples));
}

bool has_bounds(const Cell& cell) {
    return cell.design.aim == Aim::null && cell.rows >= 100 && (!cell.design.clustered || cell.design.cluster_declared);
}

std::vector<std::string> shortcomings(const Cell& cell, const Rates& rates) {
    std::vector<std::string> out;
    if (!has_bounds(cell)) return out;
    const auto within = [](double gap, Rate rate) { return gap <= 2 * rate.se ? ", within 2 Monte Carlo errors" : ""; };
    if (rates.wrong_winner.value > false_winner_bound(rates.samples))
        out.push_back(fmt::format("false winner {:.1f}%", 100 * rates.wrong_winner.value));
    if (cell.design.name == "exchangeable" && rates.wrong_winner.value < kLeastFalse)
        out.push_back(fmt::format("timid: false winner {:.1f}%{}", 100 * rates.wrong_winner.value,
                                  within(kLeastFalse - rates.wrong_winner.value, rates.wrong_winner)));
    if (rates.coverage.value < kLeastCoverage)
        out.push_back(fmt::format("coverage {:.1f}%{}", 100 * rates.coverage.value,
                                  within(kLeastCoverage - rates.coverage.value, rates.coverage)));
    return out;
}

std::string write_markdown(const std::vector<CellResult>& results) {
    std::vector<Rates> rates;
    for (const CellResult& result : results) rates.push_back(rates_of(result));
    return write_nulls(results, rates) + "\n" + write_others(results, rates) + "\n" + write_truths(results, rates) +
           "\n" + write_summary(results, rates);
}

}  // namespace rivalfold::calibration
