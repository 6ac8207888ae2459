#include "server/api/body_reading.h"

#include "server/api/decode_node.h"
#include "server/api/json_reader.h"
#include "server/api/problem_details.h"

namespace bandwright {

Result<Json, Response> read_body(const Request& request) {
  auto document = read_json(request.body);
  if (document) return std::move(*document);
  return problem_response(400, "The body cannot be read: " + document.error().detail + ".",
                          request.head.request_id, std::span(&document.error(), 1));
}

std::optional<Response> check_empty_body(const Request& request) {
  if (request.body.empty()) return std::nullopt;
  const auto document = read_body(request);
  if (!document) return document.error();
  DecodeContext context;
  Node(*document, "#", context).expect_object({});
  if (context.faults.empty()) return std::nullopt;
  return unprocessable(context.faults.list(), request.head.request_id);
}

Response unprocessable(std::span<const Fault> faults, std::string_view request_id) {
  const std::string detail = faults.size() == 1
                                 ? "The request was read and has a fault."
                                 : "The request was read and has faults; all of them are listed.";
  return problem_response(422, detail, request_id, faults);
}

}  // namespace bandwright
