// Ctrl-C and termination requests: the first asks to stop in order, the second ends the process.
#ifndef STILLFIELD_CLI_SIGNALS_H_
#define STILLFIELD_CLI_SIGNALS_H_

namespace stillfield {

// From now on SIGINT and SIGTERM set a flag.
void catch_stop_signals();

bool stop_signalled();

}  // namespace stillfield

#endif  // STILLFIELD_CLI_SIGNALS_H_
