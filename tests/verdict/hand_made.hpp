// Three theories of one contest whose losses are made by hand, so that every number of a sentence is known beforehand.
#pragma once

#include "judged.hpp"

namespace rivalfold {

/// n differences with exactly the given mean and standard error of the mean.
inline Eigen::VectorXd made_differences(Eigen::Index n, double mean, double se, std::uint32_t stream_index) {
    RandomStream stream(12, Purpose::simulation, stream_index);
    Eigen::VectorXd noise(n);
    for (Eigen::Index i = 0; i < n; ++i) noise(i) = bell(stream);
    noise.array() -= noise.mean();
    const double own = std::sqrt(noise.squaredNorm() / static_cast<double>(n - 1) / static_cast<double>(n));
    return (noise * (se / own)).array() + mean;
}

/// A, B and C lose 1 on average and the benchmarks 3, until told otherwise; 5 folds, 4 repeats.
struct MadeContest {
    static constexpr Eigen::Index kSplits = 20;
    SmallContest contest;
    Trial trial;
    Eigen::Index n;

    /// `target`: indicators of delivery; `third`: the equation of C. Of "skl1", "skl2" and their sum no weights of
    /// mode_b exist: `tied` cannot be fitted.
    explicit MadeContest(Eigen::Index rows = 120, const std::string& verdict = "", const std::string& target = "dlv1",
                         const std::string& third = "{minimum: [planning, skill]}")
        : n(rows) {
        Answers answers = invented_answers(n);
        answers.column("skl3") = answers.column("skl1") + answers.column("skl2");
        contest = prepare(
            "study: refits\ndata: {file: refits.csv}\nconstructs:\n  planning: {indicators: [pln1]}\n"
            "  skill: {indicators: [skl1]}\n  tied: {indicators: [\"skl*\"], weights: mode_b}\n"
            "  delivery: {indicators: [" +
                target +
                "]}\ntarget: delivery\ntrial: {folds: 5, repeats: 4}\ntheories:\n"
                "  - {name: A, equations: {delivery: [planning]}}\n"
                "  - {name: B, equations: {delivery: [skill]}}\n"
                "  - {name: C, equations: {delivery: [" +
                third + "]}}\n" + verdict,
            answers.csv());
        trial = run_trial(contest.study, contest.survey, *contest.sample, contest.plan, 1);
        for (std::size_t c = 0; c < 5; ++c)
            if (!trial.contestants[c].failed)
                set(c, Eigen::VectorXd::Constant(n, c < 3 ? 1 : 3) + made_differences(n, 0, 0.03, 77),
                    Eigen::VectorXd::Constant(kSplits, c < 3 ? 1 : 3));
    }
    void set(std::size_t c, const Eigen::VectorXd& row_loss, const Eigen::VectorXd& split_loss) {
        ContestantLosses& losses = trial.contestants[c];
        losses.row_loss = row_loss;
        losses.loss = row_loss.mean();
        losses.split_loss = split_loss;
        losses.repeat_loss = Eigen::VectorXd::Constant(4, losses.loss);
    }
    /// Theory c loses `mean` more than A, with these t values of the row test and of the corrected test.
    void worse(std::size_t c, double mean, double t_rows, double t_splits) {
        const double correction = std::sqrt(kSplits * (1.0 / kSplits + 1.0 / 4));
        const auto index = static_cast<std::uint32_t>(c);
        set(c, trial.contestants[0].row_loss + made_differences(n, mean, mean / t_rows, index),
            trial.contestants[0].split_loss +
                made_differences(kSplits, mean, mean / t_splits / correction, 20 + index));
    }
    void typical_errors(double of_a, double of_b) {
        for (IndicatorErrors& errors : trial.contestants[0].indicators) errors.rmse = of_a;
        for (IndicatorErrors& errors : trial.contestants[1].indicators) errors.rmse = of_b;
    }
    Verdict judged() const { return judge(contest, trial); }
};

inline const PairReport& pair_of(const Verdict& verdict, std::size_t a, std::size_t b) {
    for (const PairReport& report : verdict.pairs)
        if (report.a == a && report.b == b) return report;
    throw std::logic_error("no such pair");
}

}  // namespace rivalfold
