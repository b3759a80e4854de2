#include "sampler/colouring.h"

#include <algorithm>
#include <cassert>
#include <cstring>

#include "core/error.h"

namespace stillfield {
namespace {

constexpr std::ptrdiff_t kRowMargin = 64;  // bytes before word 0 and after word Q - 1

}  // namespace

bool Colouring::by_blocks() const {
  return neighbourhood_.connectivity == Connectivity::kEight ||
         neighbourhood_.connectivity == Connectivity::kTwentySix;
}

Colouring::Colouring(Extent extent, const Neighbourhood& neighbourhood, Offset offset)
    : extent_(extent), offset_(offset), neighbourhood_(neighbourhood) {
  const bool flat = neighbourhood.connectivity == Connectivity::kFour ||
                    neighbourhood.connectivity == Connectivity::kEight;
  if (flat && extent.depth != 1) {
    throw Error(ErrorKind::kUsage, "4 and 8 neighbours are for planes; a volume needs 6 or 26");
  }
  assert(offset.x % 4 == 0 && offset.y % 4 == 0 && offset.z % 4 == 0);
  const bool blocks_in_z = neighbourhood.connectivity == Connectivity::kTwentySix;
  colours_ = !by_blocks() ? 2 : blocks_in_z ? 8 : 4;
  const auto columns = static_cast<std::size_t>((extent.width + 1) / 2);
  words_ = static_cast<int>(round_up((columns + 3) / 4, kRowQuantum));
  max_rows_ = by_blocks() ? (extent.height + 1) / 2 : extent.height;
  max_slices_ = blocks_in_z ? (extent.depth + 1) / 2 : extent.depth;
  guard_slices_ = flat ? 0 : 1;
  label_stride_ = std::ptrdiff_t{4} * words_ + 2 * kRowMargin;
  // Rows a multiple of 4096 bytes apart would compete for the same cache lines.
  if (label_stride_ % 4096 == 0) label_stride_ += kRowMargin;
  const auto rows = static_cast<std::size_t>(colours_) * (max_slices_ + 2 * guard_slices_) *
                    static_cast<std::size_t>(max_rows_ + 2);
  label_bytes_ = rows * static_cast<std::size_t>(label_stride_);
  plane_elements_ = static_cast<std::size_t>(colours_) * max_slices_ * max_rows_ * 4 * words_;
}

int Colouring::slices(int colour) const {
  if (colours_ != 8) return extent_.depth;
  return (extent_.depth + 1 - (colour >> 2 & 1)) / 2;
}

int Colouring::rows(int colour) const {
  if (!by_blocks()) return extent_.height;
  return (extent_.height + 1 - (colour >> 1 & 1)) / 2;
}

int Colouring::first_x(int colour, int slice, int row) const {
  return by_blocks() ? colour & 1 : (row + slice + colour) & 1;
}

int Colouring::sites(int colour, int slice, int row) const {
  return (extent_.width + 1 - first_x(colour, slice, row)) / 2;
}

int Colouring::y_of(int colour, int row) const {
  return by_blocks() ? 2 * row + (colour >> 1 & 1) : row;
}

int Colouring::z_of(int colour, int slice) const {
  return colours_ == 8 ? 2 * slice + (colour >> 2 & 1) : slice;
}

std::uint32_t Colouring::random_slice(int slice) const {
  const std::int64_t first = colours_ == 8 ? offset_.z / 2 : offset_.z;
  return static_cast<std::uint32_t>(first + slice);
}

Site Colouring::site(int x, int y, int z) const {
  if (!by_blocks()) return {(x + y + z) & 1, z, y, x >> 1};
  const int colour = (x & 1) | (y & 1) << 1;
  if (colours_ == 4) return {colour, z, y >> 1, x >> 1};
  return {colour | (z & 1) << 2, z >> 1, y >> 1, x >> 1};
}

std::size_t Colouring::label_row(int colour, int slice, int row) const {
  const std::size_t slices = static_cast<std::size_t>(max_slices_ + 2 * guard_slices_);
  const std::size_t at = (static_cast<std::size_t>(colour) * slices +
                          static_cast<std::size_t>(slice + guard_slices_)) *
                             static_cast<std::size_t>(max_rows_ + 2) +
                         static_cast<std::size_t>(row + 1);
  return at * static_cast<std::size_t>(label_stride_) + kRowMargin;
}

std::size_t Colouring::plane_row(int colour, int slice, int row) const {
  return ((static_cast<std::size_t>(colour) * max_slices_ + static_cast<std::size_t>(slice)) *
              max_rows_ +
          static_cast<std::size_t>(row)) *
         static_cast<std::size_t>(plane_stride());
}

LabelBand Colouring::band(int colour, int slice) const {
  LabelBand b;
  b.words = words_;
  b.rows = rows(colour);
  b.sites = {sites(colour, slice, 0), sites(colour, slice, 1)};
  b.label_stride = label_stride_;
  b.weight_stride = plane_stride();
  b.weight_plane = static_cast<std::ptrdiff_t>(plane_elements_);
  b.count_stride = plane_stride();
  b.count_plane = static_cast<std::ptrdiff_t>(plane_elements_);
  b.random.first_column = static_cast<std::uint32_t>(offset_.x / 2);
  b.random.first_row = static_cast<std::uint32_t>(by_blocks() ? offset_.y / 2 : offset_.y);
  b.ring_count = static_cast<int>(neighbourhood_.rings.size());

  // Displacements become byte offsets; which ones depends only on the parities of the site.
  for (std::size_t parity = 0; parity < 2; ++parity) {
    const int row = static_cast<int>(parity);
    const int x = first_x(colour, slice, row) + 2;  // + 2: keeps neighbours at x >= 0
    const int y = y_of(colour, row) + 4;
    const int z = z_of(colour, slice) + 4;
    const Site here = site(x, y, z);
    const auto place = [this](const Site& s) {
      return static_cast<std::ptrdiff_t>(label_row(s.colour, s.slice, s.row)) + 4 * s.column;
    };
    for (std::size_t r = 0; r < neighbourhood_.rings.size(); ++r) {
      const auto& neighbours = neighbourhood_.rings[r].neighbours;
      b.rings[r].neighbours = static_cast<int>(neighbours.size());
      for (std::size_t i = 0; i < neighbours.size(); ++i) {
        const Displacement& d = neighbours[i];
        b.rings[r].offset[parity][i] = place(site(x + d.x, y + d.y, z + d.z)) - place(here);
      }
    }
  }
  return b;
}

AlignedBuffer<std::uint8_t> guarded_labels(const Colouring& colouring) {
  AlignedBuffer<std::uint8_t> labels(colouring.label_bytes());
  std::memset(labels.data(), kGuardLabel, labels.size());
  return labels;
}

void scatter_labels(const Colouring& c, View<const std::uint8_t> image,
                    AlignedBuffer<std::uint8_t>& labels) {
  const int q = c.words();
  for (int colour = 0; colour < c.colours(); ++colour) {
    for (int slice = 0; slice < c.slices(colour); ++slice) {
      for (int row = 0; row < c.rows(colour); ++row) {
        std::uint8_t* out = labels.data() + c.label_row(colour, slice, row);
        const std::uint8_t* in = image.row(c.y_of(colour, row), c.z_of(colour, slice));
        const int first = c.first_x(colour, slice, row);
        for (int j = 0; j < c.sites(colour, slice, row); ++j) out[c.byte_of(j)] = in[first + 2 * j];
        // Guard words: each quarter goes on with its neighbour quarter's first or last site.
        for (int b = 0; b < 3; ++b) {
          out[4 * q + b] = out[b + 1];
          out[-4 + b + 1] = out[4 * (q - 1) + b];
        }
      }
    }
  }
}

void gather_labels(const Colouring& c, const AlignedBuffer<std::uint8_t>& labels,
                   View<std::uint8_t> image) {
  for (int colour = 0; colour < c.colours(); ++colour) {
    for (int slice = 0; slice < c.slices(colour); ++slice) {
      for (int row = 0; row < c.rows(colour); ++row) {
        const std::uint8_t* in = labels.data() + c.label_row(colour, slice, row);
        std::uint8_t* out = image.row(c.y_of(colour, row), c.z_of(colour, slice));
        const int first = c.first_x(colour, slice, row);
        for (int j = 0; j < c.sites(colour, slice, row); ++j) out[first + 2 * j] = in[c.byte_of(j)];
      }
    }
  }
}

}  // namespace stillfield
