// A value that can be reached only while its mutex is held.
#pragma once

#include <mutex>
#include <utility>

namespace bandwright {

template <class T>
class Guarded {
 public:
  // The value, for as long as this lives.
  class Access {
   public:
    T* operator->() const { return &value_; }
    T& operator*() const { return value_; }
    // For waiting on a condition variable; the value must not be touched while unlocked.
    std::unique_lock<std::mutex>& lock() { return lock_; }

   private:
    friend class Guarded;
    Access(std::mutex& mutex, T& value) : lock_(mutex), value_(value) {}

    std::unique_lock<std::mutex> lock_;
    T& value_;
  };

  template <class... Args>
  explicit Guarded(Args&&... args) : value_(std::forward<Args>(args)...) {}

  Access lock() { return Access(mutex_, value_); }

 private:
  std::mutex mutex_;
  T value_;
};

}  // namespace bandwright
