#include "exactness/row_states.h"

#include <algorithm>
#include <cmath>

namespace stillfield::exactness {
namespace {

using Vector = std::vector<double>;

struct Rows {
  explicit Rows(const GibbsField& f) : field(f) {
    for_each_state(f.width, f.classes, [this](const Labels& z) { states.push_back(z); });
    for (const Labels& a : states) {
      double equal = 0.0;
      for (std::size_t x = 0; x + 1 < a.size(); ++x) equal += a[x] == a[x + 1];
      inside.push_back(equal);
      for (const Labels& b : states) between.push_back(pairs_between(a, b));
    }
  }

  double pairs_between(const Labels& a, const Labels& b) const {
    double straight = 0.0, diagonal = 0.0;
    for (std::size_t x = 0; x < a.size(); ++x) {
      straight += a[x] == b[x];
      if (x + 1 < a.size()) diagonal += (a[x] == b[x + 1]) + (a[x + 1] == b[x]);
    }
    return straight + (field.diagonals ? diagonal / std::sqrt(2.0) : 0.0);
  }

  std::size_t size() const { return states.size(); }

  // Weight of each state of row y on its own, over e^shift.
  Vector weights(int y, double& shift) const {
    Vector w;
    for (std::size_t a = 0; a < size(); ++a) {
      double sum = field.beta * inside[a];
      for (int x = 0; x < field.width; ++x) {
        sum += field.weight_of(y * field.width + x, states[a][static_cast<std::size_t>(x)]);
      }
      w.push_back(sum);
    }
    shift = *std::max_element(w.begin(), w.end());
    for (double& v : w) v = std::exp(v - shift);
    return w;
  }

  const GibbsField& field;
  std::vector<Labels> states;
  Vector inside;   // equal pairs within a row, [state]
  Vector between;  // weighted equal pairs between two rows, [upper * size + lower]
};

double normalise(Vector& v) {
  double sum = 0.0;
  for (const double x : v) sum += x;
  for (double& x : v) x /= sum;
  return std::log(sum);
}

// Weights of each row's states summed over all rows above.
struct Forward {
  explicit Forward(const Rows& rows) {
    const std::size_t n = rows.size();
    for (const double pairs : rows.between) coupling.push_back(std::exp(rows.field.beta * pairs));
    for (int y = 0; y < rows.field.height; ++y) {
      double shift = 0.0;
      own.push_back(rows.weights(y, shift));
      Vector here = own.back();
      for (std::size_t b = 0; b < n && y > 0; ++b) {
        double above = 0.0;
        for (std::size_t a = 0; a < n; ++a) above += row.back()[a] * coupling[a * n + b];
        here[b] *= above;
      }
      log_z += shift + normalise(here);
      row.push_back(here);
    }
  }

  Vector coupling;          // between two rows, as Rows::between
  std::vector<Vector> own;  // of each row alone
  std::vector<Vector> row;
  double log_z = 0.0;
};

}  // namespace

Labels draw_row_states(const GibbsField& f, const std::function<double()>& uniform) {
  const Rows rows(f);
  const Forward forward(rows);
  const std::size_t n = rows.size();
  Labels labels(static_cast<std::size_t>(f.pixels()));
  std::size_t below = n;  // state of the row below; n: none
  for (int y = f.height - 1; y >= 0; --y) {
    Vector p = forward.row[static_cast<std::size_t>(y)];
    for (std::size_t a = 0; a < n && below < n; ++a) p[a] *= forward.coupling[a * n + below];
    normalise(p);
    double left = uniform();
    std::size_t a = 0;
    while (a + 1 < n && left >= p[a]) left -= p[a++];
    std::copy(rows.states[a].begin(), rows.states[a].end(), labels.begin() + y * f.width);
    below = a;
  }
  return labels;
}

ExactSums sum_row_states(const GibbsField& f) {
  const Rows rows(f);
  const Forward from_above(rows);
  const std::vector<Vector>& own = from_above.own;
  const std::vector<Vector>& forward = from_above.row;
  const Vector& coupling = from_above.coupling;
  const std::size_t n = rows.size();
  const auto height = static_cast<std::size_t>(f.height);
  std::vector<Vector> backward(height, Vector(n, 1.0));
  ExactSums sums;
  sums.log_z = from_above.log_z;
  for (std::size_t y = height - 1; y-- > 0;) {
    for (std::size_t a = 0; a < n; ++a) {
      double below = 0.0;
      for (std::size_t b = 0; b < n; ++b)
        below += coupling[a * n + b] * own[y + 1][b] * backward[y + 1][b];
      backward[y][a] = below;
    }
    normalise(backward[y]);
  }

  sums.marginal.assign(f.log_weight.size(), 0.0);
  for (std::size_t y = 0; y < height; ++y) {
    Vector p(n);
    for (std::size_t a = 0; a < n; ++a) p[a] = forward[y][a] * backward[y][a];
    normalise(p);
    for (std::size_t a = 0; a < n; ++a) {
      sums.mean_pairs += p[a] * rows.inside[a];
      for (std::size_t x = 0; x < rows.states[a].size(); ++x) {
        const std::size_t pixel = y * rows.states[a].size() + x;
        sums.marginal[pixel * static_cast<std::size_t>(f.classes) + rows.states[a][x]] += p[a];
      }
    }
    if (y + 1 == height) break;
    double total = 0.0, pairs = 0.0;
    for (std::size_t a = 0; a < n; ++a) {
      for (std::size_t b = 0; b < n; ++b) {
        const double q = forward[y][a] * coupling[a * n + b] * own[y + 1][b] * backward[y + 1][b];
        total += q;
        pairs += q * rows.between[a * n + b];
      }
    }
    sums.mean_pairs += pairs / total;
  }
  return sums;
}

}  // namespace stillfield::exactness
