// Touchstone texts that are wrong: every fault on its line, with what is wanted instead.

#include <doctest/doctest.h>

#include <string>
#include <vector>

#include "solver/rf/touchstone.h"

namespace bandwright {
namespace {

std::vector<TextFault> faults(const std::string& text, int ports = 0, std::size_t most = 20) {
  const auto parsed = parse_touchstone(text, ports, most);
  if (parsed.ok()) return {};
  return parsed.error();
}

// Whether exactly one fault is found, at `line`, and its message holds `part`.
void check_fault(const std::string& text, int line, std::string_view part, int ports = 0) {
  CAPTURE(text);
  const std::vector<TextFault> found = faults(text, ports);
  REQUIRE(found.size() == 1);
  CAPTURE(found[0].message);
  CHECK(found[0].line == line);
  CHECK(found[0].message.find(part) != std::string::npos);
}

// Whether a fault at `line` whose message holds `part` is among those found.
bool has_fault(const std::string& text, int line, std::string_view part) {
  for (const TextFault& fault : faults(text)) {
    if (fault.line == line && fault.message.find(part) != std::string::npos) return true;
  }
  return false;
}

const std::string kOnePort = "# GHz S RI R 50\n";
const std::string kVersion2 = "[Version] 2.0\n# GHz S RI\n";
const std::string kPorts1 = "[Number of Ports] 1\n";
const std::string kPorts2 = "[Number of Ports] 2\n[Two-Port Data Order] 12_21\n";
const std::string kOne = "[Number of Frequencies] 1\n";
const std::string kData1 = "[Network Data]\n1 .1 .2\n[End]\n";

TEST_CASE("a text without data is refused") {
  check_fault("", 0, "no data");
  check_fault("! only\n\n  \t\r\n", 0, "no data");
  check_fault("# GHz S RI\n", 0, "no data lines");
}

TEST_CASE("a version 1 text needs its option line before the data") {
  check_fault("1 .1 .2\n2 .1 .2\n", 1, "option line");
  check_fault("1 .1 .2\n# GHz S RI\n2 .1 .2\n", 1, "option line");
}

TEST_CASE("what does not belong in an option line is named") {
  check_fault("# GHz S RI R\n1 0 0", 1, "not followed by a resistance");
  check_fault("# GHz S RI R 0\n1 0 0", 1, "above 0");
  check_fault("# GHz S RI R -50\n1 0 0", 1, "above 0");
  check_fault("# GHz S RI R 50 j3\n1 0 0", 1, "\"j3\"");
  check_fault("# GHz Q RI\n1 0 0", 1, "\"q\"");
  check_fault("# GHz MHz S RI\n1 0 0", 1, "frequency unit twice");
  check_fault("# GHz S Z RI\n1 0 0", 1, "parameter twice");
  check_fault("# GHz S RI MA\n1 0 0", 1, "number format twice");
  check_fault("# R 50 GHz S RI R 75\n1 0 0", 1, "R twice");
  check_fault("# GHz R 50 75 S RI\n1 0 0 0 0 0 0 0 0", 1, "must end the option line");
  check_fault("# GHz S RI R 50 75\n1 0 0", 1, "2 reference resistances");
  check_fault("# GHz H RI\n1 0 0", 1, "2-ports");
}

TEST_CASE("a word that is no number is quoted on its line, alone") {
  check_fault(kOnePort + "1 .1 .2\n2 x .2\n3 .1 .2\n", 3, "\"x\"");
  check_fault(kOnePort + "1 .1 .2\nabc .1 .2\n3 .1 .2\n", 3, "\"abc\"");
  check_fault("# GHz Z RI\n1 nan .2\n", 2, "\"nan\"");
  check_fault(kOnePort + "1 inf .2\n", 2, "\"inf\"");
  check_fault(kOnePort + "1 1e999 .2\n", 2, "finite");
  check_fault(kOnePort + "1 0,5 .2\n", 2, "\"0,5\"");
  check_fault(kOnePort + "1 \xC2\xB5 .2\n", 2, "\"??\"");
  check_fault(kOnePort + std::string("1 \0 .2\n", 7), 2, "\"?\"");
  check_fault("# GHz S DB\n1 99999 .2\n", 2, "too large");
}

TEST_CASE("frequencies must increase and not be negative") {
  check_fault(kOnePort + "2 .1 .2\n2 .1 .2\n3 .1 .2\n", 3, "2 GHz does not follow 2 GHz");
  check_fault(kOnePort + "2 .1 .2\n1 .1 .2\n3 .1 .2\n", 3, "must increase");
  check_fault(kOnePort + "-1 .1 .2\n", 2, "negative");
  check_fault("# GHz S RI\n2 1 0 0 0 0 0 1 0\n1 1 0 0 0 0 0 1 0\n", 3, "must increase");
}

TEST_CASE("version 1 lines must have the shape of their port count") {
  check_fault(kOnePort + ".1 .2\n1 .1 .2\n", 2, "a frequency and then pairs");
  check_fault(kOnePort + "1 .1 .2\n2 .1 .2 .3 .4\n", 3, "wanted 3 a line");
  check_fault(kOnePort + "1 .1 .2\n2 .1 .2\n.3 .4\n", 4, "wanted 3 a line");
  check_fault(kOnePort + "1 .1 .2\n", 2, "wanted 9 a line", 2);
  check_fault(kOnePort + "1 0 0 0 0 0 0 0 0\n", 2, "wanted 3 a line", 1);
  check_fault(kOnePort + "1 0 0 0 0\n0 0 0 0\n", 2, "wanted 9 a line");
  check_fault(kOnePort + "1 0 0 0 0\n", 2, "2 pairs of numbers");
  check_fault(kOnePort + "1\n", 2, "0 pairs");
}

TEST_CASE("rows of three and more ports must start lines of at most four pairs") {
  const std::string row = " 0 0 0 0 0 0\n";
  check_fault("# GHz S RI\n1" + row + row, 2, "2 whole rows", 3);
  check_fault("# GHz S RI\n1 0 0 0 0 0 0 0 0\n 0 0 0 0 0 0 0 0 0 0\n", 2, "ends inside this line",
              3);
  check_fault("# GHz S RI\n1 0 0 0 0 0 0 0 0 0 0\n", 2, "at most 4", 5);
}

TEST_CASE("noise lines have five increasing numbers") {
  const std::string two = "# GHz S RI\n5 0 0 0 0 0 0 0 0\n";
  CHECK(faults(two + "1 2 3 4 5\n2 2 3 4 5\n").empty());
  check_fault(two + "1 2 3 4 5\n1 2 3 4 5\n", 4, "must increase");
  check_fault(two + "1 2 3 4 5\n2 2 3\n", 4, "noise data, wanted 5");
  check_fault(two + "6 2 3 4 5\n", 3, "wanted 9 a line");
}

TEST_CASE("keywords need [Version] as the first line") {
  check_fault("# GHz S RI\n1 0 0\n[End]\n", 3, "without [Version]");
  check_fault("[Number of Ports] 1\n# GHz S RI\n" + kOne + kData1, 1, "[Version] 2.0");
  check_fault("[Version] 3.0\n# GHz S RI\n" + kPorts1 + kOne + kData1, 1, "2.0 or 2.1");
}

TEST_CASE("a keyword out of order, repeated or missing is named") {
  check_fault(kVersion2 + kOne + kPorts1 + kData1, 3, "[Number of Ports] must stand before");
  check_fault("[Version] 2.0\n" + kPorts1 + "# GHz S RI\n" + kOne + kData1, 2, "option line");
  check_fault(kVersion2 + kPorts1 + kOne + kOne + kData1, 5, "second time");
  check_fault(kVersion2 + kPorts1 + kData1, 0, "[Number of Frequencies] is missing");
  check_fault(kVersion2 + kPorts1 + kOne + "[Network Data]\n1 0 0\n", 0, "[End] is missing");
  check_fault(kVersion2 + kPorts1 + kOne + kData1 + "1\n", 8, "after [End]");
  check_fault(
      kVersion2 + "[Number of Ports] 2\n" + kOne + "[Network Data]\n1 0 0 0 0 0 0 0 0\n[End]\n", 0,
      "[Two-Port Data Order] is missing");
  check_fault(kVersion2 + kPorts1 + "[Two-Port Data Order] 12_21\n" + kOne + kData1, 4,
              "for 2 ports");
  check_fault(kVersion2 + kPorts1 + kOne + "[Network Data]\n1 0 0\n[Reference] 50\n[End]\n", 7,
              "[Reference] must stand before");
  check_fault("[Version] 2.0\n# GHz S RI R 50 75\n" + kPorts1 + kOne + kData1, 2,
              "[Reference] for the ports");
}

TEST_CASE("keyword spelling is checked") {
  check_fault(kVersion2 + " " + kPorts1 + kOne + kData1, 3, "column 1");
  check_fault(kVersion2 + "[ Number of Ports] 1\n" + kOne + kData1, 3, "single spaces");
  check_fault(kVersion2 + "[Number  of Ports] 1\n" + kOne + kData1, 3, "single spaces");
  check_fault(kVersion2 + kPorts1 + "[Colour] red\n" + kOne + kData1, 4, "unknown keyword");
  check_fault(kVersion2 + kPorts1 + "[Matrix Format\n" + kOne + kData1, 4, "closing bracket");
  CHECK(faults("[VERSION] 2.0\n# ghz\n[number-of-ports] 1\n" + kOne + kData1).empty());
}

TEST_CASE("keyword arguments are checked") {
  for (const std::string& bad : std::vector<std::string>{"0", "17", "-1", "x", "1.5", "1e0"}) {
    const auto found = faults(kVersion2 + "[Number of Ports] " + bad + "\n" + kOne + kData1);
    REQUIRE(!found.empty());
    CHECK(found[0].line == 3);
  }
  check_fault(kVersion2 + kPorts1 + "[Matrix Format] Round\n" + kOne + kData1, 4,
              "Full, Lower or Upper");
  check_fault(kVersion2 + kPorts1 + "[Mixed-Mode Order] D2,3 C2,3\nS1\n" + kOne + kData1, 4,
              "mixed-mode");
  check_fault(kVersion2 + kPorts1 + "[Reference] 50 75\n" + kOne + kData1, 4, "2 numbers");
  check_fault(kVersion2 + kPorts1 + "[Reference] -5\n" + kOne + kData1, 4, "above 0");
  check_fault(kVersion2 + kPorts1 + kOne + kData1, 3, "wanted 2", 2);
}

TEST_CASE("version 2 blocks must be as long as their counts say") {
  check_fault(kVersion2 + kPorts1 + kOne + "[Network Data]\n1 0 0 2 0 0\n[End]\n", 5,
              "holds 6 numbers, wanted 3");
  check_fault(kVersion2 + kPorts1 + "1 2 3\n" + kOne + kData1, 4, "data follow [Network Data]");
  const std::string two = kVersion2 + kPorts2 + kOne;
  const std::string data = "[Network Data]\n1 0 0 0 0 0 0 0 0\n";
  check_fault(two + data + "[Noise Data]\n1 2 3 4 5\n[End]\n", 8, "[Number of Noise Frequencies]");
  check_fault(two + "[Number of Noise Frequencies] 1\n" + data + "[End]\n", 6,
              "without [Noise Data]");
  check_fault(two + "[Number of Noise Frequencies] 1\n" + data + "[Noise Data]\n1 2 3 4\n[End]\n",
              9, "holds 4 numbers, wanted 5");
  check_fault(
      kVersion2 + kPorts1 + "[Number of Frequencies] 2\n[Network Data]\n2 0 0\n1 0 0\n[End]", 7,
      "must increase");
  CHECK(has_fault(kVersion2 + kPorts1 + kOne + "[Begin Information]\n[End]\n", 0,
                  "without [End Information]"));
}

TEST_CASE("a matrix without a scattering form is refused on its line") {
  // Z = -R oscillates: (Z - R) / (Z + R) does not exist.
  check_fault("# GHz Z RI R 50\n1 .5 0\n2 -1 0\n", 3, "no scattering form");
}

TEST_CASE("all faults of a text are reported, in the order of its lines") {
  const auto found = faults("# GHz Q RI R -1\n1 x 0\n1 0\n0 0 0\n0 0 0\n3 4 5 6 7\n", 1);
  REQUIRE(found.size() == 6);
  for (std::size_t i = 1; i < found.size(); ++i) CHECK(found[i].line >= found[i - 1].line);
  CHECK(found.front().line == 1);
  CHECK(found.back().line == 6);
}

TEST_CASE("no more faults are reported than asked for") {
  std::string text = kOnePort;
  for (int i = 0; i < 100; ++i) text += "x y z\n";
  CHECK(faults(text).size() == 20);
  CHECK(faults(text, 0, 3).size() == 3);
  CHECK(faults(text, 0, 0).size() == 1);
}

TEST_CASE("texts, points and ports have their limits") {
  std::string text = "# Hz S RI\n";
  for (int i = 1; i <= 10'000; ++i) text += std::to_string(i) + " 0 0\n";
  CHECK(faults(text).empty());
  check_fault(text + "10001 0 0\n10002 0 0\n", 10'002, "more than 10000");
  check_fault(std::string((1 << 20) + 1, ' '), 0, "at most 1048576");
  check_fault(std::string(1 << 20, ' '), 0, "no data");
  check_fault(kOnePort + "1 0 0\n", 0, "1 to 16", 17);
  check_fault(kOnePort + "1 0 0\n", 0, "1 to 16", -1);
  CHECK(has_fault(kVersion2 + kPorts1 + "[Number of Frequencies] 10001\n", 4, "1 to 10000"));
}

}  // namespace
}  // namespace bandwright
