#include "exactness/torus.h"

#include <algorithm>
#include <cstring>

#include "random/stream.h"
#include "sampler/sweep.h"

namespace stillfield::exactness {

Torus::Torus(int side, int classes, double beta, std::uint64_t seed, bool ordered_start)
    : side_(side),
      classes_(classes),
      beta_(beta),
      key_(chain_key(seed, 0)),
      colouring_({side, side}, make_neighbourhood(Connectivity::kFour)),
      labels_(guarded_labels(colouring_)),
      weights_(colouring_.plane_elements() * static_cast<std::size_t>(classes == 2 ? 1 : classes)),
      image_({side, side}) {
  std::fill(weights_.begin(), weights_.end(), 1.0f);
  RandomStream random(key_, Purpose::kStart);
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      image_.at(x, y) = static_cast<std::uint8_t>(ordered_start ? 0.0 : random.uniform() * classes);
    }
  }
  scatter_labels(colouring_, image_.view(), labels_);
}

// Around the rows of one colour: column -1 = last column, column n = first, row -1 = last row,
// row `side` = first row.
void Torus::close_seam(int colour) {
  const int columns = side_ / 2;
  const int q = colouring_.words();
  const auto row = [&](int y) { return labels_.data() + colouring_.label_row(colour, 0, y); };
  for (int y = 0; y < side_; ++y) {
    std::uint8_t* first = row(y);
    std::uint8_t* last = first + colouring_.byte_of(columns - 1);
    first[-4] = *last;  // neighbours within a row are one word apart
    last[4] = *first;
  }
  const std::size_t bytes = static_cast<std::size_t>(4 * q + 8);
  std::memcpy(row(-1) - 4, row(side_ - 1) - 4, bytes);
  std::memcpy(row(side_) - 4, row(0) - 4, bytes);
}

void Torus::sweep(int sweeps) {
  for (int s = 0; s < sweeps; ++s) {
    for (int colour = 0; colour < 2; ++colour) {
      close_seam(1 - colour);
      LabelBand band = colouring_.band(colour, 0);
      fill_ring_tables(colouring_.neighbourhood(), beta_, classes_ == 2, band);
      band.classes = classes_;
      band.labels = labels_.data() + colouring_.label_row(colour, 0, 0);
      band.weights = weights_.data() + colouring_.plane_row(colour, 0, 0);
      band.random.key = key_;
      band.random.sweep = sweeps_done_;
      band.random.word3 =
          counter_word3(Purpose::kSimulation, static_cast<std::uint32_t>(colour), 0);
      if (classes_ == 2) {
        two_label_rows(band);
      } else {
        label_rows(band);
      }
    }
    ++sweeps_done_;
  }
}

double Torus::equal_fraction() {
  gather_labels(colouring_, labels_, image_.view());
  int equal = 0;
  for (int y = 0; y < side_; ++y) {
    const std::uint8_t* row = image_.row(y);
    const std::uint8_t* below = image_.row((y + 1) % side_);
    for (int x = 0; x + 1 < side_; ++x) equal += row[x] == row[x + 1];
    equal += row[side_ - 1] == row[0];
    for (int x = 0; x < side_; ++x) equal += row[x] == below[x];
  }
  return equal / (2.0 * side_ * side_);
}

}  // namespace stillfield::exactness
