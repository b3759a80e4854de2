#include "simd/label_problem.h"

#include "random/stream.h"

namespace stillfield::testing {
namespace {

template <class Visit>
void for_each_pixel(const Extent& e, const Visit& visit) {
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) visit(x, y, z);
    }
  }
}

RandomStream stream(const LabelProblem& p, std::uint32_t lane) {
  return {{p.seed, 99}, Purpose::kSimulation, 0, lane};
}

GreyLevels make_grey(const LabelProblem& p) {
  GreyLevels g;
  g.level = Volume<std::uint16_t>(p.extent);
  g.levels = p.levels;
  g.histogram.assign(static_cast<std::size_t>(p.levels), 1);
  RandomStream random = stream(p, 0);
  for_each_pixel(p.extent, [&](int x, int y, int z) {
    const std::uint32_t word = random.word();
    const auto level =
        static_cast<std::uint16_t>((word >> 8) % static_cast<std::uint32_t>(p.levels));
    g.level.at(x, y, z) = word % 50 == 0 ? g.missing() : level;
  });
  return g;
}

LabelModel make_model(const LabelProblem& p) {
  LabelModel m;
  m.prior.beta = p.beta;
  RandomStream random = stream(p, 1);
  for (int k = 0; k < p.classes; ++k) {
    m.prior.alpha.push_back(k == 0 ? 0.0 : 0.5 * random.normal());
    m.classes.mean.push_back(p.levels * (k + 0.5) / p.classes);
    m.classes.sd.push_back(p.levels * (0.1 + 0.3 * random.uniform()));
  }
  return m;
}

}  // namespace

Subject::Subject(const LabelProblem& p)
    : grey(make_grey(p)),
      colouring(p.extent, make_neighbourhood(p.connectivity, p.spacing_z), p.offset),
      field(observe(colouring, grey)) {
  chain.key = {p.seed, 77};
  chain.model = make_model(p);
  chain.labels = guarded_labels(colouring);
  RandomStream random = stream(p, 2);
  Volume<std::uint8_t> start(p.extent);
  for_each_pixel(p.extent, [&](int x, int y, int z) {
    start.at(x, y, z) =
        static_cast<std::uint8_t>(random.word() % static_cast<std::uint32_t>(p.classes));
  });
  scatter_labels(colouring, start.view(), chain.labels);
  prepare_weights(field, chain.model, Pool(1), weights);
}

std::vector<std::uint8_t> Subject::labels() const {
  Volume<std::uint8_t> image(colouring.extent());
  gather_labels(colouring, chain.labels, image.view());
  std::vector<std::uint8_t> out;
  for_each_pixel(colouring.extent(),
                 [&](int x, int y, int z) { out.push_back(image.at(x, y, z)); });
  return out;
}

std::vector<std::vector<int>> Subject::visits() const {
  std::vector<std::vector<int>> out(static_cast<std::size_t>(chain.model.size() - 1));
  for (std::size_t k = 0; k < out.size(); ++k) {
    const std::uint8_t* plane = chain.visits.data() + k * colouring.plane_elements();
    for_each_pixel(colouring.extent(), [&](int x, int y, int z) {
      const Site s = colouring.site(x, y, z);
      out[k].push_back(
          plane[colouring.plane_row(s.colour, s.slice, s.row) + colouring.byte_of(s.column)]);
    });
  }
  return out;
}

void Subject::start_counting() {
  chain.visits = AlignedBuffer<std::uint8_t>(colouring.plane_elements() *
                                             static_cast<std::size_t>(chain.model.size() - 1));
}

void Subject::sweep(int sweeps, const Pool& pool) {
  sweep_labels(colouring, weights, sweeps, Purpose::kLabels, pool, chain);
}

reference::LabelField make_twin(const Subject& s) {
  reference::LabelField twin;
  twin.extent = s.colouring.extent();
  twin.neighbourhood = s.colouring.neighbourhood();
  twin.classes = s.chain.model.size();
  twin.beta = s.chain.model.prior.beta;
  twin.table = s.weights.table;
  twin.key = s.chain.key;
  twin.label = s.labels();
  for_each_pixel(twin.extent,
                 [&](int x, int y, int z) { twin.level.push_back(s.grey.level.at(x, y, z)); });
  return twin;
}

}  // namespace stillfield::testing
