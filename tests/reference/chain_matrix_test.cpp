// The network response against chain matrices multiplied in NumPy, in another language and another
// direction.

#include <doctest/doctest.h>

#include <cmath>
#include <cstdio>
#include <fstream>
#include <string>
#include <vector>

#include "solver/rf/response.h"
#include "tests/reference/outside_program.h"
#include "tests/reference/random_ladder.h"

namespace bandwright {
namespace {

using reference::LoadForm;
using reference::RandomCase;

std::string form_name(LoadForm form) {
  switch (form) {
    case LoadForm::series:
      return "series";
    case LoadForm::lossy_tank:
      return "lossy_tank";
    case LoadForm::series_coil:
      break;
  }
  return "series_coil";
}

std::string line_of(const RandomCase& one, double hz) {
  std::string line;
  const auto add = [&](double value) {
    char text[40];
    std::snprintf(text, sizeof text, "%.17g ", value);
    line += text;
  };
  add(hz);
  add(one.source_ohm);
  line += form_name(one.form) + " ";
  for (const double value : {one.load_ohm, one.load_henry, one.load_farad}) add(value);
  for (std::size_t i = 0; i < one.values.size(); ++i) {
    const Slot& slot = one.topology.slots[i];
    const QualityFactor q = slot.part.q.value_or(QualityFactor{0, 1, 0});
    line += std::string(place_name(slot.place)) + " " + std::string(kind_name(slot.kind)) + " ";
    for (const double value :
         {one.values[i], q.value, q.at_hz, q.exponent, slot.part.esr_ohm,
          slot.part.self_resonance_hz.value_or(0), slot.part.self_inductance_h}) {
      add(value);
    }
  }
  return line + "\n";
}

TEST_CASE("a thousand random lossy ladders respond as their chain matrices say") {
  if (!reference::succeeds("/usr/bin/python3 -c 'import numpy'")) {
    FAIL("NumPy is needed for this comparison: install the package python3-numpy");
  }
  const reference::ScratchFolder folder;
  REQUIRE_FALSE(folder.path().empty());
  const std::vector<RandomCase> cases = reference::random_cases(200, 7);
  {
    std::ofstream file(folder.path() / "cases");
    for (const RandomCase& one : cases) {
      for (const double hz : reference::kFrequenciesHz) file << line_of(one, hz);
    }
  }
  const std::string script = std::string(BANDWRIGHT_SOURCE_DIR) + "/tests/reference/ladder.py";
  REQUIRE(reference::succeeds("/usr/bin/python3 '" + script + "' '" +
                              (folder.path() / "cases").string() + "' '" +
                              (folder.path() / "answers").string() + "'"));
  std::ifstream answers(folder.path() / "answers");
  for (const RandomCase& one : cases) {
    const OnePort source = OnePort::constant(one.source_ohm);
    const OnePort load = one.load();
    for (const double hz : reference::kFrequenciesHz) {
      double re = 0, im = 0, gain = 0;
      REQUIRE((answers >> re >> im >> gain));
      const PortResponse found = respond(one.topology, one.values, source, load, hz);
      CAPTURE(one.topology.describe());
      CHECK(std::abs(found.reflection - Complex(re, im)) < 1e-11);
      CHECK(std::abs(found.transducer_gain - gain) < 1e-11);
    }
  }
}

}  // namespace
}  // namespace bandwright
