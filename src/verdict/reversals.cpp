#include "rivalfold/verdict/reversals.hpp"

#include "rivalfold/verdict/distributions.hpp"
#include "verdict/p_words.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

namespace rivalfold {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

/// The pair a, b of one segment with its difference turned to L(a) - L(b); null if either theory failed there.
const PairReport* find_pair(const Verdict& verdict, std::size_t a, std::size_t b, double& sign) {
    for (const PairReport& pair : verdict.pairs) {
        sign = pair.a == a ? 1 : -1;
        if ((pair.a == a && pair.b == b) || (pair.a == b && pair.b == a)) return &pair;
    }
    return nullptr;
}

Reversal compare(const Outcome& first, const Outcome& second, std::size_t a, std::size_t b, double level) {
    Reversal out;
    out.a = a;
    out.b = b;
    out.p_holm = kNaN;
    double sign_first = 1, sign_second = 1;
    const PairReport* one = find_pair(first.verdict, a, b, sign_first);
    const PairReport* two = find_pair(second.verdict, a, b, sign_second);
    if (!one || !two) {
        out.difference_first = out.difference_second = out.difference = out.se = out.t = out.df = out.p = out.low =
            out.high = kNaN;
        out.reason = "a theory failed in one of the segments";
        return out;
    }
    const auto wider = [](const PairReport& pair) -> const PairedTest& {
        return pair.rows.se >= pair.corrected.se ? pair.rows : pair.corrected;
    };
    const PairedTest &t1 = wider(*one), &t2 = wider(*two);
    out.difference_first = sign_first * one->difference;
    out.difference_second = sign_second * two->difference;
    out.difference = out.difference_first - out.difference_second;
    const double v1 = t1.se * t1.se, v2 = t2.se * t2.se;
    out.se = std::sqrt(v1 + v2);
    if (!(out.se > 0)) {
        out.t = out.df = out.p = kNaN;
        out.low = out.high = out.difference;
        out.reason = "the two theories make the same predictions";
        return out;
    }
    out.df = (v1 + v2) * (v1 + v2) / (v1 * v1 / t1.df + v2 * v2 / t2.df);
    out.t = out.difference / out.se;
    out.p = student_two_sided(out.t, out.df);
    const double reach = student_quantile(level / 2, out.df) * out.se;
    out.low = out.difference - reach;
    out.high = out.difference + reach;
    return out;
}

std::string in_words(const Outcome& whole, const Reversal& r) {
    const std::string &a = whole.trial.contestants[r.a].name, &b = whole.trial.contestants[r.b].name;
    const auto side = [&](double difference, std::size_t segment) {
        return fmt::format("{:+.4f} in \"{}\"", difference, whole.segments[segment].segment_name);
    };
    const bool turns = (r.difference_first < 0) != (r.difference_second < 0);
    return fmt::format(
        "The segments differ: loss of \"{}\" minus loss of \"{}\" is {} and {} (difference {:+.4f}, interval {:+.4f} "
        "to {:+.4f}, Holm-adjusted {}){}",
        a, b, side(r.difference_first, r.first), side(r.difference_second, r.second), r.difference, r.low, r.high,
        p_words(r.p_holm), turns ? "; the order of the two turns round." : "; the order of the two stays.");
}

}  // namespace

std::vector<Reversal> find_reversals(const Outcome& whole) {
    std::vector<Reversal> out;
    const double level = whole.study.verdict.level;
    for (std::size_t first = 0; first < whole.segments.size(); ++first)
        for (std::size_t second = first + 1; second < whole.segments.size(); ++second)
            for (std::size_t a = 0; a < whole.trial.theories.size(); ++a)
                for (std::size_t b = a + 1; b < whole.trial.theories.size(); ++b) {
                    out.push_back(compare(whole.segments[first], whole.segments[second], a, b, level));
                    out.back().first = first;
                    out.back().second = second;
                }
    std::vector<double> p;
    for (const Reversal& reversal : out) p.push_back(reversal.p);
    const std::vector<double> adjusted = holm(p);
    for (std::size_t i = 0; i < out.size(); ++i) {
        out[i].p_holm = adjusted[i];
        if (out[i].p_holm < level) out[i].words = in_words(whole, out[i]);
    }
    return out;
}

}  // namespace rivalfold
