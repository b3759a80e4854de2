#include "measure/from_trace.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <vector>

using namespace stillfield;

TEST_CASE("a measurement carries the summary of its trace") {
  std::vector<double> values;
  for (int i = 0; i < 400; ++i) values.push_back(0.2 + 0.001 * (i * 37 % 101));
  const Draws draws(values, 4);
  const TraceSummary s = summarise(draws);
  const Measurement m = measurement_from_trace("area_fraction", 2, "1", draws);
  CHECK(m.name == "area_fraction");
  CHECK(m.label == 2);
  CHECK(m.unit == "1");
  CHECK(m.estimate == s.mean);
  CHECK(m.plain_estimate == s.mean);
  CHECK(m.sd == s.sd);
  CHECK(m.lower90 == s.lower90);
  CHECK(m.upper90 == s.upper90);
  CHECK(m.lower95 == s.lower95);
  CHECK(m.upper95 == s.upper95);
  CHECK(m.mcse == s.mcse);
  CHECK(m.rhat == s.rhat);
  CHECK(m.ess == std::min(s.ess_bulk, s.ess_tail));
  CHECK(m.lower95 < m.lower90);
  CHECK(m.upper90 < m.upper95);
}

TEST_CASE("a measurement that is the same in every draw, and one without draws") {
  const Measurement m =
      measurement_from_trace("particle_count", 1, "1", Draws(std::vector<double>(40, 12), 4));
  CHECK(m.estimate == 12);
  CHECK(m.sd == 0);
  CHECK(m.lower95 == 12);
  CHECK(m.upper95 == 12);
  CHECK(m.mcse == 0);
  CHECK(std::isnan(m.rhat));
  CHECK(std::isnan(m.ess));
  CHECK(std::isnan(measurement_from_trace("d50", 1, "um", Draws()).estimate));
}

TEST_CASE("the sample size of a measurement is known only if both parts are") {
  TraceSummary s;
  s.mean = 1;
  s.ess_bulk = 500;
  CHECK(std::isnan(measurement_from_summary("a", 0, "1", s).ess));
  s.ess_tail = 300;
  CHECK(measurement_from_summary("a", 0, "1", s).ess == 300);
}
