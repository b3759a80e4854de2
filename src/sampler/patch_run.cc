#include "sampler/patch_run.h"

#include <algorithm>
#include <cmath>

#include "sampler/patch_search.h"
#include "sampler/patch_tiling.h"

namespace stillfield {
namespace {

constexpr int kRowsPerTask = 16;

// Calls body(y) for all rows.
template <class Body>
void for_rows(const Volume<float>& v, const Pool& pool, const Body& body) {
  pool.for_bands(v.height(), kRowsPerTask, [&](int first, int last) {
    for (int y = first; y < last; ++y) body(y);
  });
}

}  // namespace

PatchRun::PatchRun(const Volume<float>& value, PatchTables tables, PhiloxKey key, const Pool& pool,
                   PixelRedraw* redraw)
    : pool_(pool),
      key_(key),
      redraw_(redraw),
      tables_(std::move(tables)),
      observed_(value.extent(), value.view().offset()),
      scaled_(value.extent(), value.view().offset()),
      origin_(value.extent()),
      sums_(origin_),
      moments_{Volume<float>(value.extent()), Volume<float>(value.extent())} {
  const double noise_sd = tables_.noise_sd;
  for_rows(value, pool_,
           [&](int y) { std::copy_n(value.row(y), value.width(), observed_.row(y)); });
  scale();
  for_rows(value, pool_, [&](int y) {
    std::copy_n(scaled_.row(y), scaled_.width(), origin_.row(y));
    std::copy_n(value.row(y), value.width(), moments_.mean.row(y));
    std::fill_n(moments_.variance.row(y), value.width(), static_cast<float>(noise_sd * noise_sd));
  });
}

void PatchRun::tiling(std::uint32_t sweep) {
  sweep_ = sweep;
  refresh();
  sweep_tiling(scaled_, tables_, key_, sweep, pool_, sums_);
}

void PatchRun::groups(std::uint32_t sweep, std::uint32_t pass, const GroupPass& settings) {
  sweep_ = sweep;
  refresh();
  SearchImage estimate(scaled_.extent());
  for_rows(scaled_, pool_, [&](int y) {
    for (int x = 0; x < scaled_.width(); ++x) estimate.row(y)[x] = sums_.mean(x, y);
  });
  sums_.clear(pool_);
  pass_groups(scaled_, estimate, tables_, settings, key_, pass, pool_, sums_);
}

const IntensityMoments& PatchRun::moments() {
  const double noise_sd = tables_.noise_sd;
  for_rows(scaled_, pool_, [&](int y) {
    float* mean = moments_.mean.row(y);
    float* variance = moments_.variance.row(y);
    for (int x = 0; x < scaled_.width(); ++x) {
      mean[x] = static_cast<float>(double{sums_.mean(x, y)} * noise_sd + tables_.centre);
      variance[x] = static_cast<float>(double{sums_.variance(x, y)} * noise_sd * noise_sd);
    }
  });
  return moments_;
}

Volume<float> PatchRun::draw(const IntensityMoments& about, std::uint32_t sweep) const {
  Volume<float> out = draw_tiling_deviation(scaled_, tables_, key_, sweep, pool_);
  for_rows(out, pool_, [&](int y) {
    for (int x = 0; x < out.width(); ++x) {
      out.at(x, y) = about.mean.at(x, y) + out.at(x, y) * std::sqrt(about.variance.at(x, y));
    }
  });
  return out;
}

void PatchRun::refresh() {
  if (redraw_) {
    if (!fresh_) moments();
    redraw_->redraw(moments_, sweep_, pool_, observed_);
    scale();
  }
  fresh_ = false;
}

void PatchRun::scale() {
  for_rows(observed_, pool_, [&](int y) {
    for (int x = 0; x < observed_.width(); ++x) {
      scaled_.at(x, y) =
          static_cast<float>((double{observed_.at(x, y)} - tables_.centre) / tables_.noise_sd);
    }
  });
}

}  // namespace stillfield
