// Owning, zero-initialised, 64-byte aligned array of trivially copyable elements.
#ifndef STILLFIELD_CORE_ALIGNED_BUFFER_H_
#define STILLFIELD_CORE_ALIGNED_BUFFER_H_

#include <cstddef>
#include <cstring>
#include <memory>
#include <new>
#include <type_traits>

namespace stillfield {

inline constexpr std::size_t kRowAlignment = 64;

// Rounds n up to a multiple of `step` (step > 0).
constexpr std::size_t round_up(std::size_t n, std::size_t step) {
  return (n + step - 1) / step * step;
}

template <typename T>
class AlignedBuffer {
  static_assert(std::is_trivially_copyable_v<T>);

 public:
  AlignedBuffer() = default;
  explicit AlignedBuffer(std::size_t size) : size_(size) {
    if (size == 0) return;
    const std::size_t bytes = round_up(size * sizeof(T), kRowAlignment);
    data_.reset(static_cast<T*>(::operator new (bytes, std::align_val_t{kRowAlignment})));
    std::memset(static_cast<void*>(data_.get()), 0, bytes);
  }

  T* data() { return data_.get(); }
  const T* data() const { return data_.get(); }
  std::size_t size() const { return size_; }
  bool empty() const { return size_ == 0; }
  T& operator[](std::size_t i) { return data_.get()[i]; }
  const T& operator[](std::size_t i) const { return data_.get()[i]; }
  T* begin() { return data(); }
  T* end() { return data() + size_; }
  const T* begin() const { return data(); }
  const T* end() const { return data() + size_; }

 private:
  struct Free {
    void operator()(T* p) const { ::operator delete (p, std::align_val_t{kRowAlignment}); }
  };
  std::unique_ptr<T, Free> data_;
  std::size_t size_ = 0;
};

}  // namespace stillfield

#endif  // STILLFIELD_CORE_ALIGNED_BUFFER_H_
