#include "solver/rf/template.h"

#include <doctest/doctest.h>

#include <numbers>
#include <set>
#include <string>

namespace bandwright {
namespace {

constexpr double kCentreHz = 150e6;
constexpr double kSourceOhm = 50;

KindChoice choice(Kind kind, std::optional<ValueRange> range = std::nullopt) {
  return {kind, range, Part{}};
}

const std::vector<KindChoice> kBoth{choice(Kind::inductor), choice(Kind::capacitor)};

std::vector<Topology> expanded(const Template& form, std::size_t most = 4096) {
  const auto result = expand(form, kCentreHz, kSourceOhm, most);
  REQUIRE(result.ok());
  return *result;
}

std::vector<std::string> described(const Template& form) {
  std::vector<std::string> texts;
  for (const Topology& topology : expanded(form)) texts.push_back(topology.describe());
  return texts;
}

ExpandFault fault(const Template& form, std::size_t most = 4096) {
  const auto result = expand(form, kCentreHz, kSourceOhm, most);
  REQUIRE_FALSE(result.ok());
  return result.error();
}

// The one topology of a template of two elements with open values, at most.
Topology merged(Place place, Kind kind, ValueRange first, ValueRange second) {
  const std::vector<TemplateElement> elements{{place, {choice(kind, first)}, false},
                                              {place, {choice(kind, second)}, false}};
  const auto all = expanded(elements);
  REQUIRE(all.size() == 1);
  return all.front();
}

TEST_CASE("the ladder rule gives every alternating ladder: 8, 16 and 32 of two kinds") {
  CHECK(expanded(LadderRule{1, 1, kBoth}).size() == 4);
  CHECK(expanded(LadderRule{2, 2, kBoth}).size() == 8);
  CHECK(expanded(LadderRule{3, 3, kBoth}).size() == 16);
  CHECK(expanded(LadderRule{4, 4, kBoth}).size() == 32);
  CHECK(expanded(LadderRule{1, 4, kBoth}).size() == 60);
}

TEST_CASE("ladders alternate, are distinct and come shortest first") {
  std::set<std::string> seen;
  std::size_t last = 0;
  for (const Topology& topology : expanded(LadderRule{1, 5, kBoth})) {
    CHECK(topology.slots.size() >= last);
    last = topology.slots.size();
    CHECK(seen.insert(topology.describe()).second);
    for (std::size_t i = 0; i < topology.slots.size(); ++i) {
      CHECK(topology.slots[i].template_index == -1);
      if (i > 0) CHECK(topology.slots[i].place != topology.slots[i - 1].place);
    }
  }
}

TEST_CASE("a kind named twice adds no topology") {
  CHECK(expanded(LadderRule{2, 2, {choice(Kind::inductor), choice(Kind::inductor)}}).size() == 2);
}

TEST_CASE("elements expand in the order of their choices, the last one turning fastest") {
  const std::vector<TemplateElement> elements{{Place::shunt, kBoth, false},
                                              {Place::series, kBoth, false}};
  CHECK(described(elements) == std::vector<std::string>{"shunt inductor, series inductor",
                                                        "shunt inductor, series capacitor",
                                                        "shunt capacitor, series inductor",
                                                        "shunt capacitor, series capacitor"});
}

TEST_CASE("an optional element may be left out, and the empty network is dropped") {
  const std::vector<TemplateElement> elements{{Place::shunt, {choice(Kind::inductor)}, true},
                                              {Place::series, {choice(Kind::capacitor)}, true}};
  CHECK(described(elements) == std::vector<std::string>{"shunt inductor", "series capacitor",
                                                        "shunt inductor, series capacitor"});
  const std::vector<TemplateElement> nothing;
  CHECK(fault(nothing) == ExpandFault::none_left);
}

TEST_CASE("a slot remembers the template element it came from") {
  const std::vector<TemplateElement> elements{{Place::shunt, {choice(Kind::inductor)}, true},
                                              {Place::series, {choice(Kind::capacitor)}, false}};
  const auto all = expanded(elements);
  REQUIRE(all.size() == 2);
  CHECK(all[0].slots[0].template_index == 1);
  CHECK(all[1].slots[0].template_index == 0);
  CHECK(all[1].slots[1].template_index == 1);
}

TEST_CASE("neighbours that act as one element merge, with the range the pair can reach") {
  const Topology coils = merged(Place::series, Kind::inductor, {1e-9, 10e-9}, {2e-9, 20e-9});
  REQUIRE(coils.slots.size() == 1);
  CHECK(coils.slots[0].range.min == 1e-9);
  CHECK(coils.slots[0].range.max == doctest::Approx(30e-9).epsilon(1e-14));

  const Topology plates = merged(Place::shunt, Kind::capacitor, {1e-12, 10e-12}, {2e-12, 20e-12});
  CHECK(plates.slots[0].range.max == doctest::Approx(30e-12).epsilon(1e-14));

  const Topology in_series =
      merged(Place::series, Kind::capacitor, {2e-12, 10e-12}, {2e-12, 20e-12});
  CHECK(in_series.slots[0].range.min == doctest::Approx(1e-12).epsilon(1e-14));
  CHECK(in_series.slots[0].range.max == 20e-12);

  const Topology shunt_coils = merged(Place::shunt, Kind::inductor, {6e-9, 10e-9}, {3e-9, 20e-9});
  CHECK(shunt_coils.slots[0].range.min == doctest::Approx(2e-9).epsilon(1e-14));
  CHECK(shunt_coils.slots[0].range.max == 20e-9);

  CHECK(merged(Place::series, Kind::resistor, {1, 2}, {10, 20}).slots[0].range.max == 22);
  CHECK(merged(Place::shunt, Kind::resistor, {10, 20}, {10, 20}).slots[0].range.min == 5);
}

TEST_CASE("fixed values, other places, other kinds and other parts do not merge") {
  const ValueRange open{1e-9, 10e-9};
  const ValueRange fixed{5e-9, 5e-9};
  CHECK(merged(Place::series, Kind::inductor, fixed, fixed).slots.size() == 2);
  CHECK(merged(Place::series, Kind::inductor, open, fixed).slots.size() == 2);
  CHECK(merged(Place::series, Kind::inductor, fixed, open).slots.size() == 2);

  const std::vector<TemplateElement> places{{Place::series, {choice(Kind::inductor)}, false},
                                            {Place::shunt, {choice(Kind::inductor)}, false}};
  CHECK(expanded(places)[0].slots.size() == 2);

  KindChoice lossy = choice(Kind::inductor);
  lossy.part.q = QualityFactor{60, 1e8, 0.5};
  const std::vector<TemplateElement> parts{{Place::series, {choice(Kind::inductor)}, false},
                                           {Place::series, {lossy}, false}};
  CHECK(expanded(parts)[0].slots.size() == 2);
}

TEST_CASE("elements merge when what stood between them is left out") {
  const ValueRange open{1e-9, 10e-9};
  const std::vector<TemplateElement> elements{
      {Place::series, {choice(Kind::inductor, open)}, false},
      {Place::shunt, {choice(Kind::capacitor)}, true},
      {Place::series, {choice(Kind::inductor, open)}, false}};
  const auto all = expanded(elements);
  REQUIRE(all.size() == 2);
  CHECK(all[0].describe() == "series inductor");
  CHECK(all[0].slots[0].range.max == doctest::Approx(20e-9).epsilon(1e-14));
  CHECK(all[1].slots.size() == 3);
}

TEST_CASE("a topology equal to an earlier one is dropped") {
  const ValueRange open{1e-9, 10e-9};
  const TemplateElement coil{Place::series, {choice(Kind::inductor, open)}, true};
  const TemplateElement plate{Place::shunt, {choice(Kind::capacitor)}, true};
  // Leaving out the first or the last coil is the same network: L; C; L C and C L; LL; L C L.
  CHECK(described(std::vector<TemplateElement>{coil, plate, coil}) ==
        std::vector<std::string>{"series inductor", "series inductor", "shunt capacitor",
                                 "series inductor, shunt capacitor",
                                 "shunt capacitor, series inductor",
                                 "series inductor, shunt capacitor, series inductor"});
}

TEST_CASE("the default range spans reactances from a fiftieth to fifty times the source") {
  const double omega = 2 * std::numbers::pi * kCentreHz;
  const ValueRange coil = default_range(Kind::inductor, kCentreHz, kSourceOhm);
  CHECK(omega * coil.min == doctest::Approx(1).epsilon(1e-13));
  CHECK(omega * coil.max == doctest::Approx(2500).epsilon(1e-13));
  const ValueRange plate = default_range(Kind::capacitor, kCentreHz, kSourceOhm);
  CHECK(1 / (omega * plate.min) == doctest::Approx(2500).epsilon(1e-13));
  CHECK(1 / (omega * plate.max) == doctest::Approx(1).epsilon(1e-13));
  const ValueRange resistor = default_range(Kind::resistor, kCentreHz, kSourceOhm);
  CHECK(resistor.min == doctest::Approx(1));
  CHECK(resistor.max == doctest::Approx(2500));
  const auto all = expanded(std::vector<TemplateElement>{{Place::series, kBoth, false}});
  CHECK(all[0].slots[0].range == coil);
  CHECK(all[1].slots[0].range == plate);
}

TEST_CASE("as many topologies as wanted are given, and one more is refused") {
  CHECK(expanded(LadderRule{2, 2, kBoth}, 8).size() == 8);
  CHECK(fault(LadderRule{2, 2, kBoth}, 7) == ExpandFault::too_many);
}

TEST_CASE("eight optional elements of every kind are counted after merging") {
  std::vector<TemplateElement> elements;
  for (int i = 0; i < 8; ++i) {
    elements.push_back({i % 2 ? Place::series : Place::shunt, kBoth, true});
  }
  const auto result = expand(elements, kCentreHz, kSourceOhm, 6561);
  REQUIRE(result.ok());
  CHECK(result->size() > 1000);
  CHECK(result->size() < 6561);
}

TEST_CASE("a template with a huge number of combinations is refused by counting") {
  CHECK(fault(LadderRule{60, 60, kBoth}) == ExpandFault::too_many);
  std::vector<TemplateElement> elements(200, {Place::series, kBoth, true});
  CHECK(fault(elements) == ExpandFault::too_many);
}

TEST_CASE("a template without any choice leaves nothing") {
  CHECK(fault(LadderRule{1, 3, {}}) == ExpandFault::none_left);
  CHECK(fault(LadderRule{3, 2, kBoth}) == ExpandFault::none_left);
  CHECK(fault(std::vector<TemplateElement>{{Place::series, {}, false}}) == ExpandFault::none_left);
}

}  // namespace
}  // namespace bandwright
