#include "server/api/design_handlers.h"

#include <charconv>

#include "server/api/encode_design.h"
#include "server/api/encode_job.h"
#include "server/api/job_handlers.h"
#include "server/api/json_response.h"
#include "server/api/negotiation.h"
#include "server/api/problem_details.h"

namespace bandwright {
namespace {

Response not_there_yet(const JobRecord& job, const RequestHead& head) {
  Response response = problem_response(
      409,
      "The job is " + std::string(job_state_name(job.state)) +
          (is_final(job.state) ? " and has no designs." : "; its designs come when it is done."),
      head.request_id);
  if (!is_final(job.state)) response.headers.push_back({"Retry-After", "1"});
  return response;
}

// The job if it has designs, else the response that says why not.
Result<JobRecord, Response> job_with_designs(const ApiContext& context, const Call& call) {
  const RequestHead& head = call.request.head;
  auto job = context.jobs.find(kLocalTeam, call.parameters.at(0));
  if (!job) return refusal_response(Refusal::not_found, head.request_id);
  if (job->result.empty()) return not_there_yet(*job, head);
  return std::move(*job);
}

// Flat names with units: what a table has as its columns.
OrderedJson design_row(const OrderedJson& design, const std::string& designs_link) {
  OrderedJson row;
  for (const char* name : {"rank", "meets_goals", "margin_db"}) row[name] = design.at(name);
  if (const auto yield = design.find("yield"); yield != design.end()) {
    row["yield"] = yield->at("value");
    row["yield_low"] = yield->at("low");
    row["yield_high"] = yield->at("high");
  }
  row["efficiency_db"] = design.at("efficiency_db");
  row["part_count"] = design.at("network").size();
  row["network"] = network_sentence(design.at("network"));
  row["link"] = designs_link + "/" + std::to_string(design.at("rank").get<int>());
  return row;
}

Response with_etag(Response response, const JobRecord& job, const RequestHead& head) {
  const std::string etag = job_etag(job, response.body);
  if (none_match_names(head, etag)) {
    response = {304, {{"Cache-Control", "private, no-cache"}}, ""};
  }
  response.headers.push_back({"ETag", etag});
  return response;
}

}  // namespace

void show_designs(const ApiContext& context, const Call& call, const Respond& respond) {
  const auto job = job_with_designs(context, call);
  if (!job) return respond(job.error());
  const OrderedJson result = OrderedJson::parse(job->result);
  const std::string link = "/v1/jobs/" + job->id + "/designs";
  OrderedJson out;
  out["job"] = job->id;
  out["designs"] = OrderedJson::array();
  for (const OrderedJson& design : result.at("designs")) {
    out["designs"].push_back(design_row(design, link));
  }
  respond(with_etag(json_response(200, json_text(out)), *job, call.request.head));
}

void show_design(const ApiContext& context, const Call& call, const Respond& respond) {
  const RequestHead& head = call.request.head;
  const auto job = job_with_designs(context, call);
  if (!job) return respond(job.error());
  const OrderedJson result = OrderedJson::parse(job->result);
  const OrderedJson& designs = result.at("designs");
  const std::string& text = call.parameters.at(1);
  std::size_t rank = 0;
  const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), rank);
  if (error != std::errc() || end != text.data() + text.size() || rank < 1 ||
      rank > designs.size()) {
    return respond(problem_response(
        404, "There is no design of this rank; the job has " + std::to_string(designs.size()) + ".",
        head.request_id));
  }
  respond(with_etag(json_response(200, json_text(designs[rank - 1])), *job, head));
}

}  // namespace bandwright
