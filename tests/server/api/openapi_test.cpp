// The interface document says what is served, no more and no less.
#include <doctest/doctest.h>

#include <algorithm>
#include <functional>
#include <set>
#include <string>

#include "server/api/api.h"
#include "server/api/decode_request.h"
#include "server/api/json.h"
#include "server/api/routes.h"

namespace bandwright {
namespace {

const Json& document() {
  static const Json parsed = Json::parse(openapi_json());
  return parsed;
}

// Calls `visit` with every value of `json` that is called "$ref".
void each_reference(const Json& json, const std::function<void(const std::string&)>& visit) {
  if (json.is_object() && json.contains("$ref")) visit(json["$ref"]);
  for (const Json& child : json) {
    if (child.is_structured()) each_reference(child, visit);
  }
}

std::set<std::string> resolved_properties(const std::string& schema) {
  std::set<std::string> names;
  const Json& properties = document()["components"]["schemas"][schema]["properties"];
  for (const auto& [name, unused] : properties.items()) names.insert(name);
  return names;
}

const Json& request_examples(const char* path) {
  return document()["paths"][path]["post"]["requestBody"]["content"]["application/json"]
                   ["examples"];
}

TEST_CASE("every route is in the document and every operation of the document is a route") {
  CHECK(document()["openapi"] == "3.1.1");
  std::set<std::string> documented;
  for (const auto& [path, item] : document()["paths"].items()) {
    for (const auto& [method, operation] : item.items()) {
      if (method == "parameters") continue;
      std::string upper = method;
      std::transform(upper.begin(), upper.end(), upper.begin(), ::toupper);
      documented.insert(upper + " " + path);
    }
  }
  std::set<std::string> served;
  for (const Route& route : route_table()) {
    served.insert(std::string(route.method) + " " + std::string(route.pattern));
  }
  CHECK(documented == served);
}

TEST_CASE("the document has the query parameters and formats of each route") {
  for (const Route& route : route_table()) {
    std::string method(route.method);
    std::transform(method.begin(), method.end(), method.begin(), ::tolower);
    const Json& operation = document()["paths"][std::string(route.pattern)][method];
    std::set<std::string> documented;
    for (Json parameter : operation.value("parameters", Json::array())) {
      if (parameter.contains("$ref")) {
        const std::string target = parameter["$ref"].get<std::string>().substr(1);
        parameter = document().at(Json::json_pointer(target));
      }
      if (parameter["in"] != "query") continue;
      documented.insert(parameter["name"].get<std::string>());
      if (parameter["name"] != "format") continue;
      CHECK(parameter["schema"]["enum"] == Json(route.formats));
    }
    CHECK(documented == std::set<std::string>(route.query.begin(), route.query.end()));
    CHECK(operation["summary"] == route.summary);
    CHECK(operation.contains("requestBody") == (route.body != BodyUse::none));
  }
}

TEST_CASE("every reference of the document leads somewhere") {
  int references = 0;
  each_reference(document(), [&](const std::string& reference) {
    CAPTURE(reference);
    REQUIRE(reference.starts_with("#/"));
    CHECK(document().contains(Json::json_pointer(reference.substr(1))));
    ++references;
  });
  CHECK(references > 50);
}

TEST_CASE("every request schema refuses unknown members, as the decoder does") {
  for (const char* name :
       {"JobRequest", "AnalysisRequest", "Load", "LoadState", "Source", "Samples", "Circuit",
        "Template", "TemplateElement", "GivenElement", "Parts", "InductorPart", "CapacitorPart",
        "ResistorPart", "Goal", "Tolerance"}) {
    CAPTURE(name);
    CHECK(document()["components"]["schemas"][name]["additionalProperties"] == false);
  }
}

TEST_CASE("the decoder allows the members the document has, and no others") {
  Json job;
  job["?"] = 1;
  const auto faults = decode_job_request(job);
  REQUIRE_FALSE(faults.ok());
  const auto& allowed = faults.error().front().allowed;
  CHECK(std::set<std::string>(allowed.begin(), allowed.end()) == resolved_properties("JobRequest"));
  const auto analysis_faults = decode_analysis_request(job);
  REQUIRE_FALSE(analysis_faults.ok());
  const auto& analysis_allowed = analysis_faults.error().front().allowed;
  CHECK(std::set<std::string>(analysis_allowed.begin(), analysis_allowed.end()) ==
        resolved_properties("AnalysisRequest"));
}

TEST_CASE("every example request of the document is accepted") {
  const Json& jobs = request_examples("/v1/jobs");
  CHECK(jobs.size() == 3);
  for (const auto& [name, example] : jobs.items()) {
    const auto decoded = decode_job_request(example["value"]);
    CAPTURE(name);
    const std::string fault =
        decoded ? "" : decoded.error().front().pointer + " " + decoded.error().front().detail;
    CHECK(fault == "");
  }
  const Json& analyses = request_examples("/v1/analyses");
  CHECK(analyses.size() == 1);
  for (const auto& [name, example] : analyses.items()) {
    CAPTURE(name);
    CHECK(decode_analysis_request(example["value"]).ok());
  }
}

TEST_CASE("the example of a fault is what that fault gives") {
  const Json& example = document()["paths"]["/v1/jobs"]["post"]["responses"]["422"]["content"]
                                  ["application/problem+json"]["examples"]["outsideData"]["value"];
  Json request = request_examples("/v1/jobs")["whip"]["value"];
  request["load"]["touchstone"] = "# MHZ S RI R 50\n140 0.5473 -0.7215\n160 0.1130 -0.8450\n";
  request["goals"][0]["to_hz"] = "170 MHz";
  const SolveOnce refused = solve_once(json_text(request), 1);
  REQUIRE_FALSE(refused.accepted);
  const Json problem = Json::parse(refused.text);
  CHECK(problem["status"] == example["status"]);
  CHECK(problem["title"] == example["title"]);
  CHECK(problem["errors"] == example["errors"]);
}

}  // namespace
}  // namespace bandwright
