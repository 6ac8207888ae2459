// POST /v1/analyses: everything known of one given network, at once.
#pragma once

#include "server/api/routes.h"

namespace bandwright {

void analyse_network(const ApiContext& context, const Call& call, const Respond& respond);

}  // namespace bandwright
