// Posterior predictive checks of a label field: does the image look like images drawn from the
// model that was fitted to it?
//
// For each label draw z with its parameters theta, discrepancies T(y, z, theta) of the image and
// T(y_rep, z, theta) of a replicate drawn from the model are compared:
//   p = (1 + number of draws with T(y_rep) >= T(y)) / (1 + draws)
//   [Gelman, Meng & Stern 1996, Statistica Sinica 6, 733-807; the 1 keeps p above 0]
// On a large image any harmless departure is significant. A check fails only if p is at most
// kCheckLevel (or none of fewer draws reached T(y)) and the mean of T(y) - T(y_rep) is beyond a
// limit that matters in practice. The limits are common practice, no source; docs/trust.md shows
// how often they fire.
//
//   name                T                                                limit   grave
//   noise_level         spread of the noise variance (local_noise.h)      0.10    0.50
//   noise_correlation   Moran's I of neighbours, the worse direction      0.03    0.15
//   noise_distribution  distance of the residuals from normal             0.02    0.12
//   slow_trend          share of the residuals that a surface explains    0.01    0.10
//   border_mixing       share of the other class in border pixels         0.08    never
//   stray_values        share of residuals beyond 4 sd                    0.001   0.02
//
// noise_correlation is two-sided, the others look for too large a T.
// Not checked   p = NaN where fewer than kFewestCheckedPixels inner (or border) pixels are at hand,
//               or the noise is below half a grey level
#ifndef STILLFIELD_DIAGNOSE_PREDICTIVE_CHECKS_H_
#define STILLFIELD_DIAGNOSE_PREDICTIVE_CHECKS_H_

#include <array>
#include <cstdint>
#include <vector>

#include "diagnose/model_check.h"
#include "diagnose/residual_block.h"

namespace stillfield {

inline constexpr double kCheckLevel = 0.01;
inline constexpr int kCheckedDraws = 128;  // of all chains together
inline constexpr double kFewestCheckedPixels = 100;

class PredictiveChecks {
 public:
  // Draws draws_a_chain draws of each chain will be shown; kCheckedDraws of them or somewhat
  // more, evenly spaced, are looked at. `grey` and `light` must outlive this. light: class means
  // are multiplied by it; null: even.
  PredictiveChecks(const GreyLevels& grey, int chains, int draws_a_chain, std::uint64_t image_seed,
                   const Volume<float>* light = nullptr);

  // labels: 1..K. Different chains may be shown at the same time; does not throw.
  void show(int chain, int draw, View<const std::uint8_t> labels, const GaussianClasses& classes);

  // In the order of the table above, once every draw has been shown.
  std::vector<ModelCheck> results() const;

 private:
  // What is computed of one image under one draw.
  struct Discrepancies {
    double spread = 0, along_x = 0, along_y = 0, distance = 0, trend = 0, pull = 0, far = 0;
    int distant_class = 0;
  };
  struct Comparison {
    Discrepancies image, replicate;
    double inner_pixels = 0, border_pixels = 0;
    bool noise_visible = false;
  };
  ModelCheck one_sided(const char* name, double Discrepancies::*member) const;
  ModelCheck correlation() const;
  int most_distant_class() const;
  void judge(ModelCheck& check, double limit, double grave_limit, double pixels) const;
  double mean_of(double Comparison::*member) const;

  const GreyLevels& grey_;
  const Volume<float>* light_;
  int stride_;
  int chains_;
  int kept_a_chain_;
  std::uint64_t seed_;
  std::vector<ResidualBlock> blocks_;    // places
  std::vector<Comparison> comparisons_;  // kept_a_chain_ a chain
};

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_PREDICTIVE_CHECKS_H_
