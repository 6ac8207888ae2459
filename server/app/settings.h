// The configuration as each part of the service wants it.
#pragma once

#include "server/api/api.h"
#include "server/config/config.h"
#include "server/http/server.h"
#include "server/jobs/job_service.h"

namespace bandwright {

ServerOptions server_options(const Config& config);
JobServiceOptions job_options(const Config& config);
ApiOptions api_options(const Config& config);

}  // namespace bandwright
