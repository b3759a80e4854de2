#include "cli/signals.h"

#include <signal.h>

namespace stillfield {
namespace {

volatile sig_atomic_t stop_flag = 0;

extern "C" void on_stop_signal(int number) {
  if (stop_flag != 0) {
    signal(number, SIG_DFL);
    raise(number);
  }
  stop_flag = 1;
}

}  // namespace

void catch_stop_signals() {
  struct sigaction action {};
  action.sa_handler = on_stop_signal;
  action.sa_flags = SA_RESTART;
  sigemptyset(&action.sa_mask);
  sigaction(SIGINT, &action, nullptr);
  sigaction(SIGTERM, &action, nullptr);
}

bool stop_signalled() {
  return stop_flag != 0;
}

}  // namespace stillfield
