#include "cli/signals.h"

#include <signal.h>

#include <initializer_list>

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
  sigaction(SIGTERM, &action, nullptr);
  for (const int number : {SIGINT, SIGHUP}) {
    struct sigaction before {};
    sigaction(number, nullptr, &before);
    if (before.sa_handler != SIG_IGN) sigaction(number, &action, nullptr);  // nohup, background
  }
  signal(SIGXFSZ, SIG_IGN);  // a file that may not grow further is an error with a sentence
  signal(SIGPIPE, SIG_IGN);  // and so is a terminal that has gone
}

bool stop_signalled() {
  return stop_flag != 0;
}

}  // namespace stillfield
