#include "server/api/service_handlers.h"

#include "server/api/encode_report.h"
#include "server/api/json_response.h"
#include "server/api/kind_names.h"
#include "server/api/limits.h"
#include "server/api/option_names.h"
#include "server/api/problem_details.h"

namespace bandwright {
namespace {

template <class Words>
OrderedJson word_array(const Words& words) {
  OrderedJson out = OrderedJson::array();
  for (const std::string_view word : words) out.push_back(word);
  return out;
}

OrderedJson limits_json(const ApiOptions& options) {
  OrderedJson out;
  out["body_bytes"] = options.max_body_bytes;
  out["json_depth"] = limits::kJsonDepth;
  out["json_values"] = limits::kJsonValues;
  out["string_bytes"] = limits::kStringBytes;
  out["touchstone_bytes"] = limits::kTouchstoneBytes;
  out["load_points"] = limits::kLoadPoints;
  out["load_states"] = limits::kLoadStates;
  out["goals"] = limits::kGoals;
  out["elements"] = limits::kElements;
  out["topologies"] = limits::kTopologies;
  out["listed_values"] = limits::kListedValues;
  out["samples"] = limits::kToleranceSamples;
  out["designs"] = limits::kDesigns;
  out["sweep_points"] = limits::kSweepPoints;
  out["run_seconds"] = limits::kRunSeconds;
  out["run_seconds_default"] = limits::kRunSecondsDefault;
  out["wait_seconds"] = limits::kWaitSeconds;
  out["page_size"] = limits::kPageSizeMost;
  return out;
}

OrderedJson kinds_json() {
  OrderedJson out = OrderedJson::array();
  for (const KindNames& names : kKindNames) {
    OrderedJson kind;
    kind["kind"] = kind_name(names.kind);
    kind["values"] = OrderedJson::array({names.value});
    out.push_back(std::move(kind));
  }
  return out;
}

OrderedJson series_json() {
  OrderedJson out = OrderedJson::array();
  for (const Series series : all_series()) out.push_back(series_name(series));
  return out;
}

OrderedJson formats_json() {
  OrderedJson out = OrderedJson::object();
  for (const Route& route : route_table()) {
    if (!route.formats.empty()) out[std::string(route.pattern)] = word_array(route.formats);
  }
  return out;
}

}  // namespace

void show_root(const ApiContext&, const Call&, const Respond& respond) {
  OrderedJson out = engine_json();
  out["links"]["openapi"] = "/openapi.json";
  out["links"]["service"] = "/v1/service";
  out["links"]["jobs"] = "/v1/jobs";
  out["links"]["analyses"] = "/v1/analyses";
  out["routes"] = OrderedJson::array();
  for (const Route& route : route_table()) {
    OrderedJson one;
    one["method"] = route.method;
    one["path"] = route.pattern;
    one["summary"] = route.summary;
    out["routes"].push_back(std::move(one));
  }
  respond(json_response(200, json_text(out)));
}

void show_liveness(const ApiContext&, const Call&, const Respond& respond) {
  respond(json_response(200, R"({"status":"alive"})"));
}

void show_readiness(const ApiContext& context, const Call& call, const Respond& respond) {
  if (context.jobs.accepting()) return respond(json_response(200, R"({"status":"ready"})"));
  respond(refusal_response(Refusal::shutting_down, call.request.head.request_id));
}

void show_openapi(const ApiContext&, const Call&, const Respond& respond) {
  respond(json_response(200, std::string(openapi_json())));
}

void show_service(const ApiContext& context, const Call&, const Respond& respond) {
  OrderedJson out = engine_json();
  out["limits"] = limits_json(context.options);
  out["kinds"] = kinds_json();
  out["places"] = word_array(std::array{place_name(Place::series), place_name(Place::shunt)});
  out["series"] = series_json();
  out["goal_quantities"] = word_array(std::array{quantity_name(GoalQuantity::return_loss),
                                                 quantity_name(GoalQuantity::transducer_gain)});
  out["distributions"] = word_array(kDistributionWords);
  out["efforts"] = word_array(kEffortWords);
  out["rank_by"] = word_array(kRankWords);
  out["formats"] = formats_json();
  respond(json_response(200, json_text(out)));
}

}  // namespace bandwright
