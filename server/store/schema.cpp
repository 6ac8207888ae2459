#include "server/store/schema.h"

#include <array>
#include <string>

namespace bandwright {

namespace {

// "bndw", so that a file of something else is told apart.
constexpr std::int64_t kApplicationId = 0x626e6477;

// Step n leads from version n to n + 1. Steps are never edited once released, only added.
//
// `number` is the order of creation and never used twice. Texts live in tables of their own: a
// change of state then rewrites a short row and not a megabyte.
constexpr std::array<const char*, 1> kSteps = {R"sql(
CREATE TABLE jobs (
  number         INTEGER PRIMARY KEY AUTOINCREMENT,
  id             TEXT NOT NULL UNIQUE,
  team           TEXT NOT NULL,
  name           TEXT NOT NULL,
  state          TEXT NOT NULL,
  version        INTEGER NOT NULL DEFAULT 1,
  request_digest TEXT NOT NULL,
  seed           INTEGER NOT NULL,
  failure_code   TEXT,
  failure_detail TEXT,
  created_at     INTEGER NOT NULL,
  started_at     INTEGER,
  finished_at    INTEGER,
  expires_at     INTEGER,
  attempt        INTEGER NOT NULL DEFAULT 0,
  stop_requested INTEGER NOT NULL DEFAULT 0,
  lease          TEXT
) STRICT;
CREATE TABLE requests (number INTEGER PRIMARY KEY, body BLOB NOT NULL) STRICT;
CREATE TABLE results  (number INTEGER PRIMARY KEY, body BLOB NOT NULL) STRICT;
CREATE INDEX jobs_of_team   ON jobs (team, number);
CREATE INDEX jobs_in_state  ON jobs (team, state, number);
CREATE INDEX jobs_queued    ON jobs (team, number) WHERE state = 'queued';
CREATE INDEX jobs_running   ON jobs (team) WHERE state = 'running';
CREATE INDEX jobs_expiring  ON jobs (expires_at) WHERE expires_at IS NOT NULL;
)sql"};

}  // namespace

SchemaCheck check_schema(Database& database) {
  const std::int64_t version = database.pragma("user_version");
  const std::int64_t application = database.pragma("application_id");
  if (version == 0 && application == 0) {
    Statement tables(database.connection(), "SELECT count(*) FROM sqlite_schema");
    Rows rows = tables.query();
    rows.next();
    return rows.integer(0) == 0 ? SchemaCheck::usable : SchemaCheck::foreign;
  }
  if (application != kApplicationId) return SchemaCheck::foreign;
  return version <= static_cast<std::int64_t>(kSteps.size()) ? SchemaCheck::usable
                                                             : SchemaCheck::newer;
}

void migrate(Database& database) {
  Transaction transaction(database);
  const std::int64_t version = database.pragma("user_version");
  const std::int64_t latest = kSteps.size();
  if (version == latest) return;
  for (std::int64_t step = version; step < latest; ++step) {
    database.execute(kSteps[static_cast<std::size_t>(step)]);
  }
  database.execute("PRAGMA application_id=" + std::to_string(kApplicationId));
  database.execute("PRAGMA user_version=" + std::to_string(latest));
  transaction.commit();
}

}  // namespace bandwright
