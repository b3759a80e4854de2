#include "bench/table.h"

#include <algorithm>
#include <cstdio>

#include "bench/bounds.h"
#include "bench/textbook.h"
#include "bench/timing.h"

namespace stillfield::bench {
namespace {

constexpr int kTextbookSize = 512;
constexpr int kSweepsPerEmptying = 255;

// Nanoseconds a pixel, one entry a repetition.
struct Times {
  std::vector<double> textbook, tuned, random, prepare, total, empty;
  std::vector<double> memory[2], one[2];         // [counting]
  std::vector<double> one_wall[2], two_wall[2];  // on the wall, for the speed-up
};

void print_row(const Case& c, bool counting, const Times& t) {
  // Counting pays its share of the emptying of the 8-bit visits.
  const double share = counting ? median(t.empty) / kSweepsPerEmptying : 0.0;
  const double one = median(t.one[counting]) + share;
  const double random = median(t.random);
  const double memory = median(t.memory[counting]);
  const double bound = std::max(random, memory);
  const double speed_up = median(t.one_wall[counting]) / median(t.two_wall[counting]);
  std::printf("| %d² | %d | %d | %s | %.2f | %.0f× | %.0f× | %.2f (%s) | %.2f | %.2f× |\n", c.size,
              c.classes, static_cast<int>(c.connectivity), counting ? "yes" : "no", 1.0 / one,
              median(t.textbook) / one, median(t.tuned) / one, bound / one,
              random >= memory ? "random" : "memory", 0.5 * speed_up / one, speed_up);
  std::fflush(stdout);
}

}  // namespace

void print_sweep_header() {
  std::puts(
      "| image | K | neighbours | counts | sites/ns, 1 thread | textbook | tuned scalar | of the "
      "bound "
      "| sites/ns/core, 2 threads | speed-up |\n"
      "|---|---|---|---|---|---|---|---|---|---|");
}

void print_pass_header() {
  std::puts(
      "| image | K | neighbours | weights from levels | exact totals | emptying visits |\n"
      "|---|---|---|---|---|---|");
}

PassTimes measure(const Case& c) {
  const Pool one(1), two(2);
  Field field(c.size, c.classes, c.connectivity, one);
  Textbook textbook(make_image(kTextbookSize, c.classes), field.chain.model,
                    static_cast<int>(c.connectivity));
  const double n = field.sites();
  // Some 20 ms a measurement, and at least two sweeps.
  const int sweeps = std::clamp(static_cast<int>(2e7 / n), 2, 80);

  textbook.sweep();
  textbook.sweep();
  field.sweep(2, true, two);
  field.sweep(2, false, one);
  Times t;
  for (int rep = 0; rep < c.repetitions; ++rep) {
    t.textbook.push_back(thread_ns([&] { textbook.sweep(); }) / textbook.sites());
    t.tuned.push_back(thread_ns([&] { textbook.sweep_tuned(); }) / textbook.sites());
    t.random.push_back(thread_ns([&] {
                         for (int s = 0; s < sweeps; ++s) {
                           draw_random_words(field.colouring, static_cast<std::uint32_t>(s));
                         }
                       }) /
                       sweeps / n);
    for (const bool counting : {false, true}) {
      stream_memory(field, counting);
      t.memory[counting].push_back(thread_ns([&] {
                                     for (int s = 0; s < sweeps; ++s)
                                       stream_memory(field, counting);
                                   }) /
                                   sweeps / n);
      double cpu = 0.0;
      field.sweep(1, counting, one);
      const double wall =
          wall_ns([&] { cpu = thread_ns([&] { field.sweep(sweeps, counting, one); }); });
      t.one[counting].push_back(cpu / sweeps / n);
      t.one_wall[counting].push_back(wall / sweeps / n);
      field.sweep(1, counting, two);
      t.two_wall[counting].push_back(wall_ns([&] { field.sweep(sweeps, counting, two); }) / sweeps /
                                     n);
    }
    t.prepare.push_back(
        thread_ns([&] { prepare_weights(field.observed, field.chain.model, one, field.weights); }) /
        n);
    t.total.push_back(thread_ns([&] { total_labels(field.observed, one, field.chain); }) / n);
    t.empty.push_back(thread_ns([&] { field.empty_counts(); }) / n);
  }
  if (c.size == kTextbookSize) {
    std::fprintf(stderr, "K = %d: textbook %.4f, tuned scalar %.4f, random words %.2f a ns\n",
                 c.classes, 1.0 / median(t.textbook), 1.0 / median(t.tuned),
                 1.0 / median(t.random));
  }
  print_row(c, false, t);
  print_row(c, true, t);
  return {c, median(t.prepare), median(t.total), median(t.empty)};
}

void print_pass_row(const PassTimes& t) {
  std::printf("| %d² | %d | %d | %.2f | %.2f | %.2f |\n", t.measured.size, t.measured.classes,
              static_cast<int>(t.measured.connectivity), t.prepare, t.total, t.empty);
}

}  // namespace stillfield::bench
