#include "server/store/ballast.h"

#include <fcntl.h>
#include <sys/stat.h>
#include <sys/statvfs.h>
#include <unistd.h>

#include <utility>

namespace bandwright {

std::uint64_t available_bytes(const std::filesystem::path& path) {
  struct statvfs disk {};
  if (statvfs(path.c_str(), &disk) != 0) return 0;
  return static_cast<std::uint64_t>(disk.f_bavail) * disk.f_frsize;
}

Ballast::Ballast(std::filesystem::path file, std::uint64_t bytes)
    : file_(std::move(file)), bytes_(bytes) {
  struct stat found {};
  held_ = stat(file_.c_str(), &found) == 0 &&
          static_cast<std::uint64_t>(found.st_blocks) * 512 >= bytes_;
}

bool Ballast::restore() {
  if (held_ || bytes_ == 0) return held_;
  if (available_bytes(file_.parent_path()) < 2 * bytes_) return false;
  const int file = ::open(file_.c_str(), O_CREAT | O_WRONLY | O_CLOEXEC, 0600);
  if (file < 0) return false;
  held_ = posix_fallocate(file, 0, static_cast<off_t>(bytes_)) == 0;
  ::close(file);
  if (!held_) unlink(file_.c_str());
  return held_;
}

bool Ballast::drop() {
  return std::exchange(held_, false) && unlink(file_.c_str()) == 0;
}

}  // namespace bandwright
