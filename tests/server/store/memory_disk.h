// A disk in memory that can lose power, fill up and fail to sync, for SQLite to write on.
//
// What is written is durable once it is synced. When the power goes, every 512-byte sector not
// synced since it was written is either the old or the new one, by chance; so is the length of the
// file. This is harsher than killing the process, which leaves the system's cache intact.
//
// Thread safety: none.
#pragma once

#include <sqlite3.h>

#include <algorithm>
#include <cstdint>
#include <cstring>
#include <map>
#include <memory>
#include <random>
#include <string>

namespace bandwright {

class MemoryDisk {
 public:
  explicit MemoryDisk(std::string name);
  ~MemoryDisk() { sqlite3_vfs_unregister(&vfs_); }
  MemoryDisk(const MemoryDisk&) = delete;
  MemoryDisk& operator=(const MemoryDisk&) = delete;

  const std::string& name() const { return name_; }

  // After this many more writes and syncs the power is gone and everything fails.
  void cut_power_after(int operations) { operations_left_ = operations; }
  bool powered() const { return operations_left_ != 0; }
  // Settles what survived and switches the power on again. No file may be open.
  void restore_power(std::mt19937_64& random);

  bool syncs_are_lies = false;  // answered, not done
  bool syncs_fail = false;
  // Lets this many more syncs succeed; those after it fail.
  void fail_sync_after(int syncs) { syncs_left_ = syncs; }
  std::int64_t capacity = INT64_MAX;

 private:
  static constexpr std::size_t kSector = 512;

  struct Content {
    std::string now;
    std::string durable;
  };
  struct File {
    sqlite3_file base;
    MemoryDisk* disk;
    Content* content;
  };

  bool operate() {
    if (operations_left_ > 0) --operations_left_;
    return powered();
  }
  std::int64_t used() const {
    std::int64_t sum = 0;
    for (const auto& [path, content] : files_)
      sum += static_cast<std::int64_t>(content->now.size());
    return sum;
  }
  int write(Content& content, const void* bytes, std::size_t size, std::size_t offset);
  int sync(Content& content);

  static File& file(sqlite3_file* f) { return *reinterpret_cast<File*>(f); }
  static MemoryDisk& disk(sqlite3_vfs* vfs) { return *static_cast<MemoryDisk*>(vfs->pAppData); }
  static const sqlite3_io_methods& methods();

