// The API over a real job service on a temporary store, with an executor of the test's own.
#include "server/api/api.h"

#include <doctest/doctest.h>

#include <algorithm>

#include "server/api/json.h"
#include "server/api/routes.h"
#include "tests/server/api/request_fixture.h"
#include "tests/server/jobs/service_fixture.h"

namespace bandwright {
namespace {

constexpr const char* kResult =
    R"({"engine":{"name":"bandwright","version":"0"},"stop_reason":"converged","designs":[)"
    R"({"rank":1,"meets_goals":true,"margin_db":0.5,"yield":{"value":0.9,"low":0.8,"high":0.95},)"
    R"("network":[{"place":"shunt","kind":"inductor","inductance_h":1.5e-08,"label":"15 nH"}],)"
    R"("efficiency_db":-0.1}]})";

ExecutionResult give_result(const JobRecord&, RunControl&) {
  return {true, kResult, "", ""};
}

ExecutionResult give_result_when_told(const JobRecord&, RunControl& control) {
  while (!control.should_end()) std::this_thread::sleep_for(std::chrono::milliseconds(1));
  return {true, kResult, "", ""};
}

struct Served {
  explicit Served(Executor executor)
      : store(open_store(dir.path())), jobs(*store, std::move(executor), service_options()) {
    jobs.start();
    api = make_api(jobs, {});
  }
  ~Served() { jobs.shutdown(std::chrono::milliseconds(0)); }

  // As the transport does: the head first, the body only if it is asked for.
  Response send(const std::string& method, const std::string& path, const std::string& body = "",
                std::vector<HeaderField> headers = {},
                std::vector<std::pair<std::string, std::string>> query = {}) {
    Request request;
    request.head = {method, path, std::move(query), std::move(headers), body.size(), "", "rq_1"};
    request.head.headers.push_back({"host", "127.0.0.1:8080"});
    if (!body.empty()) request.head.headers.push_back({"content-type", "application/json"});
    request.body = body;
    HeadDecision decision = api->on_head(request.head);
    if (auto* refusal = std::get_if<Response>(&decision)) return *refusal;
    std::promise<Response> answered;
    auto future = answered.get_future();
    api->on_request(std::move(request),
                    [&answered](Response response) { answered.set_value(std::move(response)); });
    return future.get();
  }

  Response create(std::vector<HeaderField> headers = {}) {
    return send("POST", "/v1/jobs", json_text(job_request()), std::move(headers));
  }

