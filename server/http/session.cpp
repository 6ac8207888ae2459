#include "server/http/session.h"

#include <spdlog/logger.h>

#include <algorithm>
#include <boost/asio/co_spawn.hpp>
#include <boost/asio/post.hpp>
#include <exception>
#include <utility>
#include <variant>

#include "server/http/field_list.h"
#include "server/http/head_validator.h"
#include "server/http/log_line.h"
#include "server/http/response_head.h"

namespace bandwright {
namespace asio = boost::asio;
using Clock = Connection::Clock;
using Outcome = Connection::Outcome;

namespace {

// Runs `call`; returns what it threw, as text.
template <class Call>
std::optional<std::string> failure_of(const Call& call) {
  try {
    call();
  } catch (const std::exception& e) {
    return e.what();
  } catch (...) {
    return "something that is no standard exception";
  }
  return std::nullopt;
}

}  // namespace

// One request on its way: what the log and the response need to know of it.
struct Session::Exchange {
  ParsedHead parsed;
  std::string id;
  std::string method = "-";
  std::string path = "-";
  std::string body;
  Clock::time_point began = Clock::now();
  bool last = false;
};

// The session's end of a Respond: the first response counts, and losing the last copy without one
// counts as "none".
class Session::Responder {
 public:
  Responder(std::weak_ptr<Session> session, std::shared_ptr<ResponseGate> gate)
      : session_(std::move(session)), gate_(std::move(gate)) {}
  ~Responder() { put({}); }
  Responder(const Responder&) = delete;
  Responder& operator=(const Responder&) = delete;

  void put(Delivery delivery) {
    if (used_.exchange(true)) return;
    gate_->pass([this, &delivery] {
      const std::shared_ptr<Session> session = session_.lock();
      if (!session) return;
      asio::post(session->strand_, [weak = session_, delivery = std::move(delivery)]() mutable {
        if (const auto open = weak.lock()) open->deliver(std::move(delivery));
      });
    });
  }

