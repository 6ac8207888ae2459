#include "server/api/encode_job.h"

#include <cmath>

#include "server/api/digest.h"
#include "server/api/encode_report.h"
#include "server/api/iso_time.h"

namespace bandwright {
namespace {

void add_times(OrderedJson& out, const JobRecord& job) {
  out["created_at"] = iso_time(job.created_at);
  if (job.started_at) out["started_at"] = iso_time(*job.started_at);
  if (job.finished_at) out["finished_at"] = iso_time(*job.finished_at);
  if (job.expires_at) out["expires_at"] = iso_time(*job.expires_at);
  out["attempt"] = job.attempt;
}

OrderedJson progress_json(const JobProgress& progress) {
  OrderedJson out;
  out["fraction"] = std::isfinite(progress.fraction) ? progress.fraction : 0.0;
  out["evaluations"] = progress.evaluations;
  out["topologies_done"] = progress.topologies_done;
  out["topologies"] = progress.topologies;
  if (progress.best_margin_db && std::isfinite(*progress.best_margin_db)) {
    out["best_margin_db"] = *progress.best_margin_db;
  }
  return out;
}

void add_standing(OrderedJson& out, const JobRecord& job) {
  if (job.queue_position) out["queue_position"] = *job.queue_position;
  if (!is_final(job.state)) {
    out["stop_requested"] = job.stop_requested;
    out["progress"] = progress_json(job.progress.value_or(JobProgress{}));
  }
  if (job.state == JobState::failed) {
    out["failure"]["code"] = job.failure_code;
    out["failure"]["detail"] = job.failure_detail;
  }
}

OrderedJson links_json(const std::string& id) {
  const std::string self = "/v1/jobs/" + id;
  OrderedJson out;
  out["self"] = self;
  out["designs"] = self + "/designs";
  out["stop"] = self + "/stop";
  out["cancel"] = self + "/cancel";
  return out;
}

OrderedJson head_json(const JobRecord& job) {
  OrderedJson out;
  if (!job.id.empty()) out["id"] = job.id;
  out["state"] = job_state_name(job.state);
  out["done"] = is_final(job.state);
  if (!job.name.empty()) out["name"] = job.name;
  out["seed"] = job.seed;
  out["request_digest"] = job.request_digest;
  return out;
}

}  // namespace

std::string job_text(const JobRecord& job) {
  OrderedJson head = head_json(job);
  // A result names the engine that made it, which an update may since have replaced.
  if (job.result.empty()) head["engine"] = engine_json();
  if (!job.id.empty()) add_times(head, job);
  add_standing(head, job);
  std::string text = json_text(head);
  text.pop_back();
  constexpr std::size_t kBraces = 2;
  if (job.result.size() > kBraces) {
    text += ',';
    text.append(job.result, 1, job.result.size() - kBraces);
  }
  if (!job.id.empty()) text += ",\"links\":" + json_text(links_json(job.id));
  return text + "}";
}

OrderedJson job_summary_json(const JobRecord& job) {
  OrderedJson out = head_json(job);
  add_times(out, job);
  add_standing(out, job);
  out["links"] = links_json(job.id);
  return out;
}

std::string job_etag(const JobRecord& job, const std::string& body) {
  std::string tag = "\"" + std::to_string(job.version);
  if (!is_final(job.state)) {
    constexpr std::size_t kPrefix = 7;  // "sha256:"
    constexpr std::size_t kDigits = 16;
    tag += "-" + sha256_text(body).substr(kPrefix, kDigits);
  }
  return tag + "\"";
}

}  // namespace bandwright
