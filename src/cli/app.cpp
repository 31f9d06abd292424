#include "cli/commands.hpp"
#include "cli/terminal.hpp"
#include "rivalfold/report/results_folder.hpp"
#include "rivalfold/study/fault.hpp"

#include <fmt/format.h>
#include <fmt/ranges.h>
#include <CLI/CLI.hpp>

#include <algorithm>
#include <cstdio>
#include <new>
#include <string>
#include <vector>

namespace rivalfold {
namespace {

int wrong_command_line(const std::string& message) {
    print(stderr, fmt::format("rivalfold: error: {}\n", message));
    return kWrongCommandLine;
}

/// The first word that is no option must be a command; the parser itself would not say which word it missed.
std::string unknown_command(const CLI::App& app, int argc, const char* const* argv) {
    std::vector<std::string> names;
    for (const CLI::App* command : app.get_subcommands([](const CLI::App*) { return true; }))
        names.push_back(command->get_name());
    if (argc < 2 || argv[1][0] == '-') return {};
    const std::string word = argv[1];
    if (std::find(names.begin(), names.end(), word) != names.end()) return {};
    const std::string hint = did_you_mean(word, names);
    return fmt::format("no command \"{}\"; expected one of {}{}{}", word, fmt::join(names, ", "),
                       hint.empty() ? "" : "\n", hint);
}

std::string in_words(const CLI::App& app, const CLI::ParseError& error) {
    const std::vector<CLI::App*> chosen = app.get_subcommands();
    const CLI::App& command = chosen.empty() ? app : *chosen.front();
    const std::string called = chosen.empty() ? "rivalfold" : "rivalfold " + command.get_name();
    std::string text = error.what(), hint;
    if (dynamic_cast<const CLI::ExtrasError*>(&error) != nullptr) {
        const std::vector<std::string> extra = app.remaining(true);
        const auto option =
            std::find_if(extra.begin(), extra.end(), [](const std::string& word) { return word.front() == '-'; });
        if (option == extra.end()) {
            text = fmt::format("\"{}\" is one argument too many", extra.empty() ? "" : extra.front());
        } else {
            std::vector<std::string> names;
            for (const CLI::Option* known :
                 command.get_options([](const CLI::Option* o) { return o->nonpositional(); }))
                names.push_back(known->get_name());
            text = fmt::format("{} has no option \"{}\"; expected one of {}", called, *option, fmt::join(names, ", "));
            hint = did_you_mean(*option, names);
        }
    } else if (dynamic_cast<const CLI::ArgumentMismatch*>(&error) != nullptr) {
        text = text.substr(0, text.find(':')) + ": expected once, with one value";
    }
    return fmt::format("{}{}{}\n{} --help says what is expected", text, hint.empty() ? "" : "\n", hint, called);
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
        print(stderr, fmt::format("rivalfold: internal fault: {}\nThis is a fault of the program, not of your files; "
                                  "please report it with the study file.\n",
                                  error.what()));
        return kInternalFault;
    }
}

}  // namespace

namespace {

int read_and_run(int argc, const char* const* argv) {
    CLI::App app("rivalfold: which rival theory predicts held-out rows best, and how surely?", "rivalfold");
    app.get_formatter()->column_width(23);
    app.set_version_flag("--version", std::string("rivalfold ") + RIVALFOLD_VERSION);
    app.require_subcommand(0, 1);
    app.footer(
        "Start: rivalfold help study\nExit statuses: 0 done, 1 study or data wrong, 2 command line wrong,\n  3 "
        "internal fault");
    Chosen chosen;
    add_check(app, chosen);
    add_run(app, chosen);
    add_help(app, chosen);
    if (const std::string message = unknown_command(app, argc, argv); !message.empty())
        return wrong_command_line(message);
    try {
        app.parse(argc, argv);
    } catch (const CLI::CallForHelp&) {
        for (const CLI::App* command : app.get_subcommands()) {
            print(stdout, command->help("rivalfold"));
            return kDone;
        }
        print(stdout, app.help());
        return kDone;
    } catch (const CLI::CallForVersion&) {
        print(stdout, app.version() + "\n");
        return kDone;
    } catch (const CLI::ParseError& error) {
        return wrong_command_line(in_words(app, error));
    }
    if (!chosen) {
        print(stdout, app.help());
        return kDone;
    }
    return run_chosen(chosen);
}

}  // namespace

int run_app(int argc, const char* const* argv) {
    const int status = read_and_run(argc, argv);
    if (status != kDone || std::ferror(stdout) == 0) return status;
    print(stderr,
          "rivalfold: error: standard output could not be written in full\n");  // a full disk behind a redirection
    return kWrongInput;
}

}  // namespace rivalfold
