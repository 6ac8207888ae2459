// What the service says of itself: links, health, interface document, limits.
#pragma once

#include "server/api/routes.h"

namespace bandwright {

void show_root(const ApiContext& context, const Call& call, const Respond& respond);
void show_liveness(const ApiContext& context, const Call& call, const Respond& respond);
void show_readiness(const ApiContext& context, const Call& call, const Respond& respond);
void show_openapi(const ApiContext& context, const Call& call, const Respond& respond);
void show_service(const ApiContext& context, const Call& call, const Respond& respond);

}  // namespace bandwright