  std::string name_;
  sqlite3_vfs vfs_{};
  std::map<std::string, std::unique_ptr<Content>> files_;
  int syncs_left_ = -1;       // negative: none is going to fail
  int operations_left_ = -1;  // negative: no cut is coming
};

inline MemoryDisk::MemoryDisk(std::string name) : name_(std::move(name)) {
  vfs_.iVersion = 1;
  vfs_.szOsFile = sizeof(File);
  vfs_.mxPathname = 512;
  vfs_.zName = name_.c_str();
  vfs_.pAppData = this;
  vfs_.xOpen = [](sqlite3_vfs* vfs, const char* path, sqlite3_file* f, int flags, int* out) {
    f->pMethods = nullptr;
    if (!disk(vfs).powered()) return SQLITE_CANTOPEN;
    auto& content = disk(vfs).files_[path ? path : "temporary"];
    if (!content) content = std::make_unique<Content>();
    file(f).disk = &disk(vfs);
    file(f).content = content.get();
    f->pMethods = &methods();
    if (out) *out = flags;
    return SQLITE_OK;
  };
  vfs_.xDelete = [](sqlite3_vfs* vfs, const char* path, int) {
    if (!disk(vfs).operate()) return SQLITE_IOERR_DELETE;
    disk(vfs).files_.erase(path);
    return SQLITE_OK;
  };
  vfs_.xAccess = [](sqlite3_vfs* vfs, const char* path, int, int* found) {
    *found = disk(vfs).files_.count(path) != 0;
    return SQLITE_OK;
  };
  vfs_.xFullPathname = [](sqlite3_vfs*, const char* path, int size, char* out) {
    sqlite3_snprintf(size, out, "%s", path);
    return SQLITE_OK;
  };
  vfs_.xRandomness = [](sqlite3_vfs*, int size, char* out) {
    std::memset(out, 0x5a, static_cast<std::size_t>(size));
    return size;
  };
  vfs_.xSleep = [](sqlite3_vfs*, int us) { return us; };
  vfs_.xCurrentTime = [](sqlite3_vfs*, double* days) {
    *days = 2460000.5;
    return SQLITE_OK;
  };
  vfs_.xGetLastError = [](sqlite3_vfs*, int, char*) { return 0; };
  sqlite3_vfs_register(&vfs_, 0);
}

inline int MemoryDisk::write(Content& content, const void* bytes, std::size_t size,
                             std::size_t offset) {
  if (!operate()) return SQLITE_IOERR_WRITE;
  const std::size_t end = offset + size;
  if (end > content.now.size()) {
    const auto growth = static_cast<std::int64_t>(end - content.now.size());
    if (used() > capacity - growth) return SQLITE_FULL;
    content.now.resize(end);
  }
  std::memcpy(content.now.data() + offset, bytes, size);
  return SQLITE_OK;
}

inline int MemoryDisk::sync(Content& content) {
  if (syncs_left_ > 0 && --syncs_left_ == 0) {
    syncs_fail = true;
    syncs_left_ = -1;
  } else if (!operate() || syncs_fail) {
    return SQLITE_IOERR_FSYNC;
  }
  if (!syncs_are_lies) content.durable = content.now;
  return SQLITE_OK;
}

inline void MemoryDisk::restore_power(std::mt19937_64& random) {
  auto chance = [&] { return (random() & 1) != 0; };
  for (auto& [path, content] : files_) {
    std::string& old = content->durable;
    std::string survived = content->now;
    if (survived.size() != old.size() && chance()) survived.resize(old.size());
    for (std::size_t at = 0; at < std::min(old.size(), survived.size()); at += kSector) {
      const std::size_t size = std::min({kSector, old.size() - at, survived.size() - at});
      if (chance()) survived.replace(at, size, old, at, size);
    }
    // Beyond the old end a sector that was not written through reads as zeros.
    const std::size_t beyond = (old.size() + kSector - 1) / kSector * kSector;
    for (std::size_t at = beyond; at < survived.size(); at += kSector) {
      const std::size_t size = std::min(kSector, survived.size() - at);
      if (chance()) survived.replace(at, size, size, '\0');
    }
    content->now = content->durable = survived;
  }
  operations_left_ = -1;
}

inline const sqlite3_io_methods& MemoryDisk::methods() {
  static const sqlite3_io_methods table = [] {
    sqlite3_io_methods m{};
    m.iVersion = 1;
    m.xClose = [](sqlite3_file*) { return SQLITE_OK; };
    m.xRead = [](sqlite3_file* f, void* out, int size, sqlite3_int64 offset) {
      if (!file(f).disk->powered()) return SQLITE_IOERR_READ;
      const std::string& bytes = file(f).content->now;
      const auto from = std::min(static_cast<std::size_t>(offset), bytes.size());
      const auto had = std::min(static_cast<std::size_t>(size), bytes.size() - from);
      std::memset(out, 0, static_cast<std::size_t>(size));
      std::memcpy(out, bytes.data() + from, had);
      return had == static_cast<std::size_t>(size) ? SQLITE_OK : SQLITE_IOERR_SHORT_READ;
    };
    m.xWrite = [](sqlite3_file* f, const void* bytes, int size, sqlite3_int64 offset) {
      return file(f).disk->write(*file(f).content, bytes, static_cast<std::size_t>(size),
                                 static_cast<std::size_t>(offset));
    };
    m.xTruncate = [](sqlite3_file* f, sqlite3_int64 size) {
      if (!file(f).disk->operate()) return SQLITE_IOERR_TRUNCATE;
      file(f).content->now.resize(static_cast<std::size_t>(size));
      return SQLITE_OK;
    };
    m.xSync = [](sqlite3_file* f, int) { return file(f).disk->sync(*file(f).content); };
    m.xFileSize = [](sqlite3_file* f, sqlite3_int64* size) {
      *size = static_cast<sqlite3_int64>(file(f).content->now.size());
      return SQLITE_OK;
    };
    m.xLock = [](sqlite3_file*, int) { return SQLITE_OK; };
    m.xUnlock = [](sqlite3_file*, int) { return SQLITE_OK; };
    m.xCheckReservedLock = [](sqlite3_file*, int* held) {
      *held = 0;
      return SQLITE_OK;
    };
    m.xFileControl = [](sqlite3_file*, int, void*) { return SQLITE_NOTFOUND; };
    m.xSectorSize = [](sqlite3_file*) { return 4096; };
    m.xDeviceCharacteristics = [](sqlite3_file*) { return SQLITE_IOCAP_POWERSAFE_OVERWRITE; };
    return m;
  }();
  return table;
}

}  // namespace bandwright
