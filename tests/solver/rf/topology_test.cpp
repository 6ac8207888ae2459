#include "solver/rf/topology.h"

#include <doctest/doctest.h>

#include "solver/rf/problem.h"

namespace bandwright {
namespace {

Slot slot(Place place, Kind kind, ValueRange range) {
  return {place, kind, range, Part{}, -1};
}

TEST_CASE("a topology is described from the source to the load") {
  const Topology topology{{slot(Place::shunt, Kind::inductor, {1e-9, 2e-9}),
                           slot(Place::series, Kind::capacitor, {1e-12, 1e-12}),
                           slot(Place::shunt, Kind::resistor, {10, 100})}};
  CHECK(topology.describe() == "shunt inductor, series capacitor, shunt resistor");
  CHECK(topology.free_count() == 2);
  CHECK(Topology{}.describe().empty());
}

TEST_CASE("a topology is lossless without resistors and lossy parts only") {
  Topology topology{{slot(Place::series, Kind::inductor, {1e-9, 2e-9})}};
  CHECK(topology.lossless());
  topology.slots[0].part.q = QualityFactor{60, 1e9, 0};
  CHECK_FALSE(topology.lossless());
  topology.slots[0] = slot(Place::series, Kind::resistor, {10, 100});
  CHECK_FALSE(topology.lossless());
}

TEST_CASE("each kind has its unit and its names") {
  CHECK(kind_unit(Kind::inductor) == Unit::henry);
  CHECK(kind_unit(Kind::capacitor) == Unit::farad);
  CHECK(kind_unit(Kind::resistor) == Unit::ohm);
  CHECK(kind_name(Kind::inductor) == "inductor");
  CHECK(place_name(Place::shunt) == "shunt");
  CHECK(quantity_name(GoalQuantity::return_loss) == "return_loss");
  CHECK(quantity_name(GoalQuantity::transducer_gain) == "transducer_gain");
}

TEST_CASE("a goal's margin is positive inside its bound") {
  Goal goal{GoalQuantity::return_loss, GoalBound::at_least, 1, 2, 10, 2};
  CHECK(goal.margin_db(11) == 2);
  CHECK(goal.margin_db(9) == -2);
  goal.bound = GoalBound::at_most;
  CHECK(goal.margin_db(9) == 2);
  goal.bound = GoalBound::best;
  CHECK(goal.margin_db(9) == 18);
}

TEST_CASE("the centre frequency is the geometric mean of all band edges") {
  const auto band = [](double from, double to) {
    return Goal{GoalQuantity::return_loss, GoalBound::best, from, to, 0, 1};
  };
  CHECK(centre_frequency_hz({band(100e6, 400e6)}) == doctest::Approx(200e6).epsilon(1e-13));
  CHECK(centre_frequency_hz({band(1e6, 100e6), band(10e6, 10e6)}) ==
        doctest::Approx(10e6).epsilon(1e-13));
}

TEST_CASE("the source resistance is the real part of its impedance") {
  CHECK(source_resistance_ohm(OnePort::constant(Complex(75, 20)), 1e9) == 75);
}

}  // namespace
}  // namespace bandwright
