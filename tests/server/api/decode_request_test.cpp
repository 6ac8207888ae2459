// What a request without fault means.
#include <doctest/doctest.h>

#include <algorithm>

#include "tests/server/api/request_fixture.h"

namespace bandwright {
namespace {

JobRequest decoded(const Json& request) {
  auto job = decode_job_request(request);
  REQUIRE(job.ok());
  return std::move(*job);
}

bool assumes(const JobRequest& job, const std::string& line) {
  return std::find(job.assumptions.begin(), job.assumptions.end(), line) != job.assumptions.end();
}

Json one_inductor(const std::string& value) {
  Json request =
      job_request_with("/template/elements", R"([{"place":"series","kind":"inductor"}])");
  request["template"]["elements"][0]["inductance_h"] = Json::parse(value);
  return request;
}

TEST_CASE("defaults that were used are listed, given members are not") {
  const JobRequest job = decoded(job_request());
  CHECK(assumes(job, "#/source: 50 ohm (default)"));
  CHECK(assumes(job, "#/load/samples/reference_ohm: 50 ohm (default)"));
  CHECK(assumes(job, "#/goals/0/weight: 1 (default)"));
  CHECK(assumes(job, "#/parts/capacitor/values: E24 (default)"));
  CHECK(assumes(job, "#/parts/inductor/tolerance_percent: 5 % (default)"));
  CHECK(assumes(job, "#/parts/inductor/q: no loss (default)"));
  CHECK(assumes(job, "#/tolerance/distribution: uniform (default)"));
  CHECK(assumes(job, "#/search/seed: 1 (default)"));
  CHECK(assumes(job, "#/budget/run_seconds: 60 s (default)"));
  CHECK(assumes(job, "#/rank_by: yield (default)"));
  CHECK_FALSE(assumes(job, "#/parts/inductor/values: E24 (default)"));
  CHECK_FALSE(assumes(job, "#/tolerance/samples: 2000 (default)"));
  for (const std::string& line : job.assumptions) {
    CHECK(std::count(job.assumptions.begin(), job.assumptions.end(), line) == 1);
  }
}

TEST_CASE("quantities reach the problem in SI units") {
  Json request = job_request();
  request["source"]["impedance_ohm"] = Json::parse(R"(["35 ohm", -12])");
  request["drive_w"] = "250 mW";
  request["budget"]["run_seconds"] = 12;
  const JobRequest job = decoded(request);
  CHECK(job.problem.source.constant_ohm() == Complex(35, -12));
  CHECK(job.problem.drive_w == 0.25);
  CHECK(job.run_seconds == 12);
  REQUIRE(job.problem.goals.size() == 1);
  CHECK(job.problem.goals[0].from_hz == 140e6);
  CHECK(job.problem.goals[0].bound == GoalBound::at_least);
  CHECK(job.problem.goals[0].bound_db == 6);
}

TEST_CASE("a goal without a bound is as good as possible") {
  Json request = job_request();
  request["goals"][0].erase("at_least_db");
  CHECK(decoded(request).problem.goals[0].bound == GoalBound::best);
}

TEST_CASE("impedance, admittance and scattering samples of one load agree") {
  // 100 + 50j ohm: S = (Z - 50) / (Z + 50), Y = 1 / Z.
  const Complex z(100, 50);
  const Complex s = (z - 50.0) / (z + 50.0);
  const Complex y = 1.0 / z;
  const auto load = [](const char* re, const char* im, Complex figure) {
    Json request = job_request();
    Json samples;
    samples["frequency_hz"] = {140e6, 160e6};
    samples[re] = {figure.real(), figure.real()};
    samples[im] = {figure.imag(), figure.imag()};
    request["load"]["samples"] = samples;
    return decoded(request).problem.loads.at(0).port.impedance_ohm(150e6);
  };
  CHECK(std::abs(load("z_re_ohm", "z_im_ohm", z) - z) < 1e-9);
  CHECK(std::abs(load("s_re", "s_im", s) - z) < 1e-9);
  CHECK(std::abs(load("y_re_s", "y_im_s", y) - z) < 1e-9);
}

TEST_CASE("the port of a Touchstone text with several is the one asked for") {
  const std::string text =
      R"("# MHZ S RI R 50\n140 0.1 0 0 0 0 0 0.5 0\n160 0.1 0 0 0 0 0 0.5 0\n")";
  Json request = job_request_with("/load", R"({"touchstone": )" + text + R"(, "port": 2})");
  const JobRequest job = decoded(request);
  CHECK(std::abs(job.problem.loads[0].port.reflection(150e6, 50) - 0.5) < 1e-12);
  CHECK(assumes(job, "#/load/touchstone: the other ports end in their reference resistance"));
}

TEST_CASE("several states of a load keep their names") {
  Json request = job_request();
  request["loads"] = Json::array({request["load"], request["load"]});
  request.erase("load");
  request["loads"][1]["name"] = "near a wall";
  const JobRequest job = decoded(request);
  REQUIRE(job.problem.loads.size() == 2);
  CHECK(job.problem.loads[0].name == "state 1");
  CHECK(job.problem.loads[1].name == "near a wall");
}

TEST_CASE("a fixed value is kept as it is, whatever the part offers") {
  for (const char* value : {"3.31e-9", "\"3.31 nH\""}) {
    const JobRequest job = decoded(one_inductor(value));
    REQUIRE(job.problem.topologies.size() == 1);
    const Slot& slot = job.problem.topologies[0].slots.at(0);
    CHECK(slot.fixed());
    CHECK(slot.range.min == 3.31e-9);
  }
}

TEST_CASE("a range may leave out either end, which the default range then gives") {
  // 50 ohm at sqrt(140 * 160) MHz: reactances from 1 to 2500 ohm.
  const double omega = 2 * 3.14159265358979323846 * std::sqrt(140e6 * 160e6);
  const JobRequest job = decoded(one_inductor(R"({"min": "10 nH"})"));
  const ValueRange range = job.problem.topologies.at(0).slots.at(0).range;
  CHECK(range.min == 10e-9);
  CHECK(range.max == doctest::Approx(2500 / omega).epsilon(1e-12));
}

TEST_CASE("an element's own part wins member by member over parts") {
  Json request = one_inductor(R"({"min": "1 nH"})");
  request["parts"]["inductor"] =
      Json::parse(R"({"values": "E12", "tolerance_percent": 2, "q": 60})");
  request["template"]["elements"][0]["part"] = Json::parse(R"({"tolerance_h": "0.2 nH"})");
  const Part part = decoded(request).problem.topologies.at(0).slots.at(0).part;
  CHECK(std::get<Series>(part.values) == Series::e12);
  CHECK(part.tolerance.absolute == 0.2e-9);
  CHECK(part.tolerance.relative == 0);
  REQUIRE(part.q);
  CHECK(part.q->value == 60);
}

TEST_CASE("an element with several kinds may have one part a kind") {
  Json request = job_request_with(
      "/template/elements/0/part",
      R"({"inductor": {"values": ["10nH", "22nH"]}, "capacitor": {"esr_ohm": 0.1}})");
  const JobRequest job = decoded(request);
  bool seen = false;
  for (const Topology& topology : job.problem.topologies) {
    const Slot& slot = topology.slots.front();
    if (slot.kind != Kind::capacitor) continue;
    CHECK(slot.part.esr_ohm == 0.1);
    seen = true;
  }
  CHECK(seen);
}

TEST_CASE("an analysis takes the network of an answer as it is") {
  const auto analysis = decode_analysis_request(analysis_request());
  REQUIRE(analysis.ok());
  CHECK(analysis->values == Values{39e-9, 12e-12});
  REQUIRE(analysis->problem.topologies.size() == 1);
  CHECK(analysis->problem.topologies[0].slots[1].part.tolerance.relative == 0.02);
  CHECK(analysis->sweep.from_hz == 140e6);
  CHECK(analysis->sweep.to_hz == 160e6);
  CHECK(analysis->sweep.points == 201);
}

}  // namespace
}  // namespace bandwright
