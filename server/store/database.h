// One SQLite connection, set up so that a finished commit is on the disk.
//
// Exactly one connection exists: the file is locked exclusively for as long as it is open, which
// keeps other processes out and needs no shared memory. Every commit is synced (WAL, FULL).
// Checkpoints are run here, not by the library's own hook, because that hook hides their errors
// and a failed sync must be seen.
//
// Inside this folder a fault travels as SqlError; store.cpp turns it into a StoreFault.
#pragma once

#include <cstdint>
#include <filesystem>
#include <memory>
#include <optional>
#include <string>
#include <string_view>

struct sqlite3;
struct sqlite3_stmt;

namespace bandwright {

struct SqlError {
  int code = 0;  // extended result code
  std::string message;

  bool disk_full() const;
  bool busy() const;
};

// Text of any bytes, stored as such.
struct Blob {
  std::string_view bytes;
};

// The rows of one execution. The statement can run again once this is gone.
class Rows {
 public:
  explicit Rows(sqlite3_stmt* statement) : statement_(statement) {}
  ~Rows();
  Rows(const Rows&) = delete;
  Rows& operator=(const Rows&) = delete;

  bool next();  // false: no more rows
  std::int64_t integer(int column) const;
  std::optional<std::int64_t> maybe_integer(int column) const;  // nothing for NULL
  std::string text(int column) const;                           // empty for NULL

 private:
  sqlite3_stmt* statement_;
};

// A prepared statement. Parameters are ?1, ?2, ... in the order given.
class Statement {
 public:
  Statement(sqlite3* connection, std::string_view sql);

  template <class... Values>
  Rows query(const Values&... values) {
    int index = 0;
    (bind(++index, values), ...);
    return Rows(statement_.get());
  }
  // Runs to the end and returns how many rows it changed.
  template <class... Values>
  int run(const Values&... values) {
    Rows rows = query(values...);
    while (rows.next()) {
    }
    return changes();
  }

 private:
  struct Finalize {
    void operator()(sqlite3_stmt* statement) const;
  };

  void bind(int index, std::int64_t value);
  void bind(int index, std::string_view value);
  void bind(int index, const Blob& value);
  int changes() const;

  std::unique_ptr<sqlite3_stmt, Finalize> statement_;
};

// Thread safety: none; the store's mutex guards it.
class Database {
 public:
  // Opens or creates `file`, locked. `vfs` names a registered VFS; empty: the platform's.
  Database(const std::filesystem::path& file, const std::string& vfs);

  sqlite3* connection() const { return connection_.get(); }
  void execute(const std::string& sql);
  std::int64_t pragma(const std::string& name);  // the first column of its first row

  // Syncs every commit from here on. Call once the file is known to be ours.
  void make_durable();
  // The file may grow to this many bytes.
  void limit_size(std::int64_t bytes);
  // Moves the log into the file if it has grown long. Returns false if the disk is too full for
  // that now; the log stays valid and nothing is lost.
  bool checkpoint_when_due();

 private:
  struct Close {
    void operator()(sqlite3* connection) const;
  };

  std::int64_t size_limit_ = 0;
  int log_pages_ = 0;  // set by the commit hook, which needs a stable address
  std::unique_ptr<sqlite3, Close> connection_;
};

// Rolled back unless committed.
class Transaction {
 public:
  explicit Transaction(Database& database);
  ~Transaction();
  Transaction(const Transaction&) = delete;
  Transaction& operator=(const Transaction&) = delete;

  void commit();

 private:
  Database& database_;
};

}  // namespace bandwright
