// Ctrl-C, termination requests and hang-ups: the first asks to stop in order, the second ends the
// process.
#ifndef STILLFIELD_CLI_SIGNALS_H_
#define STILLFIELD_CLI_SIGNALS_H_

namespace stillfield {

// From now on SIGINT, SIGTERM and SIGHUP set a flag, unless the caller had SIGINT or SIGHUP ignored
// (nohup); files that reach a limit of size and closed pipes no longer end the process.
void catch_stop_signals();

bool stop_signalled();

}  // namespace stillfield

#endif  // STILLFIELD_CLI_SIGNALS_H_
