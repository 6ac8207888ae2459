// The handler: head checks, dispatch to the table's handler, faults as problems.
#include "server/api/api.h"

#include "server/api/head_checks.h"
#include "server/api/problem_details.h"
#include "server/api/routes.h"

namespace bandwright {
namespace {

class Api : public Handler {
 public:
  Api(JobService& jobs, ApiOptions options) : options_(std::move(options)), jobs_(jobs) {}

  HeadDecision on_head(const RequestHead& head) override {
    const RouteMatch match = match_route(head.method, head.path);
    if (auto refusal = check_head(head, match, options_)) return std::move(*refusal);
    const bool reads = match.route->body != BodyUse::none;
    return AcceptBody{reads ? options_.max_body_bytes : 0};
  }

  void on_request(Request request, Respond respond) override {
    RouteMatch match = match_route(request.head.method, request.head.path);
    if (!match.route) {
      return respond(problem_response(404, "There is nothing here; \"/\" lists what there is.",
                                      request.head.request_id));
    }
    const ApiContext context{jobs_, options_};
    match.route->handle(context, Call{std::move(request), std::move(match.parameters)}, respond);
  }

  Response on_fault(int status, std::string_view detail, std::string_view request_id) override {
    // What went wrong inside is for the log alone.
    if (status == 500) return problem_response(500, "The request failed.", request_id);
    return problem_response(status, detail, request_id);
  }

 private:
  const ApiOptions options_;
  JobService& jobs_;
};

}  // namespace

std::unique_ptr<Handler> make_api(JobService& jobs, ApiOptions options) {
  return std::make_unique<Api>(jobs, std::move(options));
}

}  // namespace bandwright
