// The label kernels against the slow twin: the same bytes, on every CPU target.
#include <catch2/catch.hpp>
#include <vector>

#include "simd/forced_target.h"
#include "simd/label_problem.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

constexpr int kSweeps = 3;

std::ptrdiff_t differences(const std::vector<std::uint8_t>& a, const std::vector<std::uint8_t>& b) {
  REQUIRE(a.size() == b.size());
  std::ptrdiff_t n = 0;
  for (std::size_t i = 0; i < a.size(); ++i) n += a[i] != b[i];
  return n;
}

void check_against_twin(const LabelProblem& p) {
  INFO("size " << p.extent.width << " x " << p.extent.height << " x " << p.extent.depth
               << ", neighbours " << static_cast<int>(p.connectivity) << ", classes " << p.classes
               << ", beta " << p.beta << ", spacing " << p.spacing_z);
  reference::LabelField twin = make_twin(Subject(p));
  twin.offset = p.offset;
  const std::vector<std::uint8_t> start = twin.label;
  for (std::uint32_t s = 0; s < kSweeps; ++s) sweep_field(twin, s);
  const Pool pool(1);
  for_each_target([&](const std::string& target) {
    for (const bool counting : {false, true}) {
      INFO("target " << target << ", counting " << counting);
      Subject subject(p);
      REQUIRE(subject.labels() == start);
      if (counting) subject.start_counting();
      subject.sweep(1, pool);
      subject.sweep(kSweeps - 1, pool);  // guards and counters are carried from call to call
      REQUIRE(differences(subject.labels(), twin.label) == 0);
      if (counting) REQUIRE(subject.visits() == twin.visits);
    }
  });
}

}  // namespace

TEST_CASE("label kernels equal the slow twin in planes") {
  const std::vector<Extent> extents = {{1, 1, 1},  {1, 9, 1},  {9, 1, 1},   {2, 2, 1},
                                       {3, 5, 1},  {17, 9, 1}, {63, 5, 1},  {64, 5, 1},
                                       {65, 5, 1}, {66, 5, 1}, {130, 7, 1}, {257, 33, 1}};
  for (const Connectivity connectivity : {Connectivity::kFour, Connectivity::kEight}) {
    for (const int classes : {2, 3, 4, 5, 6, 7, 8, 9, 17, 64}) {
      for (const Extent& e : extents) {
        LabelProblem p{e, connectivity, classes};
        p.seed = static_cast<std::uint32_t>(classes * 1000 + e.width);
        check_against_twin(p);
      }
    }
  }
}

TEST_CASE("label kernels equal the slow twin on rows wider than one, two and three chunks") {
  for (const int width : {3070, 3100, 6200, 9300}) {
    for (const int classes : {2, 3, 8, 9}) {
      check_against_twin({{width, 3, 1}, Connectivity::kFour, classes});
      check_against_twin({{width, 3, 1}, Connectivity::kEight, classes});
    }
  }
}

TEST_CASE("label kernels equal the slow twin in volumes") {
  const std::vector<Extent> extents = {{1, 1, 1}, {2, 2, 2},  {3, 1, 7}, {1, 6, 2},
                                       {5, 4, 3}, {17, 9, 5}, {66, 5, 4}};
  for (const Connectivity connectivity : {Connectivity::kSix, Connectivity::kTwentySix}) {
    for (const double spacing : {1.0, 2.5, 0.4}) {
      for (const int classes : {2, 3, 4, 8, 9, 17}) {
        for (const Extent& e : extents) {
          LabelProblem p{e, connectivity, classes, 0.3, spacing};
          p.seed = static_cast<std::uint32_t>(classes * 1000 + e.width);
          check_against_twin(p);
        }
      }
    }
  }
}

TEST_CASE("label kernels equal the slow twin with no, strong and extreme coupling") {
  for (const double beta : {0.0, 0.05, 5.0, 30.0}) {
    for (const int classes : {2, 3, 9}) {
      check_against_twin({{67, 20, 1}, Connectivity::kFour, classes, beta});
      check_against_twin({{67, 20, 1}, Connectivity::kEight, classes, beta});
    }
  }
}

TEST_CASE("a tile at an offset equals the twin at that offset") {
  for (const Connectivity connectivity : {Connectivity::kFour, Connectivity::kEight}) {
    for (const int classes : {2, 3}) {
      LabelProblem p{{37, 10, 1}, connectivity, classes};
      p.offset = {1236, 64, 0};
      check_against_twin(p);
    }
  }
}

// Without coupling a label depends on its grey level and its random word alone.
TEST_CASE("a tile draws the random words of its place in the whole image") {
  for (const Connectivity connectivity : {Connectivity::kFour, Connectivity::kEight}) {
    for (const int classes : {2, 4}) {
      LabelProblem whole{{100, 60, 1}, connectivity, classes, 0.0};
      LabelProblem part{{37, 21, 1}, connectivity, classes, 0.0};
      whole.levels = part.levels = 1;
      part.offset = {24, 12, 0};
      for_each_target([&](const std::string& target) {
        CAPTURE(target, classes);
        Subject image(whole), tile(part);
        for (Subject* s : {&image, &tile}) {  // the same weights everywhere
          std::fill(s->field.level.begin(), s->field.level.end(), std::uint16_t{0});
          prepare_weights(s->field, image.chain.model, Pool(1), s->weights);
          s->sweep(2, Pool(1));
        }
        const std::vector<std::uint8_t> all = image.labels(), some = tile.labels();
        int wrong = 0, changes = 0;
        for (int y = 0; y < 21; ++y) {
          for (int x = 0; x < 37; ++x) {
            const auto here = static_cast<std::size_t>(y * 37 + x);
            wrong += some[here] != all[static_cast<std::size_t>((y + 12) * 100 + x + 24)];
            changes += some[here] != some[0];
          }
        }
        CHECK(wrong == 0);
        CHECK(changes > 50);  // not one label everywhere
      });
    }
  }
}
