// Measures one row of docs/speed.md and prints it as a Markdown table row.
#ifndef STILLFIELD_TESTS_BENCH_TABLE_H_
#define STILLFIELD_TESTS_BENCH_TABLE_H_

#include "model/neighbourhood.h"

namespace stillfield::bench {

struct Case {
  int size;
  int classes;
  Connectivity connectivity;
  int repetitions;
};

void print_sweep_header();
void print_pass_header();

struct PassTimes {
  Case measured;
  double prepare, total, empty;  // ns a pixel
};

// Prints two rows, without and with counts; the times of the other passes are returned.
PassTimes measure(const Case& c);
void print_pass_row(const PassTimes& times);

}  // namespace stillfield::bench

#endif  // STILLFIELD_TESTS_BENCH_TABLE_H_
