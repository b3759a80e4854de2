#include "measure/box_places.h"

#include <algorithm>

namespace stillfield {

namespace {
constexpr int kMargins = 2;  // one pixel on either side
}

BoxPlaces::BoxPlaces(Extent frame, View<const std::uint8_t> usable, int width, int height)
    : frame_(frame), whole_frame_(usable.extent().sites() == 0) {
  if (whole_frame_) {
    area_ = frame.sites();
    return;
  }
  widest_ = std::min(width + kMargins, frame.width);
  highest_ = std::min(height + kMargins, frame.height);
  table_.resize((static_cast<std::size_t>(widest_) + 1) * (static_cast<std::size_t>(highest_) + 1));
  std::vector<int> heights(static_cast<std::size_t>(frame.width));
  for (int y = 0; y < frame.height; ++y) {
    for (int x = 0; x < frame.width; ++x) {
      int& h = heights[static_cast<std::size_t>(x)];
      const bool inside = usable.at(x, y) != 0;
      area_ += inside;
      h = inside ? std::min(h + 1, highest_) : 0;
    }
    count_row(heights);
  }
  // An interval of some height and length holds boxes that are lower and narrower.
  for (int h = highest_; h >= 1; --h) {
    for (int w = widest_; w >= 0; --w) {
      if (h < highest_) {
        cell(w, h).count += cell(w, h + 1).count;
        cell(w, h).length += cell(w, h + 1).length;
      }
    }
  }
  for (int h = 1; h <= highest_; ++h) {
    for (int w = widest_ - 1; w >= 0; --w) {
      cell(w, h).count += cell(w + 1, h).count;
      cell(w, h).length += cell(w + 1, h).length;
    }
  }
}

// Intervals of columns that are all at least so high, one a range of heights.
void BoxPlaces::count_row(const std::vector<int>& heights) {
  struct Open {
    int start, height;
  };
  std::vector<Open> open{{0, 0}};
  const auto close_above = [&](int x, int height) {
    int start = x;
    while (open.back().height > height) {
      const Open top = open.back();
      open.pop_back();
      const int floor = std::max(height, open.back().height);
      const int length = x - top.start;
      const int w = std::min(length, widest_);
      cell(w, top.height).count += 1;
      cell(w, top.height).length += length + 1;
      cell(w, floor).count -= 1;
      cell(w, floor).length -= length + 1;
      start = top.start;
    }
    if (open.back().height < height) open.push_back({start, height});
  };
  const int width = static_cast<int>(heights.size());
  for (int x = 0; x < width; ++x) close_above(x, heights[static_cast<std::size_t>(x)]);
  close_above(width, 0);
}

std::int64_t BoxPlaces::places(int width, int height) const {
  const int w = width + kMargins, h = height + kMargins;
  if (whole_frame_) {
    return std::max<std::int64_t>(frame_.width - w + 1, 0) *
           std::max<std::int64_t>(frame_.height - h + 1, 0);
  }
  if (w > widest_ || h > highest_) return 0;
  const Intervals& wider =
      table_[static_cast<std::size_t>(h) * (static_cast<std::size_t>(widest_) + 1) +
             static_cast<std::size_t>(w)];
  return wider.length - w * wider.count;
}

}  // namespace stillfield
