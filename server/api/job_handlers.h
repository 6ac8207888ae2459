// The life of a job over HTTP: create, list, read, wait, stop, cancel, delete.
#pragma once

#include "server/api/routes.h"

namespace bandwright {

// Whose jobs these are, where callers do not identify themselves.
inline constexpr const char* kLocalTeam = "local";

void create_job(const ApiContext& context, const Call& call, const Respond& respond);
void list_jobs(const ApiContext& context, const Call& call, const Respond& respond);
void show_job(const ApiContext& context, const Call& call, const Respond& respond);
void delete_job(const ApiContext& context, const Call& call, const Respond& respond);
void stop_job(const ApiContext& context, const Call& call, const Respond& respond);
void cancel_job(const ApiContext& context, const Call& call, const Respond& respond);

}  // namespace bandwright
