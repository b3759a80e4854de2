#include "parallel/pool.h"

#include <atomic>
#include <catch2/catch.hpp>
#include <chrono>
#include <mutex>
#include <set>
#include <thread>
#include <vector>

#include "core/error.h"

using namespace stillfield;

TEST_CASE("bands cover the range exactly once") {
  for (const int threads : {1, 2, 4}) {
    const Pool pool(threads);
    CHECK(pool.threads() == threads);
    for (const int n : {0, 1, 2, 7, 64, 1000}) {
      for (const int grain : {1, 3, 64, 5000}) {
        CAPTURE(threads, n, grain);
        std::vector<std::atomic<int>> visits(static_cast<std::size_t>(n));
        std::atomic<int> empty{0};
        pool.for_bands(n, grain, [&](int first, int last) {
          if (first >= last) ++empty;
          for (int i = first; i < last; ++i) ++visits[static_cast<std::size_t>(i)];
        });
        int wrong = 0;
        for (const auto& v : visits) wrong += v != 1;
        CHECK(wrong == 0);
        CHECK(empty == 0);
      }
    }
  }
}

TEST_CASE("for_each visits every index exactly once") {
  for (const int threads : {1, 2, 4}) {
    const Pool pool(threads);
    for (const int n : {0, 1, 2, 9, 300}) {
      CAPTURE(threads, n);
      std::vector<std::atomic<int>> visits(static_cast<std::size_t>(n));
      pool.for_each(n, [&](int i) { ++visits[static_cast<std::size_t>(i)]; });
      int wrong = 0;
      for (const auto& v : visits) wrong += v != 1;
      CHECK(wrong == 0);
    }
  }
}

// Each of the four tasks waits until all four have begun: only four threads can pass.
TEST_CASE("a pool of four threads runs four threads, even on two cores") {
  const Pool pool(4);
  std::atomic<int> begun{0};
  std::mutex guard;
  std::set<std::thread::id> threads;
  const auto deadline = std::chrono::steady_clock::now() + std::chrono::seconds(30);
  pool.for_each(4, [&](int) {
    ++begun;
    while (begun < 4 && std::chrono::steady_clock::now() < deadline) std::this_thread::yield();
    const std::lock_guard<std::mutex> lock(guard);
    threads.insert(std::this_thread::get_id());
  });
  CHECK(threads.size() == 4);
}

TEST_CASE("a pool of one thread stays on the caller's thread") {
  const Pool pool(1);
  std::set<std::thread::id> threads;
  pool.for_each(8, [&](int) { threads.insert(std::this_thread::get_id()); });
  pool.for_bands(8, 1, [&](int, int) { threads.insert(std::this_thread::get_id()); });
  CHECK(threads == std::set<std::thread::id>{std::this_thread::get_id()});
}

TEST_CASE("a pool needs at least one thread") {
  for (const int threads : {0, -3}) {
    try {
      const Pool pool(threads);
      FAIL("no error for " << threads << " threads");
    } catch (const Error& error) {
      CHECK(error.kind() == ErrorKind::kUsage);
      CHECK(std::string(error.what()).find("at least 1") != std::string::npos);
    }
  }
}

TEST_CASE("a pool that is asked to stop begins no further loop") {
  for (const int threads : {1, 2}) {
    bool stop = false;
    const Pool pool(threads, [&stop] { return stop; });
    std::atomic<int> visits{0};
    const auto count = [&](int /*i*/) { ++visits; };
    pool.for_each(4, count);
    stop = true;
    CHECK_THROWS_AS(pool.for_each(4, count), Error);
    CHECK_THROWS_AS(pool.for_bands(4, 1, [&](int, int) { ++visits; }), Error);
    CHECK(visits == 4);
  }
}
