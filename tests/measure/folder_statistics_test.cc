#include "measure/folder_statistics.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <string>
#include <vector>

#include "core/error.h"

using namespace stillfield;

namespace {

Measurement field(double estimate, double sd) {
  Measurement m{.name = "area_fraction", .label = 2, .unit = "1", .estimate = estimate, .sd = sd};
  m.lower95 = estimate - 3 * sd;
  m.upper95 = estimate + sd;
  return m;
}

}  // namespace

TEST_CASE("folder statistics by hand") {
  // Worked by hand (ASTM E562 / E1245 formulas): fields 10 12 14 16 18 percent.
  // mean 14; squares 16 + 4 + 0 + 4 + 16 = 40, s = sqrt(40 / 4) = 3.16228; u = s / sqrt 5
  // = 1.41421; t(0.975, 4) = 2.776445, ci95 = 3.92649; %RA = 28.0463; within: variances 1 1 4 4 5,
  // mean 3, sqrt 3. Fields for 10 %: t s / sqrt n <= 1.4, (t / sqrt n)^2 <= 0.196. t(21)
  // = 2.079614: n = 22, 4.324794 / 22 = 0.196582, too much; t(22) = 2.073873: n = 23, 4.300949 / 23
  // = 0.186998.
  const std::vector<Measurement> fields = {field(10, 1), field(12, 1), field(14, 2), field(16, 2),
                                           field(18, std::sqrt(5.0))};
  const FolderStatistics f = folder_statistics(fields);
  CHECK(f.name == "area_fraction");
  CHECK(f.label == 2);
  CHECK(f.unit == "1");
  CHECK(f.fields == 5);
  CHECK(f.left_out == 0);
  CHECK(f.mean == 14);
  CHECK(f.s == Approx(3.16228).epsilon(1e-5));
  CHECK(f.standard_uncertainty == Approx(1.41421).epsilon(1e-5));
  CHECK(f.ci95 == Approx(3.92649).epsilon(1e-5));
  CHECK(f.lower95 == Approx(10.07351).epsilon(1e-5));
  CHECK(f.upper95 == Approx(17.92649).epsilon(1e-5));
  CHECK(f.relative_accuracy == Approx(28.0463).epsilon(1e-5));
  CHECK(f.within_field_sd == Approx(std::sqrt(3.0)));
  CHECK(f.basis == "between fields");
  CHECK(further_fields(f) == 18);
  CHECK(further_fields(f, 30) == 0);
}

TEST_CASE("folder statistics of a point count as ASTM E562 practises it") {
  // Worked by hand with the formulas of ASTM E562 (from memory; the counts are invented). A grid of
  // P = 100 points on n = 10 fields; points in the phase, with half a point for one on a border:
  // 8 10.5 9 12 7.5 11 9.5 10 8.5 14, so P_p = .08 .105 ... .14.
  // Sum 100, mean 10 points. Deviations -2 .5 -1 2 -2.5 1 -.5 0 -1.5 4, squares 4 .25 1 4 6.25 1 .25
  // 0 2.25 16, sum 35, s = sqrt(35 / 9) = 1.972027 points. t(0.975, 9) = 2.262157 (NIST/SEMATECH
  // e-Handbook of Statistical Methods, 1.3.6.7.2, prints 2.262): 95 % CI = 2.262157 * 1.972027 /
  // sqrt 10 = 1.410703 points, %RA = 14.10703. Fields for 10 %: t s / sqrt n <= 1 point, n >=
  // 3.888889 t^2. t(16) = 2.119905: n = 17, 17.4767 > 17. t(17) = 2.109816: n = 18, 17.3107 <= 18.
  // Eight more. Each field by itself: binomial sd sqrt(.1 * .9 / 100) = .03.
  std::vector<Measurement> fields;
  for (const double points : {8.0, 10.5, 9.0, 12.0, 7.5, 11.0, 9.5, 10.0, 8.5, 14.0}) {
    fields.push_back(field(points / 100, 0.03));
  }
  const FolderStatistics f = folder_statistics(fields);
  CHECK(f.mean == Approx(0.1).epsilon(1e-12));
  CHECK(f.s == Approx(0.01972027).epsilon(1e-6));
  CHECK(f.standard_uncertainty == Approx(0.006236096).epsilon(1e-6));
  CHECK(f.ci95 == Approx(0.01410703).epsilon(1e-6));
  CHECK(f.relative_accuracy == Approx(14.10703).epsilon(1e-6));
  CHECK(f.within_field_sd == Approx(0.03));
  CHECK(further_fields(f) == 8);
}

