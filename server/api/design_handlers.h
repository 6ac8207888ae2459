// The designs of a job that has succeeded: one row each, or one of them in full.
#pragma once

#include "server/api/routes.h"

namespace bandwright {

void show_designs(const ApiContext& context, const Call& call, const Respond& respond);
void show_design(const ApiContext& context, const Call& call, const Respond& respond);

}  // namespace bandwright
