// Touchstone texts that are right. The examples are those of the specification (IBIS Open Forum,
// versions 1.1, 2.0 and 2.1); the converted values were computed from its formulas.

#include "solver/rf/touchstone.h"

#include <doctest/doctest.h>

#include <cmath>
#include <string>

namespace bandwright {
namespace {

NetworkData read(const std::string& text, int ports = 0) {
  const auto parsed = parse_touchstone(text, ports);
  std::string faults;
  if (!parsed.ok()) {
    for (const TextFault& f : parsed.error()) {
      faults += std::to_string(f.line) + ": " + f.message + "\n";
    }
  }
  REQUIRE_MESSAGE(parsed.ok(), faults);
  return *parsed;
}

void check_close(Complex found, Complex wanted, double tolerance = 1e-12) {
  CAPTURE(found.real());
  CAPTURE(found.imag());
  CAPTURE(wanted.real());
  CAPTURE(wanted.imag());
  CHECK(std::abs(found - wanted) <= tolerance);
}

Complex impedance(const NetworkData& data, std::size_t point) {
  return impedance_from_reflection(data.s(point, 0, 0), data.reference_ohm[0]);
}

const Complex kFivePoints75[] = {{74.0691307, -5.1794182},
                                 {55.6310313, -22.4763956},
                                 {37.4943371, -37.4943371},
                                 {14.0841469, -26.4884278},
                                 {0.0130893, -0.7498858}};

TEST_CASE("a 1-port in magnitude and angle reads as the specification's example") {
  const NetworkData data = read(
      "!1-port S-parameter file, single frequency point\n# MHz S MA R 50\n2.000 0.894 -12.136");
  CHECK(data.ports == 1);
  CHECK(data.frequency_hz == std::vector<double>{2e6});
  CHECK(data.reference_ohm == std::vector<double>{50});
  check_close(data.s(0, 0, 0), {0.874020294860635, -0.187948195446853});
  check_close(impedance(data, 0), {196.076171, -367.119229}, 1e-6);
}

TEST_CASE("decibels are 20 log10") {
  const NetworkData data = read("# MHz S DB R 50\n2.000 -0.97 -12.136");
  check_close(data.s(0, 0, 0), {0.874347350451638, -0.188018525058759});
}

TEST_CASE("version 1 impedances are normalised to R") {
  const NetworkData data =
      read("# MHz Z MA R 75\n100 .99 -4\n200 .80 -22\n300 .707 -45\n400 .40 -62\n500 .01 -89\n");
  const Complex kReflections[] = {{-0.00503125, -0.03491989},
                                  {-0.11525554, -0.19189104},
                                  {-0.20008457, -0.39998792},
                                  {-0.54702556, -0.45999514},
                                  {-0.99945120, -0.01998798}};
  REQUIRE(data.frequency_hz.size() == 5);
  CHECK(data.reference_ohm[0] == 75);
  for (std::size_t k = 0; k < 5; ++k) {
    check_close(impedance(data, k), kFivePoints75[k], 1e-6);
    check_close(data.s(k, 0, 0), kReflections[k], 1e-8);
  }
}

TEST_CASE("version 2 impedances are in ohm, whatever the reference") {
  const NetworkData data = read(
      "[Version] 2.0\n# MHz Z MA\n[Number of Ports] 1\n[Number of Frequencies] 5\n"
      "[Reference] 20.0\n[Network Data]\n"
      "100 74.25 -4\n200 60 -22\n300 53.025 -45\n400 30 -62\n500 0.75 -89\n[End]\n");
  REQUIRE(data.frequency_hz.size() == 5);
  CHECK(data.reference_ohm == std::vector<double>{20});
  for (std::size_t k = 0; k < 5; ++k) check_close(impedance(data, k), kFivePoints75[k], 1e-6);
}

TEST_CASE("version 1 admittances are in units of 1/R") {
  // Y = 0.5 / 50 ohm is 100 ohm: S = 1/3. In version 2 the same is 10 mS.
  check_close(read("# GHz Y RI R 50\n1 0.5 0").s(0, 0, 0), 1.0 / 3);
  check_close(
      read("[Version] 2.1\n# GHz Y RI R 50\n[Number of Ports] 1\n[Number of Frequencies] 1\n"
           "[Network Data]\n1 0.01 0\n[End]")
          .s(0, 0, 0),
      1.0 / 3);
}

TEST_CASE("a 2-port of three points reads as the specification's example") {
  const NetworkData data = read(
      "# GHz S RI R 50.0\n"
      "1.0000 0.3926 -0.1211 -0.0003 -0.0021 -0.0003 -0.0021 0.3926 -0.1211\n"
      "2.0000 0.3517 -0.3054 -0.0096 -0.0298 -0.0096 -0.0298 0.3517 -0.3054\n"
      "10.000 0.3419 0.3336 -0.0134 0.0379 -0.0134 0.0379 0.3419 0.3336\n");
  CHECK(data.ports == 2);
  CHECK(data.frequency_hz == std::vector<double>{1e9, 2e9, 10e9});
  for (std::size_t k = 0; k < 3; ++k) CHECK(data.s(k, 0, 1) == data.s(k, 1, 0));
  CHECK(data.s(2, 0, 0) == Complex(0.3419, 0.3336));
  CHECK(data.s(1, 1, 0) == Complex(-0.0096, -0.0298));
}

TEST_CASE("a bare option line means GHz S MA R 50, and version 1 2-ports list S21 before S12") {
  const NetworkData data = read("#\n2 .95 -26 3.57 157 .04 76 .66 -14\n");
  CHECK(data.frequency_hz[0] == 2e9);
  check_close(data.s(0, 1, 0), {-3.286202326825, 1.394910128707});
  check_close(data.s(0, 0, 1), {0.009676875824, 0.038811829051});
}

TEST_CASE("version 1 noise data are passed over") {
  const NetworkData data = read(
      "#\n2 .95 -26 3.57 157 .04 76 .66 -14\n22 .60 -144 1.30 40 .14 40 .56 -85\n"
      "! noise\n4 .7 .64 69 .38\n18 2.7 .46 -33 .40\n");
  CHECK(data.frequency_hz == std::vector<double>{2e9, 22e9});
}

TEST_CASE("version 2 noise data are passed over, and the two-port order is obeyed") {
  const std::string head = "[Version] 2.0\n#\n[Number of Ports] 2\n";
  const std::string tail =
      "[Number of Frequencies] 2\n[Number of Noise Frequencies] 2\n[Reference] 50 25.0\n"
      "[Network Data]\n2 .95 -26 3.57 157 .04 76 .66 -14\n22 .60 -144 1.30 40 .14 40 .56 -85\n"
      "[Noise Data]\n4 .7 .64 69 19\n18 2.7 .46 -33 20\n[End]\n";
  const NetworkData old_order = read(head + "[Two-Port Data Order] 21_12\n" + tail);
  const NetworkData row_order = read(head + "[Two-Port Data Order] 12_21\n" + tail);
  CHECK(old_order.reference_ohm == std::vector<double>{50, 25});
  check_close(old_order.s(0, 1, 0), {-3.286202326825, 1.394910128707});
  check_close(row_order.s(0, 0, 1), {-3.286202326825, 1.394910128707});
  CHECK(old_order.s(1, 1, 1) == row_order.s(1, 1, 1));
}

TEST_CASE("version 2 references may span lines, and triangles are mirrored") {
  const std::string head =
      "[Version] 2.0\n# GHz S MA R 50\n[Number of Ports] 4\n[Reference] 50 75\n0.01 0.01\n"
      "[Number of Frequencies] 1\n";
  const NetworkData lower = read(head +
                                 "[Matrix Format] Lower\n[Network Data]\n5.00000\n0.60 161.24\n"
                                 "0.40 -42.20 0.60 161.20\n0.42 -66.58 0.53 -79.34 0.60 161.24\n"
                                 "0.53 -79.34 0.42 -66.58 0.40 -42.20 0.60 161.24\n[End]");
  const NetworkData upper = read(head +
                                 "[Matrix Format] Upper\n[Network Data]\n5.00000 0.60 161.24 "
                                 "0.40 -42.20 0.42 -66.58 0.53 -79.34\n0.60 161.20 0.53 -79.34 "
                                 "0.42 -66.58\n0.60 161.24 0.40 -42.20\n0.60 161.24\n[End]");
  CHECK(lower.reference_ohm == std::vector<double>{50, 75, 0.01, 0.01});
  CHECK(lower.scattering == upper.scattering);
  CHECK(lower.s(0, 3, 2) == lower.s(0, 2, 3));
  CHECK(std::abs(lower.s(0, 3, 2)) == doctest::Approx(0.40));
  CHECK(std::abs(lower.s(0, 1, 3)) == doctest::Approx(0.42));
}

TEST_CASE("three and four ports in version 1 are told by the shape of their lines") {
  const NetworkData three = read(
      "# GHz S RI\n1 11 0 12 0 13 0\n 21 0 22 0 23 0\n31 0 32 0 33 0\n"
      "2 11 0 12 0 13 0\n 21 0 22 0 23 0\n31 0 32 0 33 0\n");
  CHECK(three.ports == 3);
  CHECK(three.frequency_hz.size() == 2);
  CHECK(three.s(1, 2, 0) == Complex(31));
  const NetworkData four = read(
      "# GHz S RI\n1 11 0 12 0 13 0 14 0\n21 0 22 0 23 0 24 0\n31 0 32 0 33 0 34 0\n"
      "41 0 42 0 43 0 44 0\n");
  CHECK(four.ports == 4);
  CHECK(four.s(0, 0, 3) == Complex(14));
  CHECK(four.s(0, 3, 0) == Complex(41));
}

TEST_CASE("rows of more than four pairs go on in the next line") {
  std::string text = "# GHz S RI\n1";
  for (int row = 1; row <= 5; ++row) {
    for (int column = 1; column <= 5; ++column) {
      text += " " + std::to_string(10 * row + column) + " 0";
      if (column == 4) text += "\n";
    }
    text += "\n";
  }
  for (const int ports : {0, 5}) {
    const NetworkData data = read(text, ports);
    CHECK(data.ports == 5);
    CHECK(data.s(0, 4, 3) == Complex(54));
  }
}

TEST_CASE("several reference resistances, one a port, end a version 1.1 option line") {
  const NetworkData data = read("# GHz S RI R 50 75\n1 .1 0 .2 0 .3 0 .4 0\n");
  CHECK(data.reference_ohm == std::vector<double>{50, 75});
}

TEST_CASE("case, blanks, comments, byte order mark and any line end do not matter") {
  const std::string text =
      "! a comment with any bytes: \xB5\xFF\n\n  # mhz   s ri r 50 ! more\n\n\t140 +0.55 -.72 !x\n"
      "160  5.5e-1  -7.2E-1\n";
  const NetworkData plain = read(text);
  CHECK(plain.frequency_hz == std::vector<double>{140e6, 160e6});
  CHECK(plain.s(0, 0, 0) == plain.s(1, 0, 0));
  for (const std::string& end : {std::string("\r\n"), std::string("\r")}) {
    std::string other = "\xEF\xBB\xBF";
    for (const char c : text) other += c == '\n' ? end : std::string(1, c);
    CHECK(read(other).scattering == plain.scattering);
  }
}

TEST_CASE("option items may stand in any order, and only the first option line counts") {
  const NetworkData data = read("# R 75 RI Hz S\n# GHz S MA R 50\n7 .1 .2\n");
  CHECK(data.frequency_hz[0] == 7);
  CHECK(data.reference_ohm[0] == 75);
  CHECK(data.s(0, 0, 0) == Complex(0.1, 0.2));
}

TEST_CASE("a frequency is the double closest to its decimal figure in hertz") {
  CHECK(read("# MHz S RI\n170.3 0 0").frequency_hz[0] == 170.3e6);
  CHECK(read("# GHz S RI\n2.4419 0 0").frequency_hz[0] == 2441900000.0);
  CHECK(read("# kHz S RI\n0 0 0\n0.1 0 0").frequency_hz == std::vector<double>{0, 100});
}

TEST_CASE("information blocks and words in them are passed over") {
  const NetworkData data = read(
      "! first\n[Version] 2.1\n# Hz S RI\n[Number of Ports] 1\n[Begin Information]\n"
      "[Anything] # at all\n1 2 3\n[End Information]\n[Number of Frequencies] 2\n"
      "[Network Data]\n1 .1\n.2 2 .3 .4\n[End]\n! last\n");
  CHECK(data.frequency_hz == std::vector<double>{1, 2});
  CHECK(data.s(1, 0, 0) == Complex(0.3, 0.4));
}

TEST_CASE("all five parameters of one 2-port give one scattering matrix") {
  // A pi of resistors: 100 ohm to ground, 50 ohm across, 200 ohm to ground, in RI at 50 ohm.
  const double y11 = 1.0 / 100 + 1.0 / 50, y12 = -1.0 / 50, y22 = 1.0 / 200 + 1.0 / 50;
  const double det = y11 * y22 - y12 * y12;
  const auto text = [](char parameter, double a, double b, double c, double d) {
    // Rows 11 12 21 22 in ohm and siemens.
    std::string out = "[Version] 2.0\n# GHz ";
    out += parameter;
    out +=
        " RI R 50\n[Number of Ports] 2\n[Two-Port Data Order] 12_21\n[Number of Frequencies] 1\n";
    out += "[Network Data]\n1";
    for (const double value : {a, b, c, d}) {
      char number[40];
      std::snprintf(number, sizeof number, " %.17g 0", value);
      out += number;
    }
    return out + "\n[End]\n";
  };
  const double zdet = 1 / det;
  const double z11 = y22 / det, z12 = -y12 / det, z22 = y11 / det;
  const NetworkData y = read(text('Y', y11, y12, y12, y22));
  const NetworkData z = read(text('Z', z11, z12, z12, z22));
  const NetworkData h = read(text('H', zdet / z22, z12 / z22, -z12 / z22, 1 / z22));
  const NetworkData g = read(text('G', 1 / z11, -z12 / z11, z12 / z11, zdet / z11));
  // S21 = -2 y21 / ((1 + 50 y11)(1 + 50 y22) - 50^2 y12 y21) with 50 ohm.
  const double s21 = -2 * 50 * y12 / ((1 + 50 * y11) * (1 + 50 * y22) - 2500 * y12 * y12);
  check_close(y.s(0, 1, 0), s21);
  for (int i = 0; i < 4; ++i) {
    check_close(z.scattering[i], y.scattering[i]);
    check_close(h.scattering[i], y.scattering[i]);
    check_close(g.scattering[i], y.scattering[i]);
  }
}

TEST_CASE("impedances with unequal references give waves at each port's own") {
  // A through wire seen from 50 and 100 ohm: S11 = 1/3, S22 = -1/3, S21 = sqrt(8)/3. Written as the
  // G matrix of a wire: I1 = -I2, V2 = V1.
  const NetworkData data = read(
      "[Version] 2.0\n# GHz G RI\n[Number of Ports] 2\n[Two-Port Data Order] 12_21\n"
      "[Number of Frequencies] 1\n[Reference] 50 100\n[Network Data]\n"
      "1 0 0 -1 0 1 0 0 0\n[End]\n");
  check_close(data.s(0, 0, 0), 1.0 / 3);
  check_close(data.s(0, 1, 1), -1.0 / 3);
  check_close(data.s(0, 1, 0), std::sqrt(8.0) / 3);
  check_close(data.s(0, 0, 1), std::sqrt(8.0) / 3);
}

TEST_CASE("version 1 hybrid data are normalised: a wire is a wire at any reference") {
  const NetworkData data = read("# GHz H RI R 75\n1 0 0 -1 0 1 0 0 0\n");
  check_close(data.s(0, 1, 0), 1);
  check_close(data.s(0, 0, 0), 0);
}

}  // namespace
}  // namespace bandwright
