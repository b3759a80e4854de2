// A command of the program: its options, and what to do when it is the one asked for.
#ifndef STILLFIELD_CLI_COMMAND_H_
#define STILLFIELD_CLI_COMMAND_H_

#include <functional>

namespace CLI {
class App;
}

namespace stillfield {

struct Command {
  CLI::App* options = nullptr;
  std::function<int()> run;  // returns the exit code; throws Error
};

}  // namespace stillfield

#endif  // STILLFIELD_CLI_COMMAND_H_
