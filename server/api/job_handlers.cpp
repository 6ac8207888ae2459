#include "server/api/job_handlers.h"

#include <charconv>
#include <chrono>

#include "server/api/body_reading.h"
#include "server/api/decode_request.h"
#include "server/api/digest.h"
#include "server/api/encode_job.h"
#include "server/api/head_checks.h"
#include "server/api/json_response.h"
#include "server/api/limits.h"
#include "server/api/nearest_name.h"
#include "server/api/negotiation.h"
#include "server/api/preference.h"
#include "server/api/problem_details.h"

namespace bandwright {
namespace {

constexpr const char* kRetryAfterSeconds = "1";

std::chrono::steady_clock::time_point in_seconds(int seconds) {
  return std::chrono::steady_clock::now() + std::chrono::seconds(seconds);
}

void add_preference(Response& response, std::optional<int> wait_s) {
  if (!wait_s) return;
  response.headers.push_back({"Preference-Applied", "wait=" + std::to_string(*wait_s)});
}

// 201 with the result if the job has ended, else 202.
Response created_response(const JobRecord& job, std::optional<int> wait_s) {
  const bool done = is_final(job.state);
  std::string body = job_text(job);
  const std::string etag = job_etag(job, body);
  Response response = json_response(done ? 201 : 202, std::move(body));
  response.headers.push_back({"Location", "/v1/jobs/" + job.id});
  response.headers.push_back({"ETag", etag});
  if (!done) response.headers.push_back({"Retry-After", kRetryAfterSeconds});
  add_preference(response, wait_s);
  return response;
}

// The job as it stands, or 304 if that is what the client has.
Response current_response(const JobRecord& job, const RequestHead& head,
                          std::optional<int> wait_s) {
  std::string body = job_text(job);
  const std::string etag = job_etag(job, body);
  Response response = json_response(200, std::move(body));
  if (none_match_names(head, etag)) {
    response = {304, {{"Cache-Control", "private, no-cache"}}, ""};
  }
  response.headers.push_back({"ETag", etag});
  if (!is_final(job.state)) response.headers.push_back({"Retry-After", kRetryAfterSeconds});
  add_preference(response, wait_s);
  return response;
}

// Answers a change of a job: the job as it is now, or why not.
void respond_with_job(const Result<JobRecord, Refusal>& job, const RequestHead& head,
                      const Respond& respond) {
  if (!job) return respond(refusal_response(job.error(), head.request_id));
  respond(current_response(*job, {}, std::nullopt));
}

// `make` runs on a thread of the job service, which must not see an exception.
template <class Make>
auto guarded_callback(Respond respond, std::string request_id, Make make) {
  return [respond = std::move(respond), request_id = std::move(request_id),
          make = std::move(make)](std::optional<JobRecord> job) {
    try {
      respond(job ? make(*job) : refusal_response(Refusal::not_found, request_id));
    } catch (const std::exception&) {
      respond(problem_response(500, "The request could not be handled.", request_id));
    }
  };
}

// The page asked for, or the faults of the query.
Result<JobListQuery, std::vector<Fault>> list_query(const RequestHead& head) {
  JobListQuery query;
  query.team = kLocalTeam;
  query.page_size = limits::kPageSize;
  query.page_token = std::string(query_value(head, "page_token").value_or(""));
  std::vector<Fault> faults;
  if (const auto size = query_value(head, "page_size")) {
    const char* last = size->data() + size->size();
    const auto [end, error] = std::from_chars(size->data(), last, query.page_size);
    if (error != std::errc() || end != last || query.page_size < 1 ||
        query.page_size > limits::kPageSizeMost) {
      const std::string range = "1 to " + std::to_string(limits::kPageSizeMost);
      faults.push_back(
          {"", "out_of_range", "page_size must be a whole number from " + range, {range}, ""});
    }
  }
  if (const auto name = query_value(head, "state")) {
    query.state = job_state_from_name(*name);
    if (!query.state) {
      constexpr std::string_view kStates[] = {"queued", "running",   "succeeded",
                                              "failed", "cancelled", "expired"};
      faults.push_back({"",
                        "unknown_value",
                        "state is not one of the states of a job",
                        {std::begin(kStates), std::end(kStates)},
                        nearest_name(*name, kStates)});
    }
  }
  if (!faults.empty()) return faults;
  return query;
}

}  // namespace

void create_job(const ApiContext& context, const Call& call, const Respond& respond) {
  const RequestHead& head = call.request.head;
  const auto document = read_body(call.request);
  if (!document) return respond(document.error());
  const auto decoded = decode_job_request(*document);
  if (!decoded) return respond(unprocessable(decoded.error(), head.request_id));

  NewJob job;
  job.team = kLocalTeam;
  job.name = decoded->name;
  job.request = json_text(*document);  // members sorted: the canonical form
  job.request_digest = sha256_text(job.request);
  job.seed = decoded->problem.search.seed;
  const auto stored = context.jobs.submit(job);
  if (!stored) return respond(refusal_response(stored.error(), head.request_id));

  const std::optional<int> wait_s = preferred_wait_s(head);
  if (!wait_s) return respond(created_response(*stored, wait_s));
  context.jobs.when_done(kLocalTeam, stored->id, in_seconds(*wait_s),
                         guarded_callback(respond, head.request_id, [wait_s](const JobRecord& now) {
                           return created_response(now, wait_s);
                         }));
}

void list_jobs(const ApiContext& context, const Call& call, const Respond& respond) {
  const RequestHead& head = call.request.head;
  const auto query = list_query(head);
  if (!query) {
    return respond(problem_response(400, "The query of the request cannot be understood.",
                                    head.request_id, query.error()));
  }
  const auto page = context.jobs.list(*query);
  if (!page) return respond(refusal_response(page.error(), head.request_id));
  OrderedJson out;
  out["jobs"] = OrderedJson::array();
  for (const JobRecord& job : page->jobs) out["jobs"].push_back(job_summary_json(job));
  if (page->next_page) out["next_page_token"] = *page->next_page;
  respond(json_response(200, json_text(out)));
}

void show_job(const ApiContext& context, const Call& call, const Respond& respond) {
  const RequestHead& head = call.request.head;
  const std::string& id = call.parameters.at(0);
  const std::optional<JobRecord> job = context.jobs.find(kLocalTeam, id);
  if (!job) return respond(refusal_response(Refusal::not_found, head.request_id));
  const std::optional<int> wait_s = preferred_wait_s(head);
  if (!wait_s || is_final(job->state)) return respond(current_response(*job, head, wait_s));
  context.jobs.when_done(
      kLocalTeam, id, in_seconds(*wait_s),
      guarded_callback(respond, head.request_id, [head, wait_s](const JobRecord& now) {
        return current_response(now, head, wait_s);
      }));
}

void delete_job(const ApiContext& context, const Call& call, const Respond& respond) {
  const auto refusal = context.jobs.remove(kLocalTeam, call.parameters.at(0));
  if (refusal) return respond(refusal_response(*refusal, call.request.head.request_id));
  respond({204, {}, ""});
}

void stop_job(const ApiContext& context, const Call& call, const Respond& respond) {
  if (auto refusal = check_empty_body(call.request)) return respond(std::move(*refusal));
  respond_with_job(context.jobs.stop(kLocalTeam, call.parameters.at(0)), call.request.head,
                   respond);
}

void cancel_job(const ApiContext& context, const Call& call, const Respond& respond) {
  if (auto refusal = check_empty_body(call.request)) return respond(std::move(*refusal));
  respond_with_job(context.jobs.cancel(kLocalTeam, call.parameters.at(0)), call.request.head,
                   respond);
}

}  // namespace bandwright
