// Row-major grids of pixels: Volume owns, View looks. Rows start on 64-byte boundaries.
//
// Shape    extent (width, height, depth); a plane has depth 1
// Index    (x, y, z); row(y, z)[x]
// Offset   where the view's first pixel lies in the whole grid (see extent.h)
// Padding  elements beyond the width of a row are not part of the image and are never read out
#ifndef STILLFIELD_CORE_VOLUME_H_
#define STILLFIELD_CORE_VOLUME_H_

#include <cstddef>

#include "core/aligned_buffer.h"
#include "core/extent.h"

namespace stillfield {

template <typename T>
class View {
 public:
  View() = default;
  View(T* data, Extent extent, std::ptrdiff_t row_stride, Offset offset = {})
      : data_(data), extent_(extent), row_stride_(row_stride), offset_(offset) {}

  // A view of mutable pixels is also a view of constant ones.
  operator View<const T>() const { return {data_, extent_, row_stride_, offset_}; }

  const Extent& extent() const { return extent_; }
  const Offset& offset() const { return offset_; }
  int width() const { return extent_.width; }
  int height() const { return extent_.height; }
  int depth() const { return extent_.depth; }

  T* row(int y, int z = 0) const {
    return data_ + (std::ptrdiff_t{z} * extent_.height + y) * row_stride_;
  }
  T& at(int x, int y, int z = 0) const { return row(y, z)[x]; }

 private:
  T* data_ = nullptr;
  Extent extent_{};
  std::ptrdiff_t row_stride_ = 0;  // in elements
  Offset offset_{};
};

template <typename T>
class Volume {
 public:
  Volume() = default;
  explicit Volume(Extent extent, Offset offset = {})
      : extent_(extent),
        offset_(offset),
        row_stride_(round_up(static_cast<std::size_t>(extent.width) * sizeof(T), kRowAlignment) /
                    sizeof(T)),
        buffer_(row_stride_ * static_cast<std::size_t>(extent.height) *
                static_cast<std::size_t>(extent.depth)) {
    static_assert(kRowAlignment % sizeof(T) == 0);
  }

  const Extent& extent() const { return extent_; }
  int width() const { return extent_.width; }
  int height() const { return extent_.height; }
  int depth() const { return extent_.depth; }
  bool empty() const { return buffer_.empty(); }

  View<T> view() {
    return {buffer_.data(), extent_, static_cast<std::ptrdiff_t>(row_stride_), offset_};
  }
  View<const T> view() const {
    return {buffer_.data(), extent_, static_cast<std::ptrdiff_t>(row_stride_), offset_};
  }
  T* row(int y, int z = 0) { return view().row(y, z); }
  const T* row(int y, int z = 0) const { return view().row(y, z); }
  T& at(int x, int y, int z = 0) { return row(y, z)[x]; }
  const T& at(int x, int y, int z = 0) const { return row(y, z)[x]; }

 private:
  Extent extent_{0, 0, 1};
  Offset offset_{};
  std::size_t row_stride_ = 0;
  AlignedBuffer<T> buffer_;
};

}  // namespace stillfield

#endif  // STILLFIELD_CORE_VOLUME_H_
