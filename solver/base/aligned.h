// An array of doubles on a 64-byte boundary, as wide vector loads like it.
#pragma once

#include <cstddef>
#include <cstdlib>
#include <memory>
#include <new>

namespace bandwright {

class AlignedArray {
 public:
  AlignedArray() = default;
  // `size` zeros.
  explicit AlignedArray(std::size_t size) : size_(size) {
    const std::size_t bytes = (size * sizeof(double) + 63) / 64 * 64;
    data_.reset(static_cast<double*>(std::aligned_alloc(64, bytes > 0 ? bytes : 64)));
    if (!data_) throw std::bad_alloc();
    for (std::size_t i = 0; i < size; ++i) data_[i] = 0;
  }
  double* data() { return data_.get(); }
  const double* data() const { return data_.get(); }
  std::size_t size() const { return size_; }
  double& operator[](std::size_t i) { return data_[i]; }
  double operator[](std::size_t i) const { return data_[i]; }

 private:
  struct Free {
    void operator()(double* p) const { std::free(p); }
  };
  std::unique_ptr<double[], Free> data_;
  std::size_t size_ = 0;
};

}  // namespace bandwright
