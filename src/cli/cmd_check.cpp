#include "cli/commands.hpp"
#include "cli/terminal.hpp"
#include "rivalfold/contest.hpp"
#include "rivalfold/study/read_study.hpp"

#include <CLI/CLI.hpp>

#include <memory>

namespace rivalfold {
namespace {

struct CheckOptions {
    std::string study;
};

int run_check(const CheckOptions& options) {
    const Outcome outcome = check_contest(read_study(options.study));
    print(stdout, write_plan(outcome, style_of(stdout)));
    print(stderr, write_advice(outcome.advice, style_of(stderr)));
    return kDone;
}

}  // namespace

void add_check(CLI::App& app, Chosen& chosen) {
    auto options = std::make_shared<CheckOptions>();
    CLI::App* command = app.add_subcommand("check", "Print what would run, and all advice; write nothing");
    command->footer("Example: rivalfold check refits.yaml");
    command->add_option("STUDY", options->study, "the study file (YAML)")->type_name("FILE")->required();
    command->callback([options, &chosen] { chosen = [options] { return run_check(*options); }; });
}

}  // namespace rivalfold
