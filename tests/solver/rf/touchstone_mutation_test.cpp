// The Touchstone reader meets any bytes: it returns, and what it accepts is sound.

#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>
#include <string>
#include <vector>

#include "solver/base/random.h"
#include "solver/rf/touchstone.h"

namespace bandwright {
namespace {

const std::vector<std::string>& samples() {
  static const std::vector<std::string> kSamples{
      "! c\n# MHz S MA R 50\n2.000 0.894 -12.136\n3 .8 -20\n",
      "# MHz Z DB R 75\r\n100 .99 -4\r\n200 .80 -22\r\n300 .707 -45\r\n",
      "#\n2 .95 -26 3.57 157 .04 76 .66 -14\n22 .60 -144 1.30 40 .14 40 .56 -85\n4 .7 .64 69 .38\n",
      "# GHz H RI R 50 75\r1 .1 0 .2 0 .3 0 .4 0\r",
      "# GHz S RI\n1 1 0 2 0 3 0\n 1 0 2 0 3 0\n 1 0 2 0 3 0\n",
      "[Version] 2.0\n# MHz Y MA\n[Number of Ports] 1\n[Number of Frequencies] 2\n"
      "[Reference] 20.0\n[Network Data]\n100 74.25 -4\n200 60 -22\n[End]\n",
      "[Version] 2.1\n#\n[Number of Ports] 2\n[Two-Port Data Order] 21_12\n"
      "[Number of Frequencies] 1\n[Number of Noise Frequencies] 1\n[Reference] 50 25.0\n"
      "[Begin Information]\nx\n[End Information]\n[Matrix Format] Full\n[Network Data]\n"
      "2 .95 -26 3.57 157 .04 76 .66 -14\n[Noise Data]\n4 .7 .64 69 19\n[End]\n",
      "[Version] 2.0\n# GHz Z RI R 1e3\n[Number of Ports] 4\n[Reference] 50 75\n0.01 0.01\n"
      "[Number of Frequencies] 1\n[Matrix Format] Lower\n[Network Data]\n5 1 1\n1 1 1 1\n"
      "1 1 1 1 1 1\n1 1 1 1 1 1 1 1\n[End]\n"};
  return kSamples;
}

// Pieces that sit on the reader's decisions.
const std::vector<std::string>& pieces() {
  static const std::vector<std::string> kPieces{"\n",
                                                "\r",
                                                "\r\n",
                                                "!",
                                                "#",
                                                "[",
                                                "]",
                                                "[End]",
                                                "[Version] 2.0\n",
                                                "[Reference]",
                                                "[Number of Ports] 16\n",
                                                "1e308",
                                                "-1e308",
                                                "1e-308",
                                                "nan",
                                                "inf",
                                                "0",
                                                " ",
                                                "\t",
                                                "R",
                                                "-",
                                                "[Network Data]\n",
                                                "[Begin Information]\n",
                                                "[Mixed-Mode Order]",
                                                "\xFF",
                                                "99999999999999"};
  return kPieces;
}

// Draws numbers one after another.
class Dice {
 public:
  explicit Dice(std::uint64_t seed) : stream_(seed, 0) {}
  std::size_t below(std::size_t count) { return stream_.bits(next_++) % count; }

 private:
  RandomStream stream_;
  std::uint64_t next_ = 0;
};

void replace_digit(std::string& text, std::size_t from, Dice& dice) {
  const std::size_t at = text.find_first_of("0123456789", from);
  if (at != std::string::npos) text[at] = static_cast<char>('0' + dice.below(10));
}

std::string mutated(Dice& dice) {
  std::string text = samples()[dice.below(samples().size())];
  for (std::size_t turns = 1 + dice.below(4); turns > 0; --turns) {
    const std::size_t at = dice.below(text.size() + 1);
    switch (dice.below(9)) {
      case 0:
        text.insert(at, pieces()[dice.below(pieces().size())]);
        break;
      case 1:
        text.erase(at, 1 + dice.below(20));
        break;
      case 2:
        text.insert(at, 1, static_cast<char>(dice.below(256)));
        break;
      case 3:
        text.insert(at, text.substr(dice.below(text.size() + 1), dice.below(60)));
        break;
      case 4:
        text.resize(at);
        break;
      case 5:
        text.insert(std::min(text.find_first_of("\r\n", at), text.size()), "! any \xB5");
        break;
      case 6:
      case 7:
        replace_digit(text, at, dice);
        break;
      default:
        if (at < text.size()) text[at] = static_cast<char>(dice.below(256));
    }
  }
  return text;
}

void check_sound(const NetworkData& data) {
  const std::size_t points = data.frequency_hz.size();
  REQUIRE(points > 0);
  REQUIRE(data.reference_ohm.size() == static_cast<std::size_t>(data.ports));
  REQUIRE(data.scattering.size() == points * data.ports * data.ports);
  for (std::size_t k = 0; k < points; ++k) {
    REQUIRE(data.frequency_hz[k] >= 0);
    if (k > 0) REQUIRE(data.frequency_hz[k] > data.frequency_hz[k - 1]);
  }
  for (const double ohm : data.reference_ohm) REQUIRE(ohm > 0);
  for (const Complex& s : data.scattering) {
    REQUIRE(std::isfinite(s.real()));
    REQUIRE(std::isfinite(s.imag()));
  }
}

TEST_CASE("every mutated text is read soundly or refused with printable faults") {
  Dice dice(20);
  int accepted = 0;
  constexpr int kTexts = 20'000;
  for (int i = 0; i < kTexts; ++i) {
    const std::string text = mutated(dice);
    CAPTURE(text);
    const auto parsed =
        parse_touchstone(text, dice.below(4) == 0 ? static_cast<int>(dice.below(4)) : 0);
    if (parsed.ok()) {
      ++accepted;
      check_sound(*parsed);
      continue;
    }
    REQUIRE_FALSE(parsed.error().empty());
    for (const TextFault& fault : parsed.error()) {
      REQUIRE(fault.line >= 0);
      for (const char c : fault.message) REQUIRE((c >= 0x20 && c < 0x7F));
    }
  }
  // Both ways must have been walked often for the test to mean something.
  CHECK(accepted > kTexts / 50);
  CHECK(accepted < kTexts / 2);
}

}  // namespace
}  // namespace bandwright
