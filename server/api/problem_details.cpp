#include "server/api/problem_details.h"

#include <algorithm>
#include <array>

#include "server/api/json.h"

namespace bandwright {
namespace {

struct Phrase {
  int status;
  std::string_view text;
};

constexpr std::array<Phrase, 20> kPhrases{{{400, "Bad Request"},
                                           {403, "Forbidden"},
                                           {404, "Not Found"},
                                           {405, "Method Not Allowed"},
                                           {406, "Not Acceptable"},
                                           {408, "Request Timeout"},
                                           {409, "Conflict"},
                                           {411, "Length Required"},
                                           {413, "Content Too Large"},
                                           {414, "URI Too Long"},
                                           {415, "Unsupported Media Type"},
                                           {421, "Misdirected Request"},
                                           {422, "Unprocessable Content"},
                                           {429, "Too Many Requests"},
                                           {431, "Request Header Fields Too Large"},
                                           {500, "Internal Server Error"},
                                           {501, "Not Implemented"},
                                           {503, "Service Unavailable"},
                                           {505, "HTTP Version Not Supported"},
                                           {507, "Insufficient Storage"}}};

// One row a refusal: the status, what to say, and the seconds after which to try again (0: never).
struct RefusalAnswer {
  Refusal refusal;
  int status;
  std::string_view detail;
  int retry_after_s;
};

constexpr std::array<RefusalAnswer, 8> kRefusals{{
    {Refusal::not_found, 404, "There is no such job.", 0},
    {Refusal::finished, 409, "The job has ended; it can be read or deleted.", 0},
    {Refusal::still_running, 409, "The job has not ended; cancel it first.", 0},
    {Refusal::team_queue_full, 429, "Your queue is full; wait for a job to end or cancel one.", 5},
    {Refusal::service_full, 503, "The service's queue is full.", 15},
    {Refusal::disk_full, 507, "The service is short of disk space and takes no jobs.", 60},
    {Refusal::shutting_down, 503, "The service is shutting down.", 10},
    {Refusal::bad_page_token, 400, "page_token is not one this service gave out.", 0},
}};

OrderedJson fault_json(const Fault& fault) {
  OrderedJson out;
  out["pointer"] = fault.pointer;
  out["detail"] = fault.detail;
  out["code"] = fault.code;
  if (!fault.allowed.empty()) out["allowed"] = fault.allowed;
  if (!fault.suggestion.empty()) out["suggestion"] = fault.suggestion;
  return out;
}

}  // namespace

std::string_view status_phrase(int status) {
  const auto found = std::find_if(kPhrases.begin(), kPhrases.end(),
                                  [status](const Phrase& p) { return p.status == status; });
  return found == kPhrases.end() ? "Error" : found->text;
}

std::string problem_text(int status, std::string_view detail, std::string_view request_id,
                         std::span<const Fault> faults) {
  OrderedJson out;
  out["type"] = "about:blank";
  out["title"] = status_phrase(status);
  out["status"] = status;
  out["detail"] = detail;
  if (!request_id.empty()) out["instance"] = request_id;
  if (!faults.empty()) {
    out["errors"] = OrderedJson::array();
    for (const Fault& fault : faults) out["errors"].push_back(fault_json(fault));
  }
  return json_text(out);
}

Response problem_response(int status, std::string_view detail, std::string_view request_id,
                          std::span<const Fault> faults) {
  return {status,
          {{"Content-Type", "application/problem+json"}, {"Cache-Control", "no-store"}},
          problem_text(status, detail, request_id, faults)};
}

Response refusal_response(Refusal refusal, std::string_view request_id) {
  const auto row = std::find_if(kRefusals.begin(), kRefusals.end(),
                                [&](const RefusalAnswer& r) { return r.refusal == refusal; });
  if (row == kRefusals.end()) return problem_response(500, "", request_id);
  Response response = problem_response(row->status, row->detail, request_id);
  if (row->retry_after_s > 0) {
    response.headers.push_back({"Retry-After", std::to_string(row->retry_after_s)});
  }
  return response;
}

}  // namespace bandwright
