#include "job/measured_draws.h"

#include "measure/from_trace.h"

namespace stillfield {

MeasuredDraws::MeasuredDraws(View<const std::uint8_t> most_probable, View<const float> grey,
                             View<const std::uint8_t> usable, const LabelMeasureSettings& settings,
                             int chains)
    : grey_(grey),
      usable_(usable),
      settings_(settings),
      table_(most_probable, grey, usable, settings, chains),
      keys_(measure_keys(settings)),
      traces_(keys_.size(), std::vector<std::vector<double>>(static_cast<std::size_t>(chains))) {}

void MeasuredDraws::record(const LabelDraw& draw) {
  const std::vector<double> values = measure_labels(
      draw.labels, grey_, usable_, settings_,
      [&](int label, const Particles& particles) { table_.record(draw.chain, label, particles); });
  const auto chain = static_cast<std::size_t>(draw.chain);
  for (std::size_t i = 0; i < values.size(); ++i) traces_[i][chain].push_back(values[i]);
}

std::vector<Measurement> MeasuredDraws::measurements() const {
  std::vector<Measurement> list;
  for (std::size_t i = 0; i < keys_.size(); ++i) {
    list.push_back(
        measurement_from_trace(keys_[i].name, keys_[i].label, keys_[i].unit, Draws(traces_[i])));
  }
  return list;
}

std::vector<ParticleRow> MeasuredDraws::particles() const {
  std::size_t draws = 0;
  for (const std::vector<double>& chain : traces_.front()) draws += chain.size();
  return table_.rows(static_cast<int>(draws));
}

}  // namespace stillfield
