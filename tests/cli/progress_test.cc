#include "cli/progress.h"

#include <catch2/catch.hpp>

using namespace stillfield;

TEST_CASE("durations are short and readable") {
  CHECK(duration_text(0) == "0 s");
  CHECK(duration_text(0.2) == "1 s");
  CHECK(duration_text(99) == "99 s");
  CHECK(duration_text(120) == "2 min");
  CHECK(duration_text(3600 * 3 + 1200) == "3 h 20 min");
}

TEST_CASE("long names keep their end, and count characters rather than bytes") {
  CHECK(shortened("abc.png", 7) == "abc.png");
  CHECK(shortened("abcdefgh.png", 10) == "...fgh.png");
  CHECK(shortened("\xc3\xa4\xc3\xb6\xc3\xbc.png", 7) == "\xc3\xa4\xc3\xb6\xc3\xbc.png");
  CHECK(shortened("\xc3\xa4\xc3\xb6\xc3\xbc\xc3\xa4\xc3\xb6\xc3\xbc.png", 9) ==
        "...\xc3\xb6\xc3\xbc.png");
}

TEST_CASE("control characters of a name do not reach the terminal") {
  CHECK(shortened("a\x1b[2J\nb", 20) == "a?[2J?b");
}