  TempDir dir;
  std::unique_ptr<Store> store;
  JobService jobs;
  std::unique_ptr<Handler> api;
};

OrderedJson body_of(const Response& response) {
  return OrderedJson::parse(response.body);
}

std::string field(const Response& response, const std::string& name) {
  for (const HeaderField& one : response.headers) {
    if (one.name == name) return one.value;
  }
  return "";
}

const std::vector<HeaderField> kWait{{"prefer", "wait=50"}};

TEST_CASE("a job is created with 202, its place and when to ask again") {
  Served served(give_result_when_told);
  const Response created = served.create();
  CHECK(created.status == 202);
  const OrderedJson body = body_of(created);
  CHECK(field(created, "Location") == "/v1/jobs/" + body["id"].get<std::string>());
  CHECK(field(created, "Retry-After") == "1");
  CHECK(field(created, "Preference-Applied") == "");
  CHECK(body["name"] == "whip");
  CHECK(body["request_digest"].get<std::string>().size() == 71);
}

TEST_CASE("a client that waits long enough gets 201 and the result") {
  Served served(give_result);
  const Response created = served.create(kWait);
  CHECK(created.status == 201);
  CHECK(field(created, "Preference-Applied") == "wait=50");
  CHECK(body_of(created)["designs"].size() == 1);
}

TEST_CASE("a client whose wait ends first gets 202 and the job goes on") {
  Served served(give_result_when_told);
  const Response created = served.create({{"prefer", "wait=1"}});
  CHECK(created.status == 202);
  CHECK(body_of(created)["done"] == false);
}

TEST_CASE("equal requests have equal digests, whatever the order of their members") {
  Served served(give_result);
  const std::string text = json_text(job_request());
  const Response first = served.send("POST", "/v1/jobs", text);
  const OrderedJson reordered = [&] {
    OrderedJson out;
    const Json request = Json::parse(text);
    for (auto it = request.rbegin(); it != request.rend(); ++it) {
      out[it.key()] = OrderedJson::parse(it.value().dump());
    }
    return out;
  }();
  const Response second = served.send("POST", "/v1/jobs", reordered.dump(2));
  CHECK(reordered.dump() != text);
  CHECK(body_of(first)["request_digest"] == body_of(second)["request_digest"]);
}

TEST_CASE("a finished job has a strong tag, and the same tag is answered with 304") {
  Served served(give_result);
  const std::string place = field(served.create(kWait), "Location");
  const Response shown = served.send("GET", place);
  CHECK(shown.status == 200);
  const std::string tag = field(shown, "ETag");
  CHECK(tag.starts_with("\""));
  const Response again = served.send("GET", place, "", {{"if-none-match", tag}});
  CHECK(again.status == 304);
  CHECK(again.body.empty());
  CHECK(field(again, "ETag") == tag);
}

TEST_CASE("a long poll is answered when the job ends") {
  Served served(give_result_when_told);
  const std::string place = field(served.create(), "Location");
  std::thread stopper([&] { CHECK(served.send("POST", place + "/stop").status == 200); });
  const Response shown = served.send("GET", place, "", kWait);
  stopper.join();
  CHECK(body_of(shown)["state"] == "succeeded");
}

TEST_CASE("a cancelled job stays cancelled, and can be removed") {
  Served served(give_result_when_told);
  const std::string place = field(served.create(), "Location");
  CHECK(served.send("DELETE", place).status == 409);
  CHECK(body_of(served.send("POST", place + "/cancel"))["state"] == "cancelled");
  CHECK(served.send("POST", place + "/cancel", "{}").status == 200);
  CHECK(served.send("POST", place + "/cancel", R"({"now": 1})").status == 422);
  CHECK(served.send("GET", place + "/designs").status == 409);
  CHECK(served.send("DELETE", place).status == 204);
  CHECK(served.send("GET", place).status == 404);
}

TEST_CASE("designs are rows, and each is there in full by its rank") {
  Served served(give_result);
  const std::string place = field(served.create(kWait), "Location");
  const OrderedJson table = body_of(served.send("GET", place + "/designs"));
  REQUIRE(table["designs"].size() == 1);
  CHECK(json_text(table["designs"][0]) ==
        R"({"rank":1,"meets_goals":true,"margin_db":0.5,"yield":0.9,"yield_low":0.8,)"
        R"("yield_high":0.95,"efficiency_db":-0.1,"part_count":1,)"
        R"("network":"shunt inductor 15 nH","link":")" +
            place + R"(/designs/1"})");
  CHECK(body_of(served.send("GET", place + "/designs/1"))["network"].size() == 1);
  for (const char* rank : {"0", "2", "-1", "x", "1x", "99999999999999999999"}) {
    CHECK(served.send("GET", place + "/designs/" + rank).status == 404);
  }
  CHECK(served.send("GET", place + "/designs", "", {}, {{"format", "csv"}}).status == 406);
}

TEST_CASE("designs of a job that has not ended are a conflict now") {
  Served served(give_result_when_told);
  const Response response = served.send("GET", field(served.create(), "Location") + "/designs");
  CHECK(response.status == 409);
  CHECK(field(response, "Retry-After") == "1");
}

