#include "sampler/blur_search.h"

#include <algorithm>
#include <cmath>
#include <vector>

#include "sampler/blurred_classes.h"

namespace stillfield {
namespace {

constexpr double kStep = 0.1;
constexpr double kLargestSearched = 2.5;

// Pixels that lie in some 3 x 3 block of one label.
Volume<std::uint8_t> covered_by_blocks(const Volume<std::uint8_t>& labels) {
  const Extent e = labels.extent();
  Volume<std::uint8_t> covered(e);
  for (int y = 1; y + 1 < e.height; ++y) {
    for (int x = 1; x + 1 < e.width; ++x) {
      bool one = true;
      for (int j = -1; j <= 1; ++j) {
        for (int i = -1; i <= 1; ++i) one = one && labels.at(x + i, y + j) == labels.at(x, y);
      }
      if (!one) continue;
      for (int j = -1; j <= 1; ++j) {
        for (int i = -1; i <= 1; ++i) covered.at(x + i, y + j) = 1;
      }
    }
  }
  return covered;
}

double residual_sum(const BlurredField& field, std::size_t classes) {
  BlurredRegression fit = regress_on_classes(std::vector<double>(classes, 1.0), field);
  for (std::size_t k = 0; k < classes; ++k) {
    fit.square(static_cast<int>(k), static_cast<int>(k)) += 1e-9;  // classes without pixels
  }
  const SquareMatrix inverse = lower_inverse(cholesky(fit.square));
  double explained = 0.0;
  for (std::size_t i = 0; i < classes; ++i) {
    double w = 0.0;
    for (std::size_t j = 0; j <= i; ++j) {
      w += inverse(static_cast<int>(i), static_cast<int>(j)) * fit.product[j];
    }
    explained += w * w;
  }
  return fit.target - explained;
}

}  // namespace

void absorb_thin_labels(const GreyLevels& grey, const GaussianClasses& classes,
                        Volume<std::uint8_t>& labels) {
  const Volume<std::uint8_t> covered = covered_by_blocks(labels);
  const Extent e = labels.extent();
  Volume<std::uint8_t> before(e);
  for (int y = 0; y < e.height; ++y) std::copy_n(labels.row(y), e.width, before.row(y));
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) {
      if (covered.at(x, y) || grey.level.at(x, y) == grey.missing()) continue;
      const double value = grey.value(grey.level.at(x, y));
      double nearest = 0.0;
      bool found = false;
      for (int v = std::max(0, y - 2); v <= std::min(e.height - 1, y + 2); ++v) {
        for (int u = std::max(0, x - 2); u <= std::min(e.width - 1, x + 2); ++u) {
          if (!covered.at(u, v)) continue;
          const double distance = std::fabs(value - classes.mean[before.at(u, v)]);
          if (found && distance >= nearest) continue;
          found = true;
          nearest = distance;
          labels.at(x, y) = before.at(u, v);
        }
      }
    }
  }
}

double search_blur(const GreyLevels& grey, int classes, const Volume<std::uint8_t>& labels) {
  BlurredField field = open_blurred_field(grey, make_blur_kernel(kSmallestBlur));
  set_labels(labels.view(), field);
  std::vector<double> sums;
  const auto b_of = [](std::size_t i) { return kSmallestBlur + kStep * static_cast<double>(i); };
  while (b_of(sums.size()) < kLargestSearched + 0.5 * kStep) {
    set_blur(make_blur_kernel(b_of(sums.size())), {}, field);
    sums.push_back(residual_sum(field, static_cast<std::size_t>(classes)));
  }
  const auto best =
      static_cast<std::size_t>(std::min_element(sums.begin(), sums.end()) - sums.begin());
  if (best == 0 || best + 1 == sums.size()) return b_of(best);
  const double left = sums[best - 1] - sums[best], right = sums[best + 1] - sums[best];
  return b_of(best) + 0.5 * kStep * (left - right) / (left + right);
}

}  // namespace stillfield
