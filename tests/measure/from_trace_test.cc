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

TEST_CASE("draws without the quantity are left out, and their share is told") {
  const double none = std::nan("");
  std::vector<std::vector<double>> chains(4);
  std::vector<double> there;
  for (int c = 0; c < 4; ++c) {
    for (int i = 0; i < 50; ++i) {
      const bool missing = i % 10 == 3 || (c == 2 && i == 49);
      const double value = 5 + 0.01 * ((37 * i + 11 * c) % 101);
      chains[static_cast<std::size_t>(c)].push_back(missing ? none : value);
      if (!missing) there.push_back(value);
    }
  }
  const Measurement m = measurement_from_trace("d50", 2, "px", Draws(chains));
  const TraceSummary s = summarise(Draws(there, 1));
  CHECK(m.defined_share == 179.0 / 200);
  CHECK(m.estimate == s.mean);
  CHECK(m.sd == s.sd);
  CHECK(m.lower90 == s.lower90);
  CHECK(m.upper95 == s.upper95);
  CHECK(std::isfinite(m.mcse));
  CHECK(std::isfinite(m.rhat));

  CHECK(measurement_from_trace("d50", 2, "px", Draws(there, 1)).defined_share == 1);
}

TEST_CASE("a quantity that most draws lack has no figures; one chain without it no diagnostics") {
  const double none = std::nan("");
  std::vector<std::vector<double>> chains(4, std::vector<double>(20, none));
  for (int i = 0; i < 19; ++i) chains[0][static_cast<std::size_t>(i)] = i;
  const Measurement rare = measurement_from_trace("d50", 1, "px", Draws(chains));
  CHECK(rare.defined_share == 19.0 / 80);
  CHECK(std::isnan(rare.estimate));
  for (int i = 0; i < 20; ++i) {
    chains[1][static_cast<std::size_t>(i)] = i;
    chains[2][static_cast<std::size_t>(i)] = i;
  }
  const Measurement three = measurement_from_trace("d50", 1, "px", Draws(chains));
  CHECK(three.defined_share == 59.0 / 80);
  CHECK(std::isfinite(three.estimate));
  CHECK(std::isfinite(three.lower90));
  CHECK(std::isnan(three.rhat));
  CHECK(std::isnan(three.mcse));
}
