// What a sweep cannot beat: drawing its random numbers, and streaming its memory.
#ifndef STILLFIELD_TESTS_BENCH_BOUNDS_H_
#define STILLFIELD_TESTS_BENCH_BOUNDS_H_

#include "bench/field.h"

namespace stillfield::bench {

// Draws the random words of one sweep into a buffer that stays in the cache.
void draw_random_words(const Colouring& colouring, std::uint32_t sweep);

// Reads the weights; reads and writes back the labels and, when counting, the visits. Nothing
// else, with the widest vectors the compiler has by default.
void stream_memory(Field& field, bool counting);

}  // namespace stillfield::bench

#endif  // STILLFIELD_TESTS_BENCH_BOUNDS_H_
