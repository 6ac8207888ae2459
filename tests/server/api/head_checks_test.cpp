// What the head of a request decides.
#include "server/api/head_checks.h"

#include <doctest/doctest.h>

#include <string>

#include "server/api/nearest_name.h"
#include "server/api/negotiation.h"
#include "server/api/preference.h"

namespace bandwright {
namespace {

RequestHead head_of(std::string method, std::string path) {
  RequestHead head;
  head.method = std::move(method);
  head.path = std::move(path);
  head.headers = {{"host", "localhost:8080"}};
  return head;
}

RequestHead post_job() {
  RequestHead head = head_of("POST", "/v1/jobs");
  head.headers.push_back({"content-type", "application/json"});
  head.content_length = 10;
  return head;
}

// The status of the refusal, 0 for none.
int refused(const RequestHead& head) {
  const ApiOptions options;
  const auto refusal = check_head(head, match_route(head.method, head.path), options);
  return refusal ? refusal->status : 0;
}

RequestHead with(RequestHead head, std::string name, std::string value) {
  head.headers.push_back({std::move(name), std::move(value)});
  return head;
}

std::optional<int> wait_of(const std::string& value) {
  return preferred_wait_s(with(head_of("GET", "/"), "prefer", value));
}

TEST_CASE("a sound head passes") {
  CHECK(refused(post_job()) == 0);
  CHECK(refused(head_of("GET", "/v1/jobs/jb_1/designs/2")) == 0);
}

TEST_CASE("only the hosts served are answered, with any port") {
  const std::vector<std::string> names{"localhost", "[::1]"};
  for (const char* host : {"localhost", "LOCALHOST:80", "[::1]", "[::1]:8080"}) {
    CHECK(host_is_served(host, names));
  }
  for (const char* host : {"", "example.org", "localhost.example.org", "[::2]", "xlocalhost"}) {
    CHECK_FALSE(host_is_served(host, names));
  }
  RequestHead head = post_job();
  head.headers[0].value = "example.org";
  CHECK(refused(head) == 421);
}

TEST_CASE("a foreign page may read and not change") {
  CHECK(refused(with(post_job(), "origin", "http://example.org")) == 403);
  CHECK(refused(with(post_job(), "origin", "null")) == 403);
  CHECK(refused(with(post_job(), "origin", "http://localhost:8081")) == 403);
  CHECK(refused(with(post_job(), "origin", "http://localhost:8080")) == 0);
  CHECK(refused(with(head_of("GET", "/"), "origin", "http://example.org")) == 0);
  CHECK(is_own_origin("https://localhost", "localhost:443"));
}

TEST_CASE("no such path is 404, another method 405 with what is allowed") {
  CHECK(refused(head_of("GET", "/v1/job")) == 404);
  CHECK(refused(head_of("GET", "/v1/jobs/")) == 404);
  CHECK(refused(head_of("GET", "/v1/jobs//designs")) == 404);
  const RequestHead head = head_of("PUT", "/v1/jobs/jb_1");
  const auto refusal = check_head(head, match_route(head.method, head.path), {});
  REQUIRE(refusal);
  CHECK(refusal->status == 405);
  CHECK(refusal->headers.back().name == "Allow");
  CHECK(refusal->headers.back().value == "GET, DELETE");
}

TEST_CASE("a query parameter must be known and given once") {
  RequestHead head = head_of("GET", "/v1/jobs");
  head.query = {{"state", "queued"}, {"page_size", "3"}};
  CHECK(refused(head) == 0);
  head.query = {{"stat", "queued"}};
  CHECK(refused(head) == 400);
  head.query = {{"state", "queued"}, {"state", "queued"}};
  CHECK(refused(head) == 400);
}

TEST_CASE("a body must be JSON in UTF-8, as it is") {
  RequestHead head = head_of("POST", "/v1/jobs");
  CHECK(refused(head) == 415);
  CHECK(refused(with(head, "content-type", "text/plain")) == 415);
  CHECK(refused(with(head, "content-type", "application/json; charset=latin1")) == 415);
  CHECK(refused(with(head, "content-type", "Application/JSON; charset=\"UTF-8\"")) == 0);
  CHECK(refused(with(post_job(), "content-encoding", "gzip")) == 415);
  CHECK(refused(head_of("POST", "/v1/jobs/jb_1/cancel")) == 0);
}

TEST_CASE("an answer the client does not accept is 406, and format wins over Accept") {
  CHECK(refused(with(post_job(), "accept", "text/html")) == 406);
  CHECK(refused(with(post_job(), "accept", "text/html, */*;q=0.1")) == 0);
  CHECK(refused(with(post_job(), "accept", "application/json;q=0, */*")) == 406);
  RequestHead head = with(head_of("GET", "/v1/jobs/jb_1/designs"), "accept", "text/csv");
  CHECK(refused(head) == 406);
  head.query = {{"format", "json"}};
  CHECK(refused(head) == 0);
  head.query = {{"format", "pdf"}};
  CHECK(refused(head) == 406);
}

TEST_CASE("a body at the limit is read and one byte more is not") {
  RequestHead head = post_job();
  head.content_length = ApiOptions{}.max_body_bytes;
  CHECK(refused(head) == 0);
  head.content_length += 1;
  CHECK(refused(head) == 413);
}

TEST_CASE("checks come in order: host, origin, route, type") {
  RequestHead head = head_of("PUT", "/nowhere");
  head.headers[0].value = "example.org";
  head.headers.push_back({"origin", "null"});
  CHECK(refused(head) == 421);
  head.headers[0].value = "localhost";
  CHECK(refused(head) == 403);
  head.headers.pop_back();
  CHECK(refused(head) == 404);
}

TEST_CASE("the wait a client prefers is read, capped, and ignored when it makes no sense") {
  CHECK(wait_of("wait=10") == 10);
  CHECK(wait_of("respond-async, WAIT = \"10\"; x=1") == 10);
  CHECK(wait_of("wait=55") == 55);
  CHECK(wait_of("wait=56") == 55);
  CHECK(wait_of("wait=99999999999999") == 55);
  CHECK(wait_of("wait=3, wait=9") == 3);
  for (const char* odd : {"wait", "wait=", "wait=-1", "wait=1.5", "wait=x", "wait=0", "wait=1s"}) {
    CAPTURE(odd);
    CHECK_FALSE(wait_of(odd).has_value());
  }
}

TEST_CASE("If-None-Match names a tag, one of several, or any") {
  const auto names = [](const char* value) {
    return none_match_names(with(head_of("GET", "/"), "if-none-match", value), "\"3\"");
  };
  CHECK(names("\"3\""));
  CHECK(names("\"1\", W/\"3\""));
  CHECK(names("*"));
  CHECK_FALSE(names("\"31\""));
  CHECK_FALSE(names("3"));
}

TEST_CASE("the nearest name is offered only when it is near") {
  constexpr std::string_view kNames[] = {"template", "tolerance_percent", "values"};
  CHECK(nearest_name("templat", kNames) == "template");
  CHECK(nearest_name("Vlaues", kNames) == "values");
  CHECK(nearest_name("tolerance", kNames) == "tolerance_percent");
  CHECK(nearest_name("bandwidth", kNames) == "");
  CHECK(nearest_name("", kNames) == "");
  CHECK(edit_distance("kitten", "sitting") == 3);
}

}  // namespace
}  // namespace bandwright
