// Each way a request can be wrong is told with its place and code.
#include <doctest/doctest.h>

#include <algorithm>
#include <string>
#include <vector>

#include "server/api/limits.h"
#include "tests/server/api/request_fixture.h"

namespace bandwright {
namespace {

std::vector<Fault> faults_of(const Json& request) {
  const auto decoded = decode_job_request(request);
  return decoded ? std::vector<Fault>{} : decoded.error();
}

std::string listed(const std::vector<Fault>& faults) {
  std::string out;
  for (const Fault& fault : faults) {
    out += fault.pointer + " [" + fault.code + "] " + fault.detail + "\n";
  }
  return out;
}

const Fault* find_fault(const std::vector<Fault>& faults, const std::string& pointer,
                        const std::string& code) {
  const auto found = std::find_if(faults.begin(), faults.end(), [&](const Fault& fault) {
    return fault.pointer == pointer && fault.code == code;
  });
  return found == faults.end() ? nullptr : &*found;
}

// One change to a request without fault, and the one fault it makes.
struct Case {
  std::string at;       // JSON Pointer of the change
  std::string json;     // the value put there
  std::string pointer;  // of the fault
  std::string code;
};

const std::vector<Case>& cases() {
  static const std::vector<Case> list{
      // Names and types
      {"/templat", "{}", "#/templat", "unknown_member"},
      {"/goals/0/at_leest_db", "6", "#/goals/0/at_leest_db", "unknown_member"},
      {"/goals", "{}", "#/goals", "wrong_type"},
      {"/goals/0/from_hz", "true", "#/goals/0/from_hz", "wrong_type"},
      {"/name", "7", "#/name", "wrong_type"},
      {"/template/elements/0/optional", "1", "#/template/elements/0/optional", "wrong_type"},
      {"/search", R"({"seed": 1.5})", "#/search/seed", "wrong_type"},
      // Quantities
      {"/goals/0/to_hz", R"("160 nH")", "#/goals/0/to_hz", "wrong_unit"},
      {"/goals/0/to_hz", R"("nan")", "#/goals/0/to_hz", "bad_quantity"},
      {"/goals/0/to_hz", "1e300", "#/goals/0/to_hz", "out_of_range"},
      {"/drive_w", "0", "#/drive_w", "out_of_range"},
      // Loads and sources
      {"/load", "{}", "#/load", "empty"},
      {"/loads", R"([{"circuit": {"resistor_ohm": 5}}])", "#/loads", "conflict"},
      {"/load/circuit", R"({"resistor_ohm": 5})", "#/load", "conflict"},
      {"/load/samples/frequency_hz", "[140e6, 160e6, 150e6]", "#/load/samples/frequency_hz/2",
       "not_increasing"},
      {"/load/samples/s_re", "[0.55, 1.2, 0.11]", "#/load/samples", "active"},
      {"/load/samples/s_im", "[1, 2]", "#/load/samples/s_im", "length_mismatch"},
      {"/load/samples/z_re_ohm", "[1, 2, 3]", "#/load/samples", "conflict"},
      {"/load", R"({"samples": {"frequency_hz": [1e8], "s_re": [0]}})", "#/load/samples/s_im",
       "missing"},
      {"/load", R"({"touchstone": "# MHZ S RI R 50\n140 0.5 -0.7\n160 0.1\n"})",
       "#/load/touchstone", "bad_touchstone"},
      {"/load", R"({"circuit": {}})", "#/load/circuit", "empty"},
      {"/load", R"({"circuit": {"resistor_ohm": -5}})", "#/load/circuit/resistor_ohm",
       "out_of_range"},
      {"/load", R"({"circuit": {"series": [{"resistor_ohm": 1, "inductor_h": 1e-9}]}})",
       "#/load/circuit/series/0", "conflict"},
      {"/load/port", "1", "#/load/port", "conflict"},
      {"/source", R"({"impedance_ohm": -50})", "#/source/impedance_ohm", "out_of_range"},
      {"/source", R"({"impedance_ohm": [50]})", "#/source/impedance_ohm", "too_few"},
      {"/source", R"({"circuit": {"capacitor_f": "1 pF"}})", "#/goals/0/from_hz",
       "source_without_resistance"},
      // Goals
      {"/goals", "[]", "#/goals", "empty"},
      {"/goals/0/to_hz", R"("170 MHz")", "#/goals/0/to_hz", "outside_data"},
      {"/goals/0/from_hz", R"("130 MHz")", "#/goals/0/from_hz", "outside_data"},
      {"/goals/0/to_hz", R"("139 MHz")", "#/goals/0/to_hz", "reversed"},
      {"/goals/0/at_most_db", "3", "#/goals/0/at_most_db", "conflict"},
      {"/goals/0/at_least_db", "-6", "#/goals/0/at_least_db", "wrong_sign"},
      {"/goals/0/weight", "0", "#/goals/0/weight", "out_of_range"},
      {"/goals/0/weight", "-1", "#/goals/0/weight", "out_of_range"},
      {"/goals/0/quantity", R"("return_los")", "#/goals/0/quantity", "unknown_value"},
      // Template
      {"/template", "{}", "#/template", "empty"},
      {"/template/elements", "[]", "#/template/elements", "empty"},
      {"/template/ladder", R"({"max_elements": 2})", "#/template", "conflict"},
      {"/template", R"({"ladder": {"max_elements": 9}})", "#/template/ladder/max_elements",
       "out_of_range"},
      {"/template", R"({"ladder": {"min_elements": 3, "max_elements": 2}})",
       "#/template/ladder/min_elements", "reversed"},
      {"/template", R"({"ladder": {"max_elements": 8,
                       "kinds": ["inductor", "capacitor", "resistor"]}})",
       "#/template", "too_many_topologies"},
      {"/template/elements/0/kind", R"("indictor")", "#/template/elements/0/kind", "unknown_value"},
      {"/template/elements/0/kind", "[]", "#/template/elements/0/kind", "empty"},
      {"/template/elements/0/kind/1", R"("inductor")", "#/template/elements/0/kind/1", "duplicate"},
      {"/template/elements/1/capacitance_f", "1e-12", "#/template/elements/1/capacitance_f",
       "conflict"},
      {"/template/elements/1/inductance_h", R"({"min": "20nH", "max": "10nH"})",
       "#/template/elements/1/inductance_h", "reversed"},
      {"/template/elements/1/inductance_h", R"({"min": "1 H"})",
       "#/template/elements/1/inductance_h", "reversed"},
      {"/template/elements/1/inductance_h", R"({"min": "3.31nH", "max": "3.5nH"})",
       "#/template/elements/1/inductance_h", "no_value_in_range"},
      {"/template/elements/1/part", R"({"values": ["1 mH"]})", "#/template/elements/1",
       "no_value_in_range"},
      {"/template/elements/1/part", R"({"esr_ohm": 1})", "#/template/elements/1/part/esr_ohm",
       "unknown_member"},
      // Parts
      {"/parts/inductor/values", R"("E25")", "#/parts/inductor/values", "unknown_value"},
      {"/parts/inductor/values", "[]", "#/parts/inductor/values", "empty"},
      {"/parts/inductor/values", R"(["10nH", -1])", "#/parts/inductor/values/1", "out_of_range"},
      {"/parts/inductor/tolerance_percent", "-1", "#/parts/inductor/tolerance_percent",
       "out_of_range"},
      {"/parts/inductor/tolerance_percent", "101", "#/parts/inductor/tolerance_percent",
       "out_of_range"},
      {"/parts/inductor", R"({"tolerance_percent": 5, "tolerance_h": 1e-9})",
       "#/parts/inductor/tolerance_h", "conflict"},
      {"/parts/inductor/q", R"({"value": 60, "exponent": 0.5})", "#/parts/inductor/q/at_hz",
       "missing"},
      {"/parts/indutor", "{}", "#/parts/indutor", "unknown_member"},
      // Options
      {"/tolerance/samples", "1000001", "#/tolerance/samples", "out_of_range"},
      {"/tolerance/samples", "-1", "#/tolerance/samples", "out_of_range"},
      {"/search", R"({"designs": 0})", "#/search/designs", "out_of_range"},
      {"/search", R"({"designs": 51})", "#/search/designs", "out_of_range"},
      {"/search", R"({"seed": 18446744073709551615})", "#/search/seed", "out_of_range"},
      {"/search", R"({"seed": -1})", "#/search/seed", "out_of_range"},
      {"/budget", R"({"run_seconds": 3601})", "#/budget/run_seconds", "out_of_range"},
      {"/budget", R"({"run_seconds": 0})", "#/budget/run_seconds", "out_of_range"},
      {"/rank_by", R"("yeld")", "#/rank_by", "unknown_value"},
  };
  return list;
}

