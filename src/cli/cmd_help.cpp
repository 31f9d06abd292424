#include "cli/commands.hpp"
#include "cli/terminal.hpp"
#include "rivalfold/study/fault.hpp"
#include "rivalfold/study/help_study.hpp"

#include <fmt/format.h>
#include <CLI/CLI.hpp>

#include <array>
#include <memory>

namespace rivalfold {
namespace {

struct HelpOptions {
    std::string topic;
};

struct Topic {
    const char* name;
    std::string_view (*text)();
    const char* purpose;
};

constexpr std::array<Topic, 6> kTopics{{{"study", help_study, "every key of the study file"},
                                        {"terms", help_terms, "weights, scores, terms, equations, prediction"},
                                        {"losses", help_losses, "what is measured on held-out rows"},
                                        {"criteria", help_criteria, "in-sample fit and information criteria"},
                                        {"tests", help_tests, "the paired tests, the verdict, and when they fail"},
                                        {"outputs", help_outputs, "the results folder and exit statuses"}}};

int run_help(const HelpOptions& options) {
    if (options.topic.empty()) {
        std::string list = "Topics of rivalfold help TOPIC:\n";
        for (const Topic& topic : kTopics) list += fmt::format("  {:<10}{}\n", topic.name, topic.purpose);
        print(stdout, list + "\nThe commands: rivalfold --help, and rivalfold COMMAND --help\n");
        return kDone;
    }
    std::vector<std::string> names;
    for (const Topic& topic : kTopics) {
        if (options.topic == topic.name) {
            print(stdout, topic.text());
            return kDone;
        }
        names.emplace_back(topic.name);
    }
    std::string known;
    for (const std::string& name : names) known += (known.empty() ? "" : ", ") + name;
    const std::string hint = did_you_mean(options.topic, names);
    print(stderr, fmt::format("rivalfold: error: no help topic \"{}\"; expected one of {}{}{}\n", options.topic, known,
                              hint.empty() ? "" : "\n", hint));
    return kWrongCommandLine;
}

}  // namespace

void add_help(CLI::App& app, Chosen& chosen) {
    auto options = std::make_shared<HelpOptions>();
    CLI::App* command = app.add_subcommand("help", "Explain a topic, formulas with their published sources");
    command->footer("Topics: study, terms, losses, criteria, tests, outputs\nExample: rivalfold help tests");
    command->add_option("TOPIC", options->topic, "the topic")->type_name("");
    command->callback([options, &chosen] { chosen = [options] { return run_help(*options); }; });
}

}  // namespace rivalfold
