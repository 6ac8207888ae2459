// One thing wrong with a request, and the list of all of them.
#pragma once

#include <string>
#include <string_view>
#include <vector>

namespace bandwright {

struct Fault {
  std::string pointer;               // JSON Pointer as a URI fragment, "#/goals/0/to_hz"
  std::string code;                  // for programs: "unknown_member", "out_of_range", ...
  std::string detail;                // for people: what was found, what is allowed
  std::vector<std::string> allowed;  // the allowed words or ranges, where they are few
  std::string suggestion;            // what was probably meant, where one is near
};

// Collects faults up to limits::kFaults; one more entry then says that there are others.
class Faults {
 public:
  void add(Fault fault);
  bool empty() const { return list_.empty(); }
  const std::vector<Fault>& list() const { return list_; }

 private:
  std::vector<Fault> list_;
};

// `base` with one more reference token, escaped as RFC 6901 sections 3 and 6 ask.
std::string pointer_child(std::string_view base, std::string_view token);
std::string pointer_child(std::string_view base, std::size_t index);

}  // namespace bandwright
