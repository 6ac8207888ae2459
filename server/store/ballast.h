// Room kept aside for the day the disk is full.
//
// A write-ahead log needs space even to delete. A file of reserved blocks is given up at that
// moment, so that cancelling, finishing and purging can still be recorded.
#pragma once

#include <cstdint>
#include <filesystem>

namespace bandwright {

// Bytes an unprivileged process may still write where `path` lives; 0 if that cannot be told.
std::uint64_t available_bytes(const std::filesystem::path& path);

// Thread safety: none; the store's mutex guards it.
class Ballast {
 public:
  Ballast(std::filesystem::path file, std::uint64_t bytes);

  // Reserves the blocks unless they are already, and unless that would leave less than as much
  // again free. Returns whether they are reserved now.
  bool restore();
  // Gives the blocks back to the disk; false if there were none.
  bool drop();

 private:
  std::filesystem::path file_;
  std::uint64_t bytes_;
  bool held_ = false;
};

}  // namespace bandwright
