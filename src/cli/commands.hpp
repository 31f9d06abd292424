// The list of commands. Each command is one file: an options struct, a setup that touches no file, a run.
#pragma once

#include <functional>
#include <string_view>

namespace CLI {
class App;
}

namespace rivalfold {

/// Exit statuses, as `help outputs` lists them.
enum ExitStatus { kDone = 0, kWrongInput = 1, kWrongCommandLine = 2, kInternalFault = 3 };

/// Set by a command's setup to what must be run once the command line is read.
using Chosen = std::function<int()>;

void add_check(CLI::App& app, Chosen& chosen);
void add_run(CLI::App& app, Chosen& chosen);
void add_help(CLI::App& app, Chosen& chosen);

/// Parses the command line, runs the command, turns every fault into a message and an exit status.
int run_app(int argc, const char* const* argv);

// The pages of `help TOPIC`; the page on the study file belongs to the study room.
std::string_view help_terms();
std::string_view help_losses();
std::string_view help_criteria();
std::string_view help_tests();
std::string_view help_outputs();

}  // namespace rivalfold