TEST_CASE("jobs are listed newest first, page by page and by state") {
  Served served(give_result);
  for (int i = 0; i < 3; ++i) REQUIRE(served.create(kWait).status == 201);
  const OrderedJson first = body_of(served.send("GET", "/v1/jobs", "", {}, {{"page_size", "2"}}));
  CHECK(first["jobs"].size() == 2);
  CHECK_FALSE(first["jobs"][0].contains("designs"));
  const std::string token = first["next_page_token"];
  const OrderedJson rest =
      body_of(served.send("GET", "/v1/jobs", "", {}, {{"page_size", "2"}, {"page_token", token}}));
  CHECK(rest["jobs"].size() == 1);
  CHECK_FALSE(rest.contains("next_page_token"));
  CHECK(body_of(served.send("GET", "/v1/jobs", "", {}, {{"state", "failed"}}))["jobs"].empty());
  for (const auto& [name, value] :
       std::vector<std::pair<std::string, std::string>>{{"page_size", "0"},
                                                        {"page_size", "501"},
                                                        {"page_size", "x"},
                                                        {"state", "done"},
                                                        {"page_token", "?"}}) {
    CAPTURE(name);
    CHECK(served.send("GET", "/v1/jobs", "", {}, {{name, value}}).status == 400);
  }
}

TEST_CASE("a refused request makes no job") {
  Served served(give_result);
  CHECK(served.send("POST", "/v1/jobs", "{\"a\":1,\"a\":2}").status == 400);
  CHECK(served.send("POST", "/v1/jobs", "{}").status == 422);
  CHECK(body_of(served.send("GET", "/v1/jobs"))["jobs"].empty());
}

TEST_CASE("a problem names its status, its request and every fault") {
  Served served(give_result);
  const Response refused = served.send("POST", "/v1/jobs", R"({"laod": {}})");
  CHECK(field(refused, "Content-Type") == "application/problem+json");
  const OrderedJson problem = body_of(refused);
  CHECK(problem["status"] == 422);
  CHECK(problem["title"] == "Unprocessable Content");
  CHECK(problem["instance"] == "rq_1");
  REQUIRE(problem["errors"].size() == 4);
  CHECK(problem["errors"][0]["suggestion"] == "load");
}

TEST_CASE("what went wrong inside is not shown") {
  Served served(give_result);
  const Response response = served.api->on_fault(500, "secret of the inside", "rq_9");
  CHECK(response.body.find("secret") == std::string::npos);
  CHECK(body_of(response)["instance"] == "rq_9");
}

TEST_CASE("the service tells its links, limits and whether it takes jobs") {
  Served served(give_result);
  const OrderedJson root = body_of(served.send("GET", "/"));
  CHECK(root["routes"].size() == route_table().size());
  for (const auto& [name, link] : root["links"].items()) {
    const RouteMatch match = match_route("GET", link.get<std::string>());
    CAPTURE(name);
    CHECK_FALSE(match.allowed.empty());
  }
  CHECK(served.send("GET", "/livez").status == 200);
  CHECK(served.send("GET", "/readyz").status == 200);
  const OrderedJson service = body_of(served.send("GET", "/v1/service"));
  CHECK(service["limits"]["elements"] == 8);
  CHECK(service["series"].size() == 7);
  CHECK(service["formats"]["/v1/jobs/{id}/designs"][0] == "json");
  served.jobs.shutdown(std::chrono::milliseconds(0));
  CHECK(served.send("GET", "/readyz").status == 503);
  CHECK(served.create().status == 503);
}

TEST_CASE("a stored request that no longer reads fails its job with code request") {
  JobRecord job;
  RunControl control;
  job.request = R"({"goals": 1})";
  ExecutionResult result = execute_job(job, control, 1);
  CHECK_FALSE(result.ok);
  CHECK(result.failure_code == "request");
  job.request = "{";
  CHECK(execute_job(job, control, 1).failure_code == "request");
}

TEST_CASE("a request solved without a service is refused in the same words") {
  const SolveOnce broken = solve_once("{", 1);
  CHECK_FALSE(broken.accepted);
  CHECK(OrderedJson::parse(broken.text)["status"] == 400);
  const SolveOnce wrong = solve_once("{}", 1);
  CHECK_FALSE(wrong.accepted);
  CHECK(OrderedJson::parse(wrong.text)["errors"].size() == 3);
}

}  // namespace
}  // namespace bandwright
