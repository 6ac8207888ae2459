#include "server/store/database.h"

#include <fcntl.h>
#include <sqlite3.h>
#include <unistd.h>

namespace bandwright {

namespace {

// Log pages after which a checkpoint is worth its syncs: 4 MiB.
constexpr int kLongLog = 1000;

SqlError error_of(sqlite3* connection) {
  return SqlError{sqlite3_extended_errcode(connection), sqlite3_errmsg(connection)};
}

void require(int result, sqlite3* connection) {
  if (result != SQLITE_OK) throw error_of(connection);
}

// Creates the file readable by its owner only; SQLite gives its log the same mode. An existing
// file is not opened: closing it again would drop the locks this process may hold on it.
void create_private(const std::filesystem::path& file) {
  const int created = ::open(file.c_str(), O_CREAT | O_EXCL | O_RDWR | O_CLOEXEC, 0600);
  if (created >= 0) ::close(created);
}

}  // namespace

bool SqlError::disk_full() const {
  return (code & 0xff) == SQLITE_FULL;
}
bool SqlError::busy() const {
  return (code & 0xff) == SQLITE_BUSY || (code & 0xff) == SQLITE_LOCKED;
}

Rows::~Rows() {
  sqlite3_reset(statement_);
  sqlite3_clear_bindings(statement_);
}

bool Rows::next() {
  const int result = sqlite3_step(statement_);
  if (result == SQLITE_ROW) return true;
  if (result == SQLITE_DONE) return false;
  throw error_of(sqlite3_db_handle(statement_));
}

std::int64_t Rows::integer(int column) const {
  return sqlite3_column_int64(statement_, column);
}

std::optional<std::int64_t> Rows::maybe_integer(int column) const {
  if (sqlite3_column_type(statement_, column) == SQLITE_NULL) return std::nullopt;
  return integer(column);
}

std::string Rows::text(int column) const {
  const void* bytes = sqlite3_column_blob(statement_, column);
  const int size = sqlite3_column_bytes(statement_, column);
  return bytes ? std::string(static_cast<const char*>(bytes), static_cast<std::size_t>(size))
               : std::string();
}

Statement::Statement(sqlite3* connection, std::string_view sql) {
  sqlite3_stmt* prepared = nullptr;
  require(sqlite3_prepare_v3(connection, sql.data(), static_cast<int>(sql.size()),
                             SQLITE_PREPARE_PERSISTENT, &prepared, nullptr),
          connection);
  statement_.reset(prepared);
}

void Statement::Finalize::operator()(sqlite3_stmt* statement) const {
  sqlite3_finalize(statement);
}

void Statement::bind(int index, std::int64_t value) {
  require(sqlite3_bind_int64(statement_.get(), index, value), sqlite3_db_handle(statement_.get()));
}

void Statement::bind(int index, std::string_view value) {
  // A null pointer would bind NULL; an empty text is not that.
  const char* bytes = value.data() ? value.data() : "";
  require(sqlite3_bind_text64(statement_.get(), index, bytes, value.size(), SQLITE_TRANSIENT,
                              SQLITE_UTF8),
          sqlite3_db_handle(statement_.get()));
}

void Statement::bind(int index, const Blob& value) {
  const char* bytes = value.bytes.data() ? value.bytes.data() : "";
  require(sqlite3_bind_blob64(statement_.get(), index, bytes, value.bytes.size(), SQLITE_TRANSIENT),
          sqlite3_db_handle(statement_.get()));
}

int Statement::changes() const {
  return sqlite3_changes(sqlite3_db_handle(statement_.get()));
}

Database::Database(const std::filesystem::path& file, const std::string& vfs) {
  create_private(file);
  sqlite3* opened = nullptr;
  const int result = sqlite3_open_v2(
      file.c_str(), &opened, SQLITE_OPEN_READWRITE | SQLITE_OPEN_CREATE | SQLITE_OPEN_NOMUTEX,
      vfs.empty() ? nullptr : vfs.c_str());
  connection_.reset(opened);
  require(result, opened);
  require(sqlite3_extended_result_codes(opened, 1), opened);
  require(sqlite3_db_config(opened, SQLITE_DBCONFIG_DEFENSIVE, 1, nullptr), opened);
  require(sqlite3_db_config(opened, SQLITE_DBCONFIG_TRUSTED_SCHEMA, 0, nullptr), opened);
  execute("PRAGMA locking_mode=EXCLUSIVE; PRAGMA temp_store=MEMORY; PRAGMA cell_size_check=ON;");
  // Blanking every page of what is deleted would need as much room in the log as it frees.
  execute("PRAGMA secure_delete=FAST;");
  // The first write transaction takes the lock that is then kept.
  execute("BEGIN EXCLUSIVE; COMMIT;");
}

void Database::Close::operator()(sqlite3* connection) const {
  sqlite3_close_v2(connection);
}

void Database::execute(const std::string& sql) {
  require(sqlite3_exec(connection(), sql.c_str(), nullptr, nullptr, nullptr), connection());
}

std::int64_t Database::pragma(const std::string& name) {
  Statement statement(connection(), "PRAGMA " + name);
  Rows rows = statement.query();
  return rows.next() ? rows.integer(0) : 0;
}

void Database::make_durable() {
  {
    Statement mode(connection(), "PRAGMA journal_mode=WAL");
    Rows rows = mode.query();
    if (!rows.next() || rows.text(0) != "wal") {
      throw SqlError{SQLITE_CANTOPEN, "the file system does not take a write-ahead log"};
    }
  }
  execute("PRAGMA synchronous=FULL; PRAGMA journal_size_limit=67108864;");
  // Setting a hook of our own also switches the library's automatic checkpoint off.
  sqlite3_wal_hook(
      connection(),
      [](void* pages, sqlite3*, const char*, int in_log) {
        *static_cast<int*>(pages) = in_log;
        return SQLITE_OK;
      },
      &log_pages_);
}

void Database::limit_size(std::int64_t bytes) {
  if (bytes == size_limit_) return;
  pragma("max_page_count=" + std::to_string(bytes / pragma("page_size")));
  size_limit_ = bytes;
}

bool Database::checkpoint_when_due() {
  if (log_pages_ < kLongLog) return true;
  const int result =
      sqlite3_wal_checkpoint_v2(connection(), nullptr, SQLITE_CHECKPOINT_PASSIVE, nullptr, nullptr);
  if (result == SQLITE_OK) {
    log_pages_ = 0;
    return true;
  }
  const SqlError error = error_of(connection());
  if (!error.disk_full()) throw error;
  return false;
}

Transaction::Transaction(Database& database) : database_(database) {
  database_.execute("BEGIN IMMEDIATE");
}

Transaction::~Transaction() {
  // Some faults have rolled the transaction back already.
  if (sqlite3_get_autocommit(database_.connection())) return;
  sqlite3_exec(database_.connection(), "ROLLBACK", nullptr, nullptr, nullptr);
}

void Transaction::commit() {
  database_.execute("COMMIT");
}

}  // namespace bandwright
