// The network response against a circuit simulator that shares no code with it: the same parts as
// a netlist, node by node, solved by ngspice.

#include <doctest/doctest.h>

#include <cmath>
#include <cstdio>
#include <fstream>
#include <iterator>
#include <numbers>
#include <string>
#include <vector>

#include "solver/rf/response.h"
#include "tests/reference/outside_program.h"
#include "tests/reference/random_ladder.h"

namespace bandwright {
namespace {

using reference::LoadForm;
using reference::RandomCase;

std::string number(double value) {
  char text[40];
  std::snprintf(text, sizeof text, "%.17g", value);
  return text;
}

// Writes the cases as one netlist, for a single frequency (resistances that follow a quality factor
// have one value there). All hang on one source of 1 V behind their own source resistance.
class Netlist {
 public:
  explicit Netlist(double frequency_hz) : hz_(frequency_hz) {
    text_ = "random ladders\nvs src 0 dc 0 ac 1\n";
  }

  void add(const RandomCase& one) {
    std::string node = "in" + std::to_string(inputs_.size());
    inputs_.push_back(node);
    part('r', "src", node, one.source_ohm);
    for (std::size_t i = 0; i < one.values.size(); ++i) {
      const Slot& slot = one.topology.slots[i];
      const std::string next = slot.place == Place::series ? fresh() : node;
      element(slot, one.values[i], node, slot.place == Place::series ? next : "0");
      node = next;
    }
    load(one, node);
  }

  // The whole netlist, with the commands that write the voltages of all inputs to `output`.
  std::string finished(const std::string& output) const {
    // The shunts to ground keep nodes between capacitors from floating at zero frequency.
    std::string text = text_ + ".options rshunt=1e13\n.control\nset numdgt=15\n" +
                       "set appendwrite\nset wr_singlescale\nac lin 1 " + number(hz_) + " " +
                       number(hz_) + "\n";
    for (const std::string& input : inputs_) {
      text += "wrdata " + output + " v(" + input + ")\n";
    }
    return text + "quit\n.endc\n.end\n";
  }

 private:
  std::string fresh() { return "n" + std::to_string(++nodes_); }

  void part(char letter, const std::string& from, const std::string& to, double value) {
    text_ += letter + std::to_string(++parts_) + " " + from + " " + to + " " + number(value) + "\n";
  }

  void element(const Slot& slot, double value, const std::string& from, const std::string& to) {
    const double omega = 2 * std::numbers::pi * hz_;
    if (slot.kind == Kind::resistor) {
      part('r', from, to, value);
    } else if (slot.kind == Kind::inductor) {
      const std::string inner = fresh();
      part('l', from, inner, value);
      part('r', inner, to, omega * value / slot.part.q->at(hz_));
      if (slot.part.self_resonance_hz) {
        const double resonance = 2 * std::numbers::pi * *slot.part.self_resonance_hz;
        part('c', from, to, 1 / (resonance * resonance * value));
      }
    } else {
      const std::string plate = fresh();
      const std::string lead = slot.part.self_inductance_h > 0 ? fresh() : to;
      const double loss = slot.part.q ? 1 / (omega * value * slot.part.q->at(hz_)) : 0;
      part('c', from, plate, value);
      part('r', plate, lead, slot.part.esr_ohm + loss);
      if (slot.part.self_inductance_h > 0) part('l', lead, to, slot.part.self_inductance_h);
    }
  }

  void load(const RandomCase& one, const std::string& node) {
    const std::string first = fresh();
    switch (one.form) {
      case LoadForm::series: {
        const std::string second = fresh();
        part('r', node, first, one.load_ohm);
        part('l', first, second, one.load_henry);
        part('c', second, "0", one.load_farad);
        return;
      }
      case LoadForm::lossy_tank:
        part('r', node, first, one.load_ohm);
        part('l', first, "0", one.load_henry);
        part('c', node, "0", one.load_farad);
        return;
      case LoadForm::series_coil:
        break;
    }
    part('l', node, first, one.load_henry);
    part('r', first, "0", one.load_ohm);
    part('c', first, "0", one.load_farad);
  }

  double hz_;
  std::string text_;
  std::vector<std::string> inputs_;
  int nodes_ = 0;
  int parts_ = 0;
};

// The input voltages of `cases` by simulation, in order.
std::vector<Complex> simulated(const std::vector<RandomCase>& cases, double frequency_hz) {
  const reference::ScratchFolder folder;
  REQUIRE_FALSE(folder.path().empty());
  const std::string output = (folder.path() / "voltages").string();
  const std::string netlist = (folder.path() / "ladders.cir").string();
  Netlist text(frequency_hz);
  for (const RandomCase& one : cases) text.add(one);
  std::ofstream(netlist) << text.finished(output);
  REQUIRE(reference::succeeds("ngspice -b '" + netlist + "'"));
  std::ifstream file(output + ".data");
  if (!file) file.open(output);
  std::vector<Complex> voltages;
  for (double hz, re, im; file >> hz >> re >> im;) voltages.emplace_back(re, im);
  return voltages;
}

TEST_CASE("two hundred random lossy ladders reflect as a circuit simulator says") {
  if (!reference::succeeds("command -v ngspice")) {
    FAIL("ngspice is needed for this comparison: install the package ngspice");
  }
  const std::vector<RandomCase> cases = reference::random_cases(200, 2024);
  for (const double hz : reference::kFrequenciesHz) {
    const std::vector<Complex> voltages = simulated(cases, hz);
    REQUIRE(voltages.size() == cases.size());
    for (std::size_t i = 0; i < cases.size(); ++i) {
      const RandomCase& one = cases[i];
      // Half the source's 1 V at the input is a match: V = (1 + reflection) / 2.
      const Complex wanted = 2.0 * voltages[i] - 1.0;
      const Complex found =
          respond(one.topology, one.values, OnePort::constant(one.source_ohm), one.load(), hz)
              .reflection;
      CAPTURE(i);
      CAPTURE(hz);
      CAPTURE(one.topology.describe());
      CHECK(std::abs(found - wanted) < 1e-6 * std::max(std::abs(wanted), 0.01));
    }
  }
}

}  // namespace
}  // namespace bandwright