TEST_CASE("each fault of a request is told once, with its place and code") {
  for (const Case& one : cases()) {
    const std::vector<Fault> faults = faults_of(job_request_with(one.at, one.json));
    CAPTURE(one.at);
    CAPTURE(one.json);
    const std::string told = listed(faults);
    CAPTURE(told);
    CHECK(find_fault(faults, one.pointer, one.code) != nullptr);
    CHECK(std::all_of(faults.begin(), faults.end(),
                      [](const Fault& fault) { return !fault.detail.empty(); }));
  }
}

TEST_CASE("the request the cases change has no fault itself") {
  const std::string told = listed(faults_of(job_request()));
  CHECK(told == "");
}

TEST_CASE("missing members are told where they should stand") {
  const std::vector<Fault> faults = faults_of(Json::object());
  CHECK(find_fault(faults, "#/load", "missing"));
  CHECK(find_fault(faults, "#/template", "missing"));
  CHECK(find_fault(faults, "#/goals", "missing"));
  CHECK(faults.size() == 3);
}

TEST_CASE("a request that is no object is told what it should be") {
  const std::vector<Fault> faults = faults_of(Json::array());
  REQUIRE(faults.size() == 1);
  CHECK(faults[0].pointer == "#");
  CHECK(faults[0].code == "wrong_type");
}

