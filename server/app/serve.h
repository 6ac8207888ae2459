// `bandwrightd serve`: builds every part in order, serves until a stop signal, takes it all down.
//
// Logs are JSON lines on standard error. Once the service can be used there is one with
// "msg":"listening" and the "port" that was bound.
//
// Stopping: readiness goes off and no job is claimed; running jobs get the configured time, then
// are queued again; open requests get a moment more. A second signal cuts both times short. A
// third, or nine seconds past the time of the jobs, ends the process at once: what was acknowledged
// is on disk either way.
#pragma once

#include "server/config/config.h"

namespace bandwright {

// Returns the exit status.
int serve(const LoadedConfig& loaded);

}  // namespace bandwright
