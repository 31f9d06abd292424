#include "cli/commands.hpp"

int main(int argc, char** argv) { return rivalfold::run_app(argc, argv); }