TEST_CASE("an unknown member comes with the name that was probably meant") {
  const auto faults = faults_of(job_request_with("/goals/0/at_leest_db", "6"));
  const Fault* fault = find_fault(faults, "#/goals/0/at_leest_db", "unknown_member");
  REQUIRE(fault);
  CHECK(fault->suggestion == "at_least_db");
  CHECK(fault->detail.find("did you mean \"at_least_db\"?") != std::string::npos);
}

TEST_CASE("a goal outside the data names both frequencies") {
  const auto faults = faults_of(job_request_with("/goals/0/to_hz", R"("170 MHz")"));
  REQUIRE(faults.size() == 1);
  CHECK(faults[0].detail ==
        "170 MHz is above the load's last sample, 160 MHz; nothing is extrapolated");
}

TEST_CASE("a wrong unit names both units") {
  const auto faults = faults_of(job_request_with("/goals/0/to_hz", R"("160 nH")"));
  REQUIRE(faults.size() == 1);
  CHECK(faults[0].detail.find("nH") != std::string::npos);
  CHECK(faults[0].detail.find("Hz") != std::string::npos);
}

TEST_CASE("an active load is told at its sample, and rounding is forgiven") {
  const auto faults = faults_of(job_request_with("/load/samples/s_re", "[0.55, 1.2, 0.11]"));
  REQUIRE(faults.size() == 1);
  CHECK(faults[0].detail.find("sample 2 (150 MHz)") == 0);

  const std::string reactive = R"({"frequency_hz": [140e6, 160e6], "s_re": [1.0000005, 0],
                                   "s_im": [0, -1.0000005]})";
  CHECK(faults_of(job_request_with("/load/samples", reactive)).empty());
}

TEST_CASE("a Touchstone fault carries the number of its line") {
  const auto faults = faults_of(job_request_with(
      "/load", R"({"touchstone": "! data\n# MHZ S RI R 50\n140 0.5 -0.7\n160 0.1 x\n"})"));
  REQUIRE_FALSE(faults.empty());
  CHECK(faults[0].detail.find("line 4") != std::string::npos);
}

TEST_CASE("more than 8 elements are refused") {
  Json request = job_request();
  const Json element = request["template"]["elements"][0];
  for (int i = 0; i < 7; ++i) request["template"]["elements"].push_back(element);
  CHECK(find_fault(faults_of(request), "#/template/elements", "too_many"));
}

TEST_CASE("faults of all parts of a request are told together") {
  Json request = job_request();
  request["nam"] = 1;
  request["load"]["samples"]["s_re"][1] = 5;
  request["template"]["elements"][0]["place"] = "sideways";
  request["goals"][0]["weight"] = 0;
  request["parts"]["inductor"]["tolerance_percent"] = 400;
  request["tolerance"]["samples"] = "many";
  request["search"]["designs"] = 99;
  request["budget"]["run_seconds"] = 1e9;
  request["rank_by"] = "price";
  const std::vector<Fault> faults = faults_of(request);
  const std::string told = listed(faults);
  CAPTURE(told);
  for (const char* pointer :
       {"#/nam", "#/load/samples", "#/template/elements/0/place", "#/goals/0/weight",
        "#/parts/inductor/tolerance_percent", "#/tolerance/samples", "#/search/designs",
        "#/budget/run_seconds", "#/rank_by"}) {
    CHECK(std::count_if(faults.begin(), faults.end(),
                        [&](const Fault& fault) { return fault.pointer == pointer; }) == 1);
  }
  CHECK(faults.size() == 9);
}

TEST_CASE("fifty faults are listed, then one more says that there are others") {
  Json request = job_request();
  for (int i = 0; i < 80; ++i) request["unknown" + std::to_string(i)] = 1;
  const std::vector<Fault> faults = faults_of(request);
  REQUIRE(faults.size() == limits::kFaults + 1);
  CHECK(faults.back().code == "more_faults");
}

TEST_CASE("a pointer escapes what a JSON Pointer in a fragment must") {
  const auto faults = faults_of(job_request_with("/a~1b~0c d", "1"));
  REQUIRE(faults.size() == 1);
  CHECK(faults[0].pointer == "#/a~1b~0c%20d");
}

TEST_CASE("an analysis tells the faults of its network and sweep") {
  Json request = analysis_request();
  CHECK(decode_analysis_request(request).ok());
  request["network"][0].erase("inductance_h");
  request["network"][1]["inductance_h"] = 1e-9;
  request["to_hz"] = "200 MHz";
  request["points"] = 1;
  const auto decoded = decode_analysis_request(request);
  REQUIRE_FALSE(decoded.ok());
  CHECK(find_fault(decoded.error(), "#/network/0/inductance_h", "missing"));
  CHECK(find_fault(decoded.error(), "#/network/1/inductance_h", "unknown_member"));
  CHECK(find_fault(decoded.error(), "#/to_hz", "outside_data"));
  CHECK(find_fault(decoded.error(), "#/points", "out_of_range"));
}

}  // namespace
}  // namespace bandwright