 private:
  const std::weak_ptr<Session> session_;
  const std::shared_ptr<ResponseGate> gate_;
  std::atomic<bool> used_{false};
};

Session::Session(asio::ip::tcp::socket socket, SessionContext& context, std::string peer,
                 PeerLimits::Admission admission)
    : context_(context),
      peer_(std::move(peer)),
      admission_(admission),
      strand_(socket.get_executor()),
      connection_(std::make_shared<Connection>(std::move(socket))) {}

Session::~Session() {
  context_.peers.release(peer_, admission_);
  context_.sessions.remove(this);
}

void Session::start() {
  context_.sessions.add(shared_from_this());
  const auto run = [self = shared_from_this()] {
    return self->admission_ == PeerLimits::Admission::served ? self->serve()
                                                             : self->answer_refused();
  };
  asio::co_spawn(strand_, run, [self = shared_from_this()](std::exception_ptr error) {
    self->connection_->close();
    if (!error) return;
    const auto failure = failure_of([&error] { std::rethrow_exception(error); });
    self->context_.logger->error(
        LogLine("connection failed").add("remote", self->peer_).add("detail", *failure).text());
  });
}

void Session::drain() {
  asio::post(strand_, [self = shared_from_this()] {
    self->draining_ = true;
    if (self->idle_) self->connection_->close();
  });
}

void Session::close() {
  asio::post(strand_, [self = shared_from_this()] { self->connection_->close(); });
}

asio::awaitable<void> Session::serve() {
  int number = 1;
  while (co_await exchange(number)) ++number;
  co_await connection_->linger();
}

asio::awaitable<void> Session::answer_refused() {
  Exchange refused;
  refused.id = context_.ids.next();
  Response busy = fault(503, "too many open connections", refused);
  const auto is_retry = [](const HeaderField& f) { return ascii_lower(f.name) == "retry-after"; };
  if (std::none_of(busy.headers.begin(), busy.headers.end(), is_retry)) {
    busy.headers.push_back({"Retry-After", "1"});
  }
  co_await send(refused, std::move(busy));
  co_await connection_->linger();
}

asio::awaitable<bool> Session::exchange(int number) {
  const ServerOptions& options = context_.options;
  idle_ = !connection_->has_input();
  if (draining_ && idle_) co_return false;
  const Clock::time_point idle_end = Clock::now() + options.idle_deadline;
  const Outcome read =
      co_await connection_->read_head(options.head, idle_end, options.head_deadline);
  idle_ = false;
  if (read == Outcome::closed || read == Outcome::idle) co_return false;

  Exchange one;
  one.id = context_.ids.next();
  one.last = number >= options.requests_per_connection;
  HeadFault found;
  if (read == Outcome::timed_out) found = {408, "the head did not arrive in time"};
  if (read == Outcome::malformed) found = {400, "a line does not end in CRLF, or a byte is NUL"};
  if (read == Outcome::too_large) {
    found = connection_->request_line_ended() ? HeadFault{431, "the head is too long"}
                                              : HeadFault{414, "the target is too long"};
  }
  if (read == Outcome::complete) {
    Result<ParsedHead, HeadFault> parsed = parse_head(connection_->head(), options.head);
    if (parsed) {
      one.parsed = std::move(*parsed);
      co_return co_await answer(one);
    }
    found = parsed.error();
  }
  Response refusal = fault(found.status, found.detail, one);
  co_return co_await send(one, std::move(refusal));
}

asio::awaitable<bool> Session::answer(Exchange& one) {
  RequestHead& head = one.parsed.head;
  head.request_id = one.id;
  head.remote_address = peer_;
  one.method = head.method;
  one.path = head.path;
  if (head.method == "HEAD") head.method = "GET";
  if (!one.parsed.keep_alive) one.last = true;

  std::optional<Response> response = co_await take_body(one);
  if (!response) response = co_await run_handler(one);
  if (!response) co_return false;
  co_return co_await send(one, std::move(*response));
}

// Reads the body, or returns the response that ends the matter before it is read.
asio::awaitable<std::optional<Response>> Session::take_body(Exchange& one) {
  HeadDecision decision = AcceptBody{0};
  const auto failure = failure_of([&] { decision = context_.handler.on_head(one.parsed.head); });
  if (failure) {
    context_.logger->error(
        LogLine("handler failed").add("request_id", one.id).add("detail", *failure).text());
    co_return fault(500, "the request could not be handled", one);
  }
  const std::uint64_t length = one.parsed.head.content_length;
  if (Response* early = std::get_if<Response>(&decision)) {
    // Nobody will read the body, so the next request cannot be found behind it.
    if (length > 0) early->close = true;
    co_return std::move(*early);
  }
  const std::uint64_t most = std::get<AcceptBody>(decision).max_bytes;
  if (length > most) {
    co_return fault(413, "the body may have at most " + std::to_string(most) + " bytes", one);
  }
  const Clock::time_point deadline = Clock::now() + context_.options.body_deadline;
  if (one.parsed.expect_continue && length > 0 && !connection_->has_input()) {
    const Outcome sent = co_await connection_->write("HTTP/1.1 100 Continue\r\n\r\n", {}, deadline);
    if (sent != Outcome::complete) co_return fault(408, "the client does not read", one);
  }
  const Outcome read = co_await connection_->read_body(length, deadline, one.body);
  if (read == Outcome::complete) co_return std::nullopt;
  if (read == Outcome::timed_out) co_return fault(408, "the body did not arrive in time", one);
  co_return fault(400, "the connection ended inside the body", one);
}

asio::awaitable<std::optional<Response>> Session::run_handler(Exchange& one) {
  delivery_.reset();
  submit(Request{one.parsed.head, std::move(one.body)});
  while (!delivery_) {
    const Outcome waited = co_await connection_->wait(context_.options.half_closed_wait);
    if (waited != Outcome::complete && !delivery_) {
      // 499: the client went away; for the log only.
      log_access(one, 499, 0);
      co_return std::nullopt;
    }
  }
  if (delivery_->response) co_return std::move(delivery_->response);
  co_return fault(500, "the request could not be handled", one);
}

void Session::submit(Request request) {
  auto responder = std::make_shared<Responder>(weak_from_this(), context_.gate);
  asio::post(context_.workers, [&context = context_, request = std::move(request),
                                responder = std::move(responder)]() mutable {
    const std::string id = request.head.request_id;
    const Respond respond = [responder](Response response) {
      responder->put({std::move(response)});
    };
    const auto failure =
        failure_of([&] { context.handler.on_request(std::move(request), respond); });
    if (!failure) return;
    context.logger->error(
        LogLine("handler failed").add("request_id", id).add("detail", *failure).text());
    responder->put({});
  });
}

void Session::deliver(Delivery delivery) {
  delivery_ = std::move(delivery);
  connection_->wake();
}

asio::awaitable<bool> Session::send(Exchange& one, Response response) {
  if (response.status < 200 || response.status > 599) {
    response = fault(500, "the request could not be handled", one);
  }
  if (response.close || draining_ || context_.draining) one.last = true;
  const std::string head =
      response_head(response, {!one.last, one.id, std::chrono::system_clock::now()});
  const bool with_body = one.method != "HEAD" && status_has_body(response.status);
  const std::string_view body = with_body ? std::string_view(response.body) : std::string_view();
  const Outcome sent =
      co_await connection_->write(head, body, Clock::now() + context_.options.write_deadline);
  log_access(one, response.status, body.size());
  co_return sent == Outcome::complete && !one.last;
}

Response Session::fault(int status, std::string_view detail, const Exchange& one) {
  Response response;
  if (failure_of([&] { response = context_.handler.on_fault(status, detail, one.id); })) {
    response = Response{status, {}, {}, true};
  }
  response.close = true;
  return response;
}

void Session::log_access(const Exchange& one, int status, std::size_t bytes) {
  const auto took = std::chrono::duration_cast<std::chrono::milliseconds>(Clock::now() - one.began);
  context_.logger->info(LogLine("request")
                            .add("request_id", one.id)
                            .add("remote", peer_)
                            .add("method", one.method)
                            .add("path", one.path)
                            .add("status", status)
                            .add("ms", took.count())
                            .add("bytes", static_cast<std::int64_t>(bytes))
                            .text());
}

}  // namespace bandwright
