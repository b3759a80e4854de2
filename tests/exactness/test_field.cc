#include "exactness/test_field.h"

#include <algorithm>
#include <cmath>

#include "random/stream.h"

namespace stillfield::exactness {
namespace {

GreyLevels make_grey(const FieldSpec& spec) {
  GreyLevels g;
  g.level = Volume<std::uint16_t>({spec.width, spec.height});
  g.levels = spec.levels;
  g.origin = spec.origin;
  g.step = spec.step;
  g.histogram.assign(static_cast<std::size_t>(spec.levels), 0);
  for (int y = 0; y < spec.height; ++y) {
    for (int x = 0; x < spec.width; ++x) {
      const std::uint16_t l = spec.level[static_cast<std::size_t>(y * spec.width + x)];
      g.level.at(x, y) = l;
      if (l == spec.levels) continue;
      ++g.histogram[l];
      ++g.observed;
    }
  }
  return g;
}

}  // namespace

FieldSpec random_spec(int width, int height, Connectivity connectivity, int classes, double beta,
                      std::uint64_t seed) {
  FieldSpec spec;
  spec.width = width;
  spec.height = height;
  spec.connectivity = connectivity;
  spec.seed = seed;
  spec.origin = -20.0;
  spec.step = 0.5;
  RandomStream random(chain_key(seed, 50), Purpose::kSimulation);
  spec.model.prior.beta = beta;
  for (int k = 0; k < classes; ++k) {
    spec.model.prior.alpha.push_back(k == 0 ? 0.0 : 1.2 * (random.uniform() - 0.5));
    spec.model.classes.mean.push_back(100.0 * (k + 0.5) / classes - 20.0);
    spec.model.classes.sd.push_back(45.0 + 40.0 * random.uniform());
  }
  for (int s = 0; s < width * height; ++s) {
    const double level = 256.0 * random.uniform();
    spec.level.push_back(static_cast<std::uint16_t>(random.uniform() < 0.1 ? 256.0 : level));
  }
  return spec;
}

FieldSpec empty_spec(int width, int height, int classes, double beta, std::uint64_t seed) {
  FieldSpec spec;
  spec.width = width;
  spec.height = height;
  const auto count = static_cast<std::size_t>(classes);
  spec.seed = seed;
  spec.levels = 1;
  spec.level.assign(static_cast<std::size_t>(width * height), 1);  // all missing
  spec.model.prior = {std::vector<double>(count), beta};
  spec.model.classes.mean.assign(count, 0.0);
  spec.model.classes.sd.assign(count, 1.0);
  return spec;
}

GibbsField plain_field(const FieldSpec& spec) {
  const LabelModel& m = spec.model;
  GibbsField f{spec.width,   spec.height, m.size(), spec.connectivity == Connectivity::kEight,
               m.prior.beta, {}};
  for (const std::uint16_t level : spec.level) {
    for (std::size_t k = 0; k < m.classes.mean.size(); ++k) {
      double w = m.prior.alpha[k];
      if (level != spec.levels) {
        const double d = (spec.origin + spec.step * level - m.classes.mean[k]) / m.classes.sd[k];
        w += -0.5 * d * d - std::log(m.classes.sd[k]);
      }
      f.log_weight.push_back(w);
    }
  }
  return f;
}

TestField::TestField(const FieldSpec& spec)
    : serial(1),
      grey(make_grey(spec)),
      colouring({spec.width, spec.height}, make_neighbourhood(spec.connectivity)),
      field(observe(colouring, grey)) {
  chain.key = chain_key(spec.seed, 0);
  chain.model = spec.model;
  chain.labels = guarded_labels(colouring);
  RandomStream random(chain.key, Purpose::kStart);
  Labels start;
  for (std::size_t s = 0; s < spec.level.size(); ++s) {
    start.push_back(static_cast<std::uint8_t>(random.uniform() * spec.model.size()));
  }
  set_labels(start);
  prepare();
}

double TestField::pairs_now() {
  total();
  return chain.totals.weighted_pairs(colouring.neighbourhood());
}

void TestField::start_counting() {
  chain.visits = AlignedBuffer<std::uint8_t>(colouring.plane_elements() *
                                             static_cast<std::size_t>(chain.model.size() - 1));
  chain.visits_pending = 0;
}

std::vector<int> TestField::visits(int k) const {
  std::vector<int> out;
  const std::uint8_t* plane =
      chain.visits.data() + static_cast<std::size_t>(k - 1) * colouring.plane_elements();
  for (int y = 0; y < colouring.extent().height; ++y) {
    for (int x = 0; x < colouring.extent().width; ++x) {
      const Site s = colouring.site(x, y, 0);
      out.push_back(
          plane[colouring.plane_row(s.colour, s.slice, s.row) + colouring.byte_of(s.column)]);
    }
  }
  return out;
}

void TestField::empty_visits() {
  std::fill(chain.visits.begin(), chain.visits.end(), std::uint8_t{0});
  chain.visits_pending = 0;
}

Labels TestField::labels() const {
  const Extent e = colouring.extent();
  Volume<std::uint8_t> image(e);
  gather_labels(colouring, chain.labels, image.view());
  Labels out;
  for (int y = 0; y < e.height; ++y) out.insert(out.end(), image.row(y), image.row(y) + e.width);
  return out;
}

void TestField::set_labels(const Labels& labels) {
  const Extent e = colouring.extent();
  Volume<std::uint8_t> image(e);
  for (int y = 0; y < e.height; ++y)
    std::copy_n(labels.data() + y * e.width, e.width, image.row(y));
  scatter_labels(colouring, image.view(), chain.labels);
}

}  // namespace stillfield::exactness
