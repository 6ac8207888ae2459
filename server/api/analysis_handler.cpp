#include "server/api/analysis_handler.h"

#include "server/api/body_reading.h"
#include "server/api/decode_request.h"
#include "server/api/encode_report.h"
#include "server/api/json_response.h"
#include "solver/solver/solver.h"

namespace bandwright {

void analyse_network(const ApiContext& context, const Call& call, const Respond& respond) {
  const auto document = read_body(call.request);
  if (!document) return respond(document.error());
  const auto request = decode_analysis_request(*document);
  if (!request) return respond(unprocessable(request.error(), call.request.head.request_id));
  const Design design =
      analyse(request->problem, request->values, request->sweep, context.options.analysis_threads);
  respond(json_response(200, analysis_text(design, *request)));
}

}  // namespace bandwright
