#include "solver/base/quantity.h"

#include <doctest/doctest.h>

#include <cmath>
#include <limits>
#include <string>
#include <vector>

namespace bandwright {
namespace {

double read(std::string_view text, Unit unit) {
  const auto parsed = parse_quantity(text, unit);
  REQUIRE_MESSAGE(parsed.ok(), (std::string(text) + ": " + (parsed.ok() ? "" : parsed.error())));
  return *parsed;
}

std::string fault(std::string_view text, Unit unit) {
  const auto parsed = parse_quantity(text, unit);
  REQUIRE_MESSAGE(!parsed.ok(), text);
  return parsed.error();
}

bool holds(const std::string& text, std::string_view part) {
  return text.find(part) != std::string::npos;
}

TEST_CASE("a quantity with prefix and unit is the double closest to its decimal figure") {
  CHECK(read("3.3nH", Unit::henry) == 3.3e-9);
  CHECK(read("3.3 nH", Unit::henry) == 3.3e-9);
  CHECK(read("140MHz", Unit::hertz) == 140e6);
  CHECK(read("170.3 MHz", Unit::hertz) == 170.3e6);
  CHECK(read("2.4419 GHz", Unit::hertz) == 2441900000.0);
  CHECK(read("4.7 fF", Unit::farad) == 4.7e-15);
  CHECK(read("2 THz", Unit::hertz) == 2e12);
  CHECK(read("2e-12 F", Unit::farad) == 2e-12);
  CHECK(read("2.2E3 pF", Unit::farad) == 2.2e-9);
  CHECK(read("1.5e+2 MHz", Unit::hertz) == 1.5e8);
  CHECK(read("-1 dB", Unit::decibel) == -1.0);
  CHECK(read("20 mS", Unit::siemens) == 0.02);
  CHECK(read("5 W", Unit::watt) == 5.0);
  CHECK(read("12 V", Unit::volt) == 12.0);
  CHECK(read("250 mA", Unit::ampere) == 0.25);
  CHECK(read("30 s", Unit::second) == 30.0);
}

TEST_CASE("a bare number in a text is taken as SI") {
  CHECK(read("0.15", Unit::ohm) == 0.15);
  CHECK(read("3.3e-9", Unit::henry) == 3.3e-9);
  CHECK(read("+7", Unit::none) == 7.0);
  CHECK(read(".5", Unit::none) == 0.5);
  CHECK(read("  42\t", Unit::none) == 42.0);
  CHECK(read("0", Unit::farad) == 0.0);
}

TEST_CASE("ohm is read in any case and as either omega") {
  for (const std::string& text :
       std::vector<std::string>{"50 ohm", "50 Ohm", "50OHM", "50 \xCE\xA9", "50\xE2\x84\xA6",
                                "0.05 kOhm", "0.05k\xCE\xA9"}) {
    CAPTURE(text);
    CHECK(read(text, Unit::ohm) == 50.0);
  }
  CHECK(read("3 Mohm", Unit::ohm) == 3e6);
  CHECK(read("3 mohm", Unit::ohm) == 3e-3);
}

TEST_CASE("micro is read as u and as either sign") {
  CHECK(read("10 uH", Unit::henry) == 10e-6);
  CHECK(read("10 \xC2\xB5H", Unit::henry) == 10e-6);
  CHECK(read("10\xCE\xBCH", Unit::henry) == 10e-6);
}

TEST_CASE("no-break spaces and the typographic minus are read as what they mean") {
  CHECK(read("3.3\xC2\xA0nH", Unit::henry) == 3.3e-9);
  CHECK(read("\xE2\x88\x92"
             "3 dB",
             Unit::decibel) == -3.0);
}

TEST_CASE("m is metre where it stands alone and milli before a unit") {
  CHECK(read("3 m", Unit::metre) == 3.0);
  CHECK(read("12 mm", Unit::metre) == 12e-3);
  CHECK(read("3 Mm", Unit::metre) == 3e6);
  CHECK(read("3 mHz", Unit::hertz) == 3e-3);
  CHECK(holds(fault("3 m", Unit::henry), "found m, wanted an inductance in H"));
}

TEST_CASE("a wrong unit names both units") {
  CHECK(fault("3 MHz", Unit::farad) == "found MHz, wanted a capacitance in F, e.g. \"3.3 pF\"");
  CHECK(holds(fault("3 dB", Unit::hertz), "found dB, wanted a frequency in Hz"));
  CHECK(holds(fault("3 nH", Unit::none), "found nH, wanted a plain number"));
}

TEST_CASE("a near miss is told what was probably meant") {
  CHECK(holds(fault("140 mhz", Unit::hertz), "did you mean \"MHz\"?"));
  CHECK(holds(fault("140 MHZ", Unit::hertz), "did you mean \"MHz\"?"));
  CHECK(holds(fault("3 pf", Unit::farad), "did you mean \"pF\"?"));
  CHECK(holds(fault("3.3n", Unit::henry), "did you mean \"nH\"?"));
  CHECK(holds(fault("4.7 KOHM", Unit::ohm), "did you mean \"kohm\"?"));
  CHECK(holds(fault("6 db", Unit::decibel), "did you mean \"dB\"?"));
}

TEST_CASE("what is no number or holds more than one is refused") {
  CHECK(holds(fault("", Unit::henry), "found nothing"));
  CHECK(holds(fault("   ", Unit::henry), "found nothing"));
  CHECK(holds(fault("nH", Unit::henry), "does not start with a number"));
  for (const std::string& text :
       std::vector<std::string>{"inf", "nan", "-inf", "+-3", "--3", "-", ".", "e5", "0x10"}) {
    CAPTURE(text);
    CHECK_FALSE(parse_quantity(text, Unit::none).ok());
  }
  CHECK(holds(fault("3,3 nH", Unit::henry), "use a point"));
  CHECK(holds(fault("3.3 nH 4", Unit::henry), "after the number"));
  CHECK(holds(fault("3.3 nH nH", Unit::henry), "no unit known"));
  CHECK(holds(fault("3.3 n H", Unit::henry), "no unit known"));
  CHECK(holds(fault("3 mdB", Unit::decibel), "no unit known"));
  CHECK(holds(fault("3 xyz", Unit::henry), "no unit known"));
  CHECK_FALSE(parse_quantity(std::string("3\0H", 3), Unit::henry).ok());
}

TEST_CASE("a number out of range is refused, with or without its prefix") {
  CHECK(holds(fault("1e999", Unit::none), "too large or too small"));
  CHECK(holds(fault("1e307 MHz", Unit::hertz), "too large or too small"));
  CHECK(holds(fault("1e-999 F", Unit::farad), "too large or too small"));
  CHECK(holds(fault("1e99999999999999999999 F", Unit::farad), "too large or too small"));
  CHECK(read("1e-310 TF", Unit::farad) == 1e-298);
  CHECK(read("1e310 fF", Unit::farad) == 1e295);
}

TEST_CASE("a long text is refused with a short message") {
  const std::string message = fault("1 " + std::string(100'000, 'x'), Unit::henry);
  CHECK(message.size() < 300);
}

TEST_CASE("a value is printed with the prefix that leaves one to three digits") {
  CHECK(format_quantity(3.3e-9, Unit::henry) == "3.3 nH");
  CHECK(format_quantity(2e-11, Unit::farad) == "20 pF");
  CHECK(format_quantity(1.5e8, Unit::hertz) == "150 MHz");
  CHECK(format_quantity(50, Unit::ohm) == "50 ohm");
  CHECK(format_quantity(0.1, Unit::ohm) == "100 mohm");
  CHECK(format_quantity(1e-6, Unit::henry) == "1 uH");
  CHECK(format_quantity(0, Unit::henry) == "0 H");
  CHECK(format_quantity(-0.25, Unit::volt) == "-250 mV");
  CHECK(format_quantity(6.15, Unit::decibel) == "6.15 dB");
  CHECK(format_quantity(-0.4, Unit::decibel) == "-0.4 dB");
  CHECK(format_quantity(0.5, Unit::none) == "0.5");
}

TEST_CASE("rounding carries over to the next prefix") {
  CHECK(format_quantity(999.96e3, Unit::hertz) == "1 MHz");
  CHECK(format_quantity(999.94e3, Unit::hertz) == "999.9 kHz");
  CHECK(format_quantity(999.96, Unit::hertz, 6) == "999.96 Hz");
  CHECK(format_quantity(0.99999, Unit::ohm) == "1 ohm");
}

TEST_CASE("digits are those asked for, and whole figures are kept") {
  CHECK(format_quantity(1.23456e6, Unit::hertz, 3) == "1.23 MHz");
  CHECK(format_quantity(156e6, Unit::hertz, 2) == "160 MHz");
  CHECK(format_quantity(156e6, Unit::hertz, 0) == "200 MHz");
}

TEST_CASE("values beyond the prefixes are printed with an exponent and read back") {
  for (const double value : {1e-20, 2.5e17}) {
    const std::string text = format_quantity(value, Unit::farad);
    CAPTURE(text);
    CHECK(read(text, Unit::farad) == value);
  }
  CHECK(format_quantity(std::numeric_limits<double>::infinity(), Unit::ohm) == "inf ohm");
}

TEST_CASE("what is printed with seventeen digits reads back as the same double") {
  for (const double value : {3.3e-9, 1.0 / 3.0, 123456.789, 9.999999999e-13, 4.7e11}) {
    CHECK(read(format_quantity(value, Unit::henry, 17), Unit::henry) == value);
  }
}

}  // namespace
}  // namespace bandwright
