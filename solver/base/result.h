// A value, or the reasons why there is none.
//
// The standard's expected type comes with C++23; this is the small part of it the project needs.
#pragma once

#include <optional>
#include <utility>
#include <variant>

namespace bandwright {

template <class T, class E>
class Result {
 public:
  Result(T value) : held_(std::in_place_index<0>, std::move(value)) {}
  Result(E error) : held_(std::in_place_index<1>, std::move(error)) {}

  bool ok() const { return held_.index() == 0; }
  explicit operator bool() const { return ok(); }

  T& value() { return std::get<0>(held_); }
  const T& value() const { return std::get<0>(held_); }
  T& operator*() { return value(); }
  const T& operator*() const { return value(); }
  T* operator->() { return &value(); }
  const T* operator->() const { return &value(); }

  const E& error() const { return std::get<1>(held_); }

 private:
  std::variant<T, E> held_;
};

}  // namespace bandwright
