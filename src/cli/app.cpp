#include "cli/commands.hpp"
#include "cli/terminal.hpp"
#include "rivalfold/report/results_folder.hpp"
#include "rivalfold/study/fault.hpp"

#include <CLI/CLI.hpp>
#include <fmt/format.h>

#include <new>

namespace rivalfold {
namespace {

int wrong_command_line(const std::string& message) {
    print(stderr, fmt::format("rivalfold: error: {}\n", message));
    return kWrongCommandLine;
}

/// The first word that is no option must be a command; the parser itself would not say which word it missed.
std::string unknown_command(const CLI::App& app, int argc, const char* const* argv) {
    std::vector<std::string> names;
    for (const CLI::App* command : app.get_subcommands([](const CLI::App*) { return true; })) names.push_back(command->get_name());
    if (argc < 2 || argv[1][0] == '-') return {};
    const std::string word = argv[1];
    if (std::find(names.begin(), names.end(), word) != names.end()) return {};
    std::string known;
    for (const std::string& name : names) known += (known.empty() ? "" : ", ") + name;
    const std::string hint = did_you_mean(word, names);
    return fmt::format("no command \"{}\"; expected one of {}{}{}", word, known, hint.empty() ? "" : "\n", hint);
}

int run_chosen(const Chosen& chosen) {
    try {
        return chosen();
    } catch (const FaultError& error) {
        print(stderr, fmt::format("{}\n", error.what()));
        return kWrongInput;
    } catch (const SaveError& error) {
        print(stderr, fmt::format("rivalfold: error: {}\n", error.what()));
        return kWrongInput;
    } catch (const std::bad_alloc&) {
        print(stderr, "rivalfold: error: out of memory; use fewer rows, columns or repeats\n");
        return kInternalFault;
    } catch (const std::exception& error) {
        print(stderr, fmt::format("rivalfold: internal fault: {}\nThis is a fault of the program, not of your files; please report it with the study file.\n", error.what()));
        return kInternalFault;
    }
}

}  // namespace

int run_app(int argc, const char* const* argv) {
    CLI::App app("rivalfold: which of several rival theories predicts held-out rows best, and how sure is that?", "rivalfold");
    app.set_version_flag("--version", std::string("rivalfold ") + RIVALFOLD_VERSION);
    app.require_subcommand(0, 1);
    app.footer("Start: rivalfold help study\nExit statuses: 0 done, 1 study or data wrong, 2 command line wrong, 3 internal fault");
    Chosen chosen;
    add_check(app, chosen);
    add_run(app, chosen);
    add_help(app, chosen);
    if (const std::string message = unknown_command(app, argc, argv); !message.empty()) return wrong_command_line(message);
    try {
        app.parse(argc, argv);
    } catch (const CLI::CallForHelp&) {
        for (const CLI::App* command : app.get_subcommands()) {
            print(stdout, command->help());
            return kDone;
        }
        print(stdout, app.help());
        return kDone;
    } catch (const CLI::CallForVersion&) {
        print(stdout, app.version() + "\n");
        return kDone;
    } catch (const CLI::ParseError& error) {
        return wrong_command_line(std::string(error.what()) + "\nRun with --help for what is expected.");
    }
    if (!chosen) {
        print(stdout, app.help());
        return kDone;
    }
    return run_chosen(chosen);
}

}  // namespace rivalfold
