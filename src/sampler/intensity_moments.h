// Posterior mean and variance of every pixel of an intensity field, and how settled they are.
//
// Maths    each chain is cut in batches; a batch of n sweeps with mean d joins the N sweeps before
//          it (Chan, Golub & LeVeque 1983)
//            e = d - m,  m += e n/(N+n),  M2 += M2_batch + e^2 N n/(N+n),  B += e^2 N n/(N+n)
//          variance = (sum of M2 and of N (m_chain - m)^2) / (sweeps of all chains - 1)
//   MCSE   of a chain's mean: B / ((batches - 1) N), the squared error by batch means (Flegal &
//          Jones 2010); of J chains together the mean of these over J
//   R-hat  sqrt((W + V) / W), W = mean over chains of M2 / N, V = variance of the chains' means
// Units    grey units; the observed image's centre and the shift are put back
// Memory   12 bytes a pixel and chain
#ifndef STILLFIELD_SAMPLER_INTENSITY_MOMENTS_H_
#define STILLFIELD_SAMPLER_INTENSITY_MOMENTS_H_

#include <vector>

#include "sampler/intensity_chain.h"
#include "sampler/pixel_redraw.h"

namespace stillfield {

struct IntensityQuality {
  double relative_mcse = 0.0;  // root mean square over pixels of MCSE / posterior sd
  double worst_share = 0.0;    // share of pixels with R-hat above 1.05
};

class IntensityTotals {
 public:
  // `shift` is the plane the chains' moments are taken about; it must outlive this object.
  IntensityTotals(const ObservedIntensity& observed, const AlignedBuffer<float>& shift, int chains);

  // Moves the chain's pending moments here as one batch. All batches have the same length.
  // Different chains may do so at the same time.
  void take(int chain_number, IntensityChain& chain);

  IntensityMoments moments() const;
  IntensityQuality quality() const;

 private:
  struct ChainTotals {
    AlignedBuffer<float> mean, squares, between;
    int sweeps = 0;
    int batches = 0;
  };
  const ObservedIntensity& observed_;
  const AlignedBuffer<float>& shift_;
  std::vector<ChainTotals> chains_;
};

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_INTENSITY_MOMENTS_H_
