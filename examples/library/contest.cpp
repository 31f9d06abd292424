// A contest through the library: reads a study file, runs it, prints every contestant's held-out loss and the headline.
// Nothing is written; rivalfold::save_contest would write the results folder.
#include <rivalfold/contest.hpp>
#include <rivalfold/study/fault.hpp>
#include <rivalfold/study/read_study.hpp>

#include <cstdio>
#include <exception>

namespace {

void print(const rivalfold::Outcome& outcome) {
    std::printf("%s\n%zu rows, %d repeats of %d folds\n\n", outcome.study.title.c_str(), outcome.survey.n(),
                outcome.trial.repeats, outcome.trial.folds);
    std::printf("   loss      q2  name\n");
    for (const std::size_t contestant : outcome.verdict.order) {  // smallest held-out loss first, benchmarks among them
        const rivalfold::ContestantLosses& losses = outcome.trial.contestants[contestant];
        std::printf("%7.4f %7.4f  %s%s\n", losses.loss, losses.q2, losses.name.c_str(),
                    losses.is_theory ? "" : " (benchmark)");
    }
    for (const rivalfold::ContestantLosses& losses : outcome.trial.contestants)
        if (losses.failed) std::printf(" failed          %s: %s\n", losses.name.c_str(), losses.reason.c_str());
    std::printf("\n%s\n", outcome.verdict.headline.c_str());
    std::printf(
        "Prediction is not causation: this says nothing of what would happen if somebody changed an antecedent.\n");
}

}  // namespace

int main(int argc, char** argv) {
    if (argc != 2) {
        std::fprintf(stderr, "usage: contest STUDY.yaml\n");
        return 2;
    }
    try {
        print(rivalfold::run_contest(rivalfold::read_study(argv[1])));
        return 0;
    } catch (const rivalfold::FaultError& error) {  // the study or its data is wrong: every fault, with its place
        std::fprintf(stderr, "%s\n%zu thing%s to put right\n", error.what(), error.faults().size(),
                     error.faults().size() == 1 ? "" : "s");
        return 1;
    } catch (const std::exception& error) {
        std::fprintf(stderr, "the contest could not be run: %s\n", error.what());
        return 3;
    }
}
