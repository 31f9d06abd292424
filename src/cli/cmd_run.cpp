#include "cli/commands.hpp"
#include "cli/terminal.hpp"
#include "rivalfold/contest.hpp"
#include "rivalfold/report/results_folder.hpp"
#include "rivalfold/study/read_study.hpp"

#include <fmt/format.h>
#include <CLI/CLI.hpp>

#include <charconv>
#include <memory>
#include <string>
#include <system_error>

namespace rivalfold {
namespace {

struct RunOptions {
    std::string study;
    std::string folder;    ///< empty: the study's name with .results
    unsigned threads = 0;  ///< 0: one per core
};

std::string fault_of_threads(const std::string& text) {
    unsigned threads = 0;
    const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), threads);
    if (error == std::errc() && end == text.data() + text.size() && threads >= 1 && threads <= 1024) return {};
    return fmt::format("expected a whole number from 1 to 1024, found \"{}\"", text);
}

int run_run(const RunOptions& options) {
    const Study study = read_study(options.study);
    const std::string folder = options.folder.empty() ? default_results_folder(options.study) : options.folder;
    check_results_folder(folder);  // before the work, not after it
    Outcome outcome;
    {
        ProgressLine progress;
        outcome = run_contest(study, {options.threads, [&](double share) { progress.show(share); }});
    }
    save_contest(outcome, folder);
    print(stdout, write_tables(outcome, style_of(stdout)));
    print(stderr, write_advice(outcome.advice, style_of(stderr)));
    if (outcome.study.verdict.completeness)
        print(stderr, fmt::format("completeness took {:.1f} s\n", outcome.completeness.seconds));
    print(stderr, fmt::format("results: {}\n", folder));
    return kDone;
}

}  // namespace

void add_run(CLI::App& app, Chosen& chosen) {
    auto options = std::make_shared<RunOptions>();
    CLI::App* command = app.add_subcommand("run", "Run the contest: print ranking and verdict, write results");
    command->footer("Example: rivalfold run refits.yaml -o refits.results");
    command->add_option("STUDY", options->study, "the study file (YAML)")->type_name("FILE")->required();
    command->add_option("-o,--output", options->folder, "results folder (default: STUDY's name with .results)")
        ->type_name("DIR");
    command->add_option("--threads", options->threads, "threads; change only the time (default: one per core)")
        ->type_name("N")
        ->check(fault_of_threads);
    command->callback([options, &chosen] { chosen = [options] { return run_run(*options); }; });
}

}  // namespace rivalfold
