#include "server/api/decode_goals.h"

#include <string>

#include "server/api/decode_one_port.h"
#include "server/api/limits.h"

namespace bandwright {
namespace {

constexpr double kDecibelsMost = 200;

struct Bound {
  GoalBound bound = GoalBound::best;
  double db = 0;
};

// A return loss is positive, the gain of a passive network at most 0 dB: the other sign is a slip.
std::optional<double> decode_bound_db(const Node& node, GoalQuantity quantity) {
  const bool loss = quantity == GoalQuantity::return_loss;
  const auto value = node.quantity(Unit::decibel, {-kDecibelsMost, kDecibelsMost});
  if (!value) return std::nullopt;
  if (loss ? *value >= 0 : *value <= 0) return value;
  const std::string meant = format_quantity(-*value, Unit::decibel, 6);
  node.fault("wrong_sign",
             loss ? "a return loss is not negative: 20 dB means that 1 % of the power returns"
                  : "the transducer gain of a passive network is at most 0 dB",
             {loss ? "0 dB to 200 dB" : "-200 dB to 0 dB"}, meant);
  return std::nullopt;
}

std::optional<Bound> decode_bound(const Node& goal, std::optional<GoalQuantity> quantity) {
  const auto least = goal.find("at_least_db");
  const auto most = goal.find("at_most_db");
  if (least && most) {
    most->fault("conflict", "at_least_db and at_most_db are both given; use one goal for each");
    return std::nullopt;
  }
  if (!least && !most) return Bound{};
  if (!quantity) return std::nullopt;
  const auto db = decode_bound_db(least ? *least : *most, *quantity);
  if (!db) return std::nullopt;
  return Bound{least ? GoalBound::at_least : GoalBound::at_most, *db};
}

std::optional<double> decode_edge(const Node& goal, std::string_view name) {
  return goal.required_quantity(name, "an edge of the goal's band", Unit::hertz, kFrequencyHz);
}

std::optional<GoalQuantity> decode_quantity(const Node& goal) {
  const auto node = goal.require("quantity", "return_loss or transducer_gain");
  if (!node) return std::nullopt;
  const auto index = node->choice(
      {quantity_name(GoalQuantity::return_loss), quantity_name(GoalQuantity::transducer_gain)});
  if (!index) return std::nullopt;
  return *index == 0 ? GoalQuantity::return_loss : GoalQuantity::transducer_gain;
}

std::optional<double> decode_weight(const Node& goal) {
  if (const auto node = goal.find("weight")) return node->quantity(Unit::none, {1e-6, 1e6});
  goal.assume_default("weight", "1");
  return 1.0;
}

std::optional<Goal> decode_goal(const Node& node) {
  if (!node.expect_object(
          {"quantity", "from_hz", "to_hz", "at_least_db", "at_most_db", "weight"})) {
    return std::nullopt;
  }
  const auto quantity = decode_quantity(node);
  const auto from_hz = decode_edge(node, "from_hz");
  const auto to_hz = decode_edge(node, "to_hz");
  const auto bound = decode_bound(node, quantity);
  const auto weight = decode_weight(node);
  if (from_hz && to_hz && *from_hz > *to_hz) {
    node.member_fault("to_hz", "reversed",
                      "the band ends at " + shown(*to_hz, Unit::hertz) +
                          ", below where it begins, " + shown(*from_hz, Unit::hertz));
    return std::nullopt;
  }
  if (!quantity || !from_hz || !to_hz || !bound || !weight) return std::nullopt;
  return Goal{*quantity, bound->bound, *from_hz, *to_hz, bound->db, *weight};
}

bool check_source_resistance(const Node& node, double frequency_hz, const OnePort& source) {
  if (source_resistance_ohm(source, frequency_hz) > 0) return true;
  node.fault("source_without_resistance", "the source has no resistance at " +
                                              shown(frequency_hz, Unit::hertz) +
                                              ", so no power is available from it");
  return false;
}

bool check_edge(const Node& node, double frequency_hz, const std::optional<OnePort>& source,
                const std::optional<std::vector<LoadState>>& loads) {
  bool covered = true;
  if (source) {
    covered = check_covered(node, frequency_hz, *source, "the source") &&
              check_source_resistance(node, frequency_hz, *source);
  }
  if (!loads) return covered;
  for (const LoadState& state : *loads) {
    const std::string noun = loads->size() > 1 ? "load \"" + state.name + "\"" : "the load";
    covered = check_covered(node, frequency_hz, state.port, noun) && covered;
  }
  return covered;
}

}  // namespace

std::optional<std::vector<Goal>> decode_goals(const Node& request) {
  const auto node = request.require("goals", "what the network must reach");
  if (!node) return std::nullopt;
  const auto items = node->items(1, limits::kGoals, "goals");
  if (!items) return std::nullopt;
  std::vector<Goal> goals;
  for (const Node& item : *items) {
    if (auto goal = decode_goal(item)) goals.push_back(*goal);
  }
  if (goals.size() != items->size()) return std::nullopt;
  return goals;
}

bool check_goals_covered(const Node& request, const std::vector<Goal>& goals,
                         const std::optional<OnePort>& source,
                         const std::optional<std::vector<LoadState>>& loads) {
  bool covered = true;
  const Node list = *request.find("goals");
  for (std::size_t i = 0; i < goals.size(); ++i) {
    const Node goal = list.item(i);
    covered = check_edge(*goal.find("from_hz"), goals[i].from_hz, source, loads) && covered;
    covered = check_edge(*goal.find("to_hz"), goals[i].to_hz, source, loads) && covered;
  }
  return covered;
}

}  // namespace bandwright
