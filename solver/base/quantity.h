// Quantities as people write them: a number with an SI prefix and a unit.
//
// "3.3 nH", "140MHz", "50 ohm", "47Ω", "12 mm", "2e-12 F". Prefixes are f p n u µ m k M G T. Case
// matters for prefixes (m is milli, M is mega) and not for the word "ohm". A bare number in a
// string is taken as SI. The other direction prints a value with three to six significant digits
// and the prefix that leaves one to three digits before the point.
#pragma once

#include <string>
#include <string_view>

#include "solver/base/result.h"

namespace bandwright {

enum class Unit {
  hertz,
  ohm,
  henry,
  farad,
  siemens,
  metre,
  watt,
  volt,
  ampere,
  decibel,
  second,
  none
};

// "Hz", "ohm", "H", ...; empty for Unit::none.
std::string_view unit_symbol(Unit unit);

// Reads `text` as a finite quantity in `unit` and returns it in SI. The error is a sentence that
// says what was found and what is allowed; a wrong unit names both units.
Result<double, std::string> parse_quantity(std::string_view text, Unit unit);

// "3.3 nH" for (3.3e-9, henry); "50 ohm"; "150 MHz". At most `digits` significant digits, no
// trailing zeros.
std::string format_quantity(double value, Unit unit, int digits = 4);

}  // namespace bandwright
