#include "server/api/encode_design.h"

#include <cmath>
#include <stdexcept>

#include "server/api/kind_names.h"
#include "server/api/option_names.h"
#include "solver/base/quantity.h"

namespace bandwright {
namespace {

constexpr int kLabelDigits = 4;

double finite(double value) {
  if (!std::isfinite(value)) throw std::logic_error("a figure of a design is not finite");
  return value;
}

OrderedJson finite_array(const std::vector<double>& values) {
  OrderedJson array = OrderedJson::array();
  for (const double value : values) array.push_back(finite(value));
  return array;
}

// 0.07 is not exactly 7 per cent of one; the percentage shown is the one that was asked for.
double percent(double relative) {
  constexpr double kSteps = 1e9;
  return std::round(relative * 100 * kSteps) / kSteps;
}

OrderedJson element_json(const Slot& slot, double value) {
  const KindNames& names = names_of(slot.kind);
  OrderedJson element;
  element["place"] = place_name(slot.place);
  element["kind"] = kind_name(slot.kind);
  element[std::string(names.value)] = finite(value);
  element["label"] = format_quantity(value, kind_unit(slot.kind), kLabelDigits);
  if (slot.part.tolerance.absolute > 0) {
    element[std::string(names.tolerance)] = finite(slot.part.tolerance.absolute);
  } else {
    element["tolerance_percent"] = finite(percent(slot.part.tolerance.relative));
  }
  return element;
}

OrderedJson ranking_json(const Ranking& ranking) {
  OrderedJson out;
  out["by"] = kRankWords[static_cast<std::size_t>(ranking.by)];
  out["value"] = finite(ranking.value);
  return out;
}

OrderedJson yield_json(const Yield& yield) {
  OrderedJson out;
  out["value"] = finite(yield.value);
  out["low"] = finite(yield.low);
  out["high"] = finite(yield.high);
  out["confidence"] = finite(yield.confidence);
  out["samples"] = yield.samples;
  out["distribution"] = distribution_name(yield.distribution);
  return out;
}

std::string_view bound_name(GoalBound bound) {
  switch (bound) {
    case GoalBound::at_least:
      return "at_least";
    case GoalBound::at_most:
      return "at_most";
    case GoalBound::best:
      break;
  }
  return "best";
}

OrderedJson goal_json(const Goal& goal, const GoalResult& result, const Problem& problem) {
  OrderedJson out;
  out["quantity"] = quantity_name(goal.quantity);
  out["from_hz"] = finite(goal.from_hz);
  out["to_hz"] = finite(goal.to_hz);
  out["bound"] = bound_name(goal.bound);
  if (goal.bound != GoalBound::best) out["bound_db"] = finite(goal.bound_db);
  out["value_db"] = finite(result.value_db);
  out["at_hz"] = finite(result.at_hz);
  if (problem.loads.size() > 1) {
    out["load"] = problem.loads.at(static_cast<std::size_t>(result.load)).name;
  }
  out["margin_db"] = finite(result.margin_db);
  out["met"] = result.met;
  return out;
}

OrderedJson goals_json(const Design& design, const Problem& problem) {
  OrderedJson goals = OrderedJson::array();
  for (std::size_t i = 0; i < design.goals.size(); ++i) {
    goals.push_back(goal_json(problem.goals.at(i), design.goals[i], problem));
  }
  return goals;
}

OrderedJson tolerance_json(const Design& design) {
  OrderedJson out;
  const MarginQuantiles& quantiles = *design.margin_quantiles;
  out["margin_db"]["p01"] = finite(quantiles.p01);
  out["margin_db"]["p05"] = finite(quantiles.p05);
  out["margin_db"]["p50"] = finite(quantiles.p50);
  out["margin_db"]["p95"] = finite(quantiles.p95);
  out["sensitivity"] = OrderedJson::array();
  for (const ElementShare& share : design.sensitivity) {
    OrderedJson one;
    one["element"] = share.element;
    one["share"] = finite(share.share);
    out["sensitivity"].push_back(std::move(one));
  }
  return out;
}

OrderedJson stress_json(const std::vector<ElementStress>& stress) {
  OrderedJson out = OrderedJson::array();
  for (const ElementStress& element : stress) {
    OrderedJson one;
    one["element"] = element.element;
    one["peak_v"] = finite(element.peak_v);
    one["peak_a"] = finite(element.peak_a);
    one["dissipated_w"] = finite(element.dissipated_w);
    out.push_back(std::move(one));
  }
  return out;
}

OrderedJson response_json(const ResponseTable& response) {
  OrderedJson out;
  out["frequency_hz"] = finite_array(response.frequency_hz);
  out["return_loss_db"] = finite_array(response.return_loss_db);
  out["s11_re"] = finite_array(response.s11_re);
  out["s11_im"] = finite_array(response.s11_im);
  out["transducer_gain_db"] = finite_array(response.transducer_gain_db);
  out["return_loss_p05_db"] = finite_array(response.return_loss_p05_db);
  out["return_loss_p95_db"] = finite_array(response.return_loss_p95_db);
  return out;
}

}  // namespace

OrderedJson network_json(const Topology& topology, const Values& values) {
  OrderedJson network = OrderedJson::array();
  for (std::size_t i = 0; i < topology.slots.size(); ++i) {
    network.push_back(element_json(topology.slots[i], values.at(i)));
  }
  return network;
}

OrderedJson design_json(const Design& design, const Problem& problem) {
  OrderedJson out;
  out["meets_goals"] = design.meets_goals;
  out["margin_db"] = finite(design.margin_db);
  if (design.ranking) out["ranking"] = ranking_json(*design.ranking);
  if (design.yield) out["yield"] = yield_json(*design.yield);
  out["network"] = network_json(design.topology, design.values);
  out["goals"] = goals_json(design, problem);
  if (design.ideal) {
    out["ideal"]["margin_db"] = finite(design.ideal->margin_db);
    out["ideal"]["network"] = network_json(design.topology, design.ideal->values);
    out["ideal"]["agreeing_starts"] = design.agreeing_starts;
  }
  if (design.margin_quantiles) out["tolerance"] = tolerance_json(design);
  out["stress"] = stress_json(design.stress);
  out["efficiency_db"] = finite(design.efficiency_db);
  out["response"] = response_json(design.response);
  return out;
}

std::string network_sentence(const OrderedJson& network) {
  std::string out;
  for (const OrderedJson& element : network) {
    if (!out.empty()) out += ", ";
    for (const char* name : {"place", "kind", "label"}) {
      out += element.at(name).get_ref<const std::string&>();
      out += ' ';
    }
    out.pop_back();
  }
  return out;
}

}  // namespace bandwright
