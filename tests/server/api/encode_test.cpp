// What answers are called on the wire.
#include <doctest/doctest.h>

#include <limits>
#include <stdexcept>

#include "server/api/digest.h"
#include "server/api/encode_design.h"
#include "server/api/encode_job.h"
#include "server/api/encode_report.h"
#include "server/api/iso_time.h"
#include "tests/server/api/request_fixture.h"

namespace bandwright {
namespace {

Design sample_design(const Problem& problem) {
  Design design;
  design.topology.slots.resize(2);
  design.topology.slots[0] = {Place::series, Kind::capacitor, {2e-11, 2e-11}, {}, 0};
  design.topology.slots[0].part.tolerance = {0.07, 0};
  design.topology.slots[1] = {Place::shunt, Kind::inductor, {1.5e-8, 1.5e-8}, {}, 1};
  design.topology.slots[1].part.tolerance = {0, 2e-10};
  design.values = {2e-11, 1.5e-8};
  design.meets_goals = true;
  design.margin_db = 0.1 + 0.2;  // needs all its digits
  design.goals.push_back({6.15, problem.goals[0].to_hz, 0, 0.15, true});
  design.ideal = Ideal{0.26, {2.05e-11, 1.47e-8}};
  design.yield = Yield{0.981, 0.978, 0.984, 0.95, 10000, Distribution::normal};
  design.margin_quantiles = MarginQuantiles{-0.2, -0.1, 0.1, 0.2};
  design.sensitivity = {{0, 0.61}};
  design.stress = {{0, 31, 0.9, 0.11}};
  design.efficiency_db = -0.4;
  design.response.frequency_hz = {140e6, 160e6};
  design.response.return_loss_db = {7, 6.15};
  return design;
}

JobRequest sample_request() {
  return std::move(*decode_job_request(job_request()));
}

Report sample_report(const Problem& problem) {
  Report report;
  report.stop_reason = StopReason::converged;
  report.evaluations = 182000;
  report.topologies = 8;
  report.topologies_done = 8;
  report.unmatched = {1.1, 140e6};
  report.designs = {sample_design(problem), sample_design(problem)};
  return report;
}

TEST_CASE("a design carries the names of the interface document") {
  const JobRequest request = sample_request();
  const OrderedJson design = design_json(sample_design(request.problem), request.problem);
  CHECK(json_text(design["network"]) ==
        R"([{"place":"series","kind":"capacitor","capacitance_f":2e-11,"label":"20 pF",)"
        R"("tolerance_percent":7.0},{"place":"shunt","kind":"inductor","inductance_h":1.5e-08,)"
        R"("label":"15 nH","tolerance_h":2e-10}])");
  CHECK(json_text(design["yield"]) ==
        R"({"value":0.981,"low":0.978,"high":0.984,"confidence":0.95,"samples":10000,)"
        R"("distribution":"normal"})");
  CHECK(json_text(design["goals"]) ==
        R"([{"quantity":"return_loss","from_hz":140000000.0,"to_hz":160000000.0,)"
        R"("bound":"at_least","bound_db":6.0,"value_db":6.15,"at_hz":160000000.0,)"
        R"("margin_db":0.15,"met":true}])");
  CHECK(json_text(design["tolerance"]) ==
        R"({"margin_db":{"p01":-0.2,"p05":-0.1,"p50":0.1,"p95":0.2},)"
        R"("sensitivity":[{"element":0,"share":0.61}]})");
  CHECK(json_text(design["stress"]) ==
        R"([{"element":0,"peak_v":31.0,"peak_a":0.9,"dissipated_w":0.11}])");
  CHECK(design["ideal"]["margin_db"] == 0.26);
  CHECK(design["ideal"]["network"][0]["capacitance_f"] == 2.05e-11);
  CHECK(design["margin_db"].get<double>() == 0.1 + 0.2);
  CHECK(network_sentence(design["network"]) == "series capacitor 20 pF, shunt inductor 15 nH");
}

TEST_CASE("without Monte Carlo there is neither yield nor tolerance") {
  const JobRequest request = sample_request();
  Design design = sample_design(request.problem);
  design.yield.reset();
  design.margin_quantiles.reset();
  const OrderedJson out = design_json(design, request.problem);
  CHECK_FALSE(out.contains("yield"));
  CHECK_FALSE(out.contains("tolerance"));
}

TEST_CASE("a figure that is not finite is never written") {
  const JobRequest request = sample_request();
  Design design = sample_design(request.problem);
  design.response.return_loss_db[1] = std::numeric_limits<double>::infinity();
  CHECK_THROWS_AS(design_json(design, request.problem), std::logic_error);
  design = sample_design(request.problem);
  design.efficiency_db = std::numeric_limits<double>::quiet_NaN();
  CHECK_THROWS_AS(design_json(design, request.problem), std::logic_error);
}

TEST_CASE("a network of an answer decodes to the same values") {
  const JobRequest request = sample_request();
  const Design design = sample_design(request.problem);
  Json again = analysis_request();
  again["network"] = Json::parse(json_text(network_json(design.topology, design.values)));
  const auto analysis = decode_analysis_request(again);
  REQUIRE(analysis.ok());
  CHECK(analysis->values == design.values);
  CHECK(analysis->problem.topologies[0].slots[0].part.tolerance.relative == 0.07);
  CHECK(analysis->problem.topologies[0].slots[1].part.tolerance.absolute == 2e-10);
}

TEST_CASE("a report has its members in a fixed order and its designs ranked") {
  const JobRequest request = sample_request();
  const std::string text = report_text(sample_report(request.problem), request);
  CHECK(text == report_text(sample_report(request.problem), request));
  const OrderedJson report = OrderedJson::parse(text);
  std::string names;
  for (const auto& [name, value] : report.items()) names += name + " ";
  CHECK(
      names ==
      "engine progress stop_reason reproducible assumptions warnings cautions unmatched designs ");
  CHECK(report["designs"][0]["rank"] == 1);
  CHECK(report["designs"][1]["rank"] == 2);
  CHECK(report["progress"]["fraction"] == 1.0);
  CHECK(report["cautions"].size() == cautions().size());
}

JobRecord sample_job() {
  JobRecord job;
  job.id = "jb_1";
  job.name = "whip";
  job.seed = 7;
  job.request_digest = "sha256:00";
  job.version = 3;
  job.created_at = 0;
  return job;
}

TEST_CASE("a finished job is its envelope and its stored result in one object") {
  const JobRequest request = sample_request();
  JobRecord job = sample_job();
  job.state = JobState::succeeded;
  job.result = report_text(sample_report(request.problem), request);
  job.finished_at = 1500;
  const OrderedJson body = OrderedJson::parse(job_text(job));
  CHECK(body["state"] == "succeeded");
  CHECK(body["done"] == true);
  CHECK(body["seed"] == 7);
  CHECK(body["finished_at"] == "1970-01-01T00:00:01.500Z");
  CHECK(body["stop_reason"] == "converged");
  CHECK(body["designs"].size() == 2);
  CHECK(body["links"]["self"] == "/v1/jobs/jb_1");
  CHECK(job_etag(job, "") == "\"3\"");
}

TEST_CASE("a running job shows its progress, and its tag changes with it") {
  JobRecord job = sample_job();
  job.state = JobState::running;
  job.progress = JobProgress{0.25, 1000, 1, 8, -2.5};
  const OrderedJson body = OrderedJson::parse(job_text(job));
  CHECK(body["done"] == false);
  CHECK(body["progress"]["best_margin_db"] == -2.5);
  CHECK(body["engine"]["name"] == "bandwright");
  JobRecord later = job;
  later.progress->evaluations = 2000;
  CHECK(job_etag(job, job_text(job)) == job_etag(job, job_text(job)));
  CHECK(job_etag(job, job_text(job)) != job_etag(later, job_text(later)));
}

TEST_CASE("a failed job says why") {
  JobRecord job = sample_job();
  job.state = JobState::failed;
  job.failure_code = "crashed";
  job.failure_detail = "3 attempts ended with the process";
  const OrderedJson body = OrderedJson::parse(job_text(job));
  CHECK(body["failure"]["code"] == "crashed");
  CHECK_FALSE(body.contains("designs"));
}

TEST_CASE("bytes that are not UTF-8 in a name do not break an answer") {
  JobRecord job = sample_job();
  job.name = "\xff";
  CHECK(OrderedJson::accept(job_text(job)));
}

TEST_CASE("times have milliseconds and UTC, before and after 1970") {
  CHECK(iso_time(0) == "1970-01-01T00:00:00.000Z");
  CHECK(iso_time(951'782'400'123) == "2000-02-29T00:00:00.123Z");
  CHECK(iso_time(-1) == "1969-12-31T23:59:59.999Z");
}

// FIPS 180-4, the example of one block.
TEST_CASE("a digest is the SHA-256 of the bytes") {
  CHECK(sha256_text("abc") ==
        "sha256:ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
}

}  // namespace
}  // namespace bandwright