TEST_CASE("the uncertainty within fields is not counted twice") {
  const std::vector<Measurement> sharp = {field(1, 0), field(2, 0), field(3, 0)};
  const std::vector<Measurement> blurred = {field(1, 9), field(2, 9), field(3, 9)};
  CHECK(folder_statistics(sharp).standard_uncertainty ==
        folder_statistics(blurred).standard_uncertainty);
  CHECK(folder_statistics(sharp).within_field_sd == 0);
  CHECK(folder_statistics(blurred).within_field_sd == 9);
}

TEST_CASE("one field has its posterior alone") {
  const FolderStatistics f = folder_statistics(std::vector<Measurement>{field(0.2, 0.01)});
  CHECK(f.basis == "one field: posterior only");
  CHECK(f.fields == 1);
  CHECK(f.mean == 0.2);
  CHECK(std::isnan(f.s));
  CHECK(f.standard_uncertainty == 0.01);
  CHECK(f.lower95 == Approx(0.17));
  CHECK(f.upper95 == Approx(0.21));
  CHECK(f.ci95 == Approx(0.02));
  CHECK(f.relative_accuracy == Approx(10));
  CHECK(f.within_field_sd == Approx(0.01));
  CHECK_FALSE(further_fields(f).has_value());
}

TEST_CASE("fields without a value are left out and counted") {
  const double nan = std::nan("");
  const double inf = std::numeric_limits<double>::infinity();
  const FolderStatistics f = folder_statistics(
      std::vector<Measurement>{field(1, 0.1), field(nan, 0.1), field(3, 0.1), field(2, inf)});
  CHECK(f.fields == 2);
  CHECK(f.left_out == 2);
  CHECK(f.mean == 2);

  const FolderStatistics none = folder_statistics(std::vector<Measurement>{field(nan, nan)});
  CHECK(none.basis == "no field");
  CHECK(none.fields == 0);
  CHECK(none.left_out == 1);
  CHECK(std::isnan(none.mean));
  CHECK(folder_statistics({}).basis == "no field");
}

TEST_CASE("a class that no field contains has no relative accuracy") {
  const FolderStatistics f = folder_statistics(std::vector<Measurement>{field(0, 0), field(0, 0)});
  CHECK(f.mean == 0);
  CHECK(f.ci95 == 0);
  CHECK(std::isnan(f.relative_accuracy));
  CHECK_FALSE(further_fields(f).has_value());
}

TEST_CASE("fields that agree need no further field; hopeless scatter has no answer") {
  CHECK(further_fields(folder_statistics(std::vector<Measurement>{field(5, 1), field(5, 1)})) == 0);
  CHECK_FALSE(
      further_fields(folder_statistics(std::vector<Measurement>{field(-100, 1), field(100.01, 1)}))
          .has_value());
}

TEST_CASE("further fields are the fewest that do") {
  const std::vector<Measurement> fields = {field(8, 1), field(12, 1), field(9, 1)};
  FolderStatistics f = folder_statistics(fields);
  for (const double target : {50.0, 20.0, 10.0, 5.0, 1.0, 0.3}) {
    CAPTURE(target);
    const auto more = further_fields(f, target);
    REQUIRE(more.has_value());
    // Where the target is met with `more` fields, and was not with one fewer.
    FolderStatistics grown = f;
    grown.fields = f.fields + *more;
    CHECK(further_fields(grown, target) == 0);
    if (*more > 0) {
      --grown.fields;
      CHECK(further_fields(grown, target) == 1);
    }
  }
  CHECK_THROWS_AS(further_fields(f, 0), Error);
}

TEST_CASE("different quantities are not averaged") {
  std::vector<Measurement> fields = {field(1, 0), field(2, 0)};
  fields[1].unit = std::string("um2");
  CHECK_THROWS_WITH(folder_statistics(fields),
                    Catch::Contains("area_fraction of class 2 in 1") && Catch::Contains("in um2"));
  fields[1] = field(2, 0);
  fields[1].label = 3;
  CHECK_THROWS_AS(folder_statistics(fields), Error);
}
