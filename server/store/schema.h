// The shape of the file, and the only way from an older shape to today's: forward.
#pragma once

#include <cstdint>

#include "server/store/database.h"

namespace bandwright {

enum class SchemaCheck {
  usable,   // empty, or of this or an older version
  newer,    // written by a newer version
  foreign,  // a database of something else
};

SchemaCheck check_schema(Database& database);

// Brings a usable file to this version in one transaction. Does nothing if it is there.
void migrate(Database& database);

}  // namespace bandwright
