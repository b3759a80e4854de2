#include "exactness/max_flow.h"

#include <boost/graph/adjacency_list.hpp>
#include <boost/graph/boykov_kolmogorov_max_flow.hpp>
#include <cmath>
#include <cstdint>

namespace stillfield::exactness {
namespace {

using Traits = boost::adjacency_list_traits<boost::vecS, boost::vecS, boost::directedS>;
using Edge = Traits::edge_descriptor;
using Vertex = Traits::vertex_descriptor;
using VertexProperties = boost::property<
    boost::vertex_index_t, long,
    boost::property<boost::vertex_color_t, boost::default_color_type,
                    boost::property<boost::vertex_distance_t, long,
                                    boost::property<boost::vertex_predecessor_t, Edge>>>>;
using EdgeProperties =
    boost::property<boost::edge_capacity_t, std::int64_t,
                    boost::property<boost::edge_residual_capacity_t, std::int64_t,
                                    boost::property<boost::edge_reverse_t, Edge>>>;
using Graph = boost::adjacency_list<boost::vecS, boost::vecS, boost::directedS, VertexProperties,
                                    EdgeProperties>;

void connect(Graph& g, Vertex a, Vertex b, double forward, double backward) {
  const Edge there = add_edge(a, b, g).first;
  const Edge back = add_edge(b, a, g).first;
  put(boost::edge_capacity, g, there, std::llround(std::ldexp(forward, 30)));
  put(boost::edge_capacity, g, back, std::llround(std::ldexp(backward, 30)));
  put(boost::edge_reverse, g, there, back);
  put(boost::edge_reverse, g, back, there);
}

}  // namespace

// The source's side of the cut has label 1: cutting source -> s costs what label 0 loses.
Labels most_probable_labels(const GibbsField& f) {
  const auto pixels = static_cast<std::size_t>(f.pixels());
  Graph g(pixels + 2);
  const Vertex source = pixels, sink = pixels + 1;
  const auto pair = [&](int x, int y, int dx, int dy, double weight) {
    if (x + dx < 0 || x + dx >= f.width || y + dy >= f.height) return;
    connect(g, static_cast<Vertex>(y * f.width + x),
            static_cast<Vertex>((y + dy) * f.width + x + dx), f.beta * weight, f.beta * weight);
  };
  for (int y = 0; y < f.height; ++y) {
    for (int x = 0; x < f.width; ++x) {
      const int s = y * f.width + x;
      const double gain = f.weight_of(s, 1) - f.weight_of(s, 0);
      if (gain > 0.0) connect(g, source, static_cast<Vertex>(s), gain, 0.0);
      if (gain < 0.0) connect(g, static_cast<Vertex>(s), sink, -gain, 0.0);
      pair(x, y, 1, 0, 1.0);
      pair(x, y, 0, 1, 1.0);
      if (!f.diagonals) continue;
      pair(x, y, 1, 1, 1.0 / std::sqrt(2.0));
      pair(x, y, -1, 1, 1.0 / std::sqrt(2.0));
    }
  }
  boost::boykov_kolmogorov_max_flow(g, source, sink);
  Labels labels;
  for (std::size_t s = 0; s < pixels; ++s) {
    labels.push_back(get(boost::vertex_color, g, s) == boost::black_color);
  }
  return labels;
}

}  // namespace stillfield::exactness
