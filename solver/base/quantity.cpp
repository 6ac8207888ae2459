#include "solver/base/quantity.h"

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>
#include <optional>

#include "solver/base/decimal.h"

namespace bandwright {
namespace {

struct UnitEntry {
  Unit unit;
  std::string_view symbol;
  std::string_view wanted;  // completes "wanted ..."
  bool prefixed;
};

constexpr std::array<UnitEntry, 12> kUnits{{
    {Unit::hertz, "Hz", "a frequency in Hz, e.g. \"140 MHz\"", true},
    {Unit::ohm, "ohm", "a resistance or impedance in ohm, e.g. \"50 ohm\"", true},
    {Unit::henry, "H", "an inductance in H, e.g. \"3.3 nH\"", true},
    {Unit::farad, "F", "a capacitance in F, e.g. \"3.3 pF\"", true},
    {Unit::siemens, "S", "an admittance in S, e.g. \"20 mS\"", true},
    {Unit::metre, "m", "a length in m, e.g. \"12 mm\"", true},
    {Unit::watt, "W", "a power in W, e.g. \"5 W\"", true},
    {Unit::volt, "V", "a voltage in V, e.g. \"12 V\"", true},
    {Unit::ampere, "A", "a current in A, e.g. \"0.5 A\"", true},
    {Unit::decibel, "dB", "a level in dB, e.g. \"6 dB\"", false},
    {Unit::second, "s", "a time in s, e.g. \"30 s\"", true},
    {Unit::none, "", "a plain number without a unit, e.g. \"0.15\"", false},
}};

struct Prefix {
  char letter;
  int exponent;
};

// Large ones first: "mhz" then suggests MHz, which is what people mean.
constexpr std::array<Prefix, 9> kPrefixes{{{'T', 12},
                                           {'G', 9},
                                           {'M', 6},
                                           {'k', 3},
                                           {'m', -3},
                                           {'u', -6},
                                           {'n', -9},
                                           {'p', -12},
                                           {'f', -15}}};

const UnitEntry& entry(Unit unit) {
  return *std::find_if(kUnits.begin(), kUnits.end(),
                       [&](const UnitEntry& e) { return e.unit == unit; });
}

char lower(char c) {
  return c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
}

bool equal_ignoring_case(std::string_view a, std::string_view b) {
  return std::equal(a.begin(), a.end(), b.begin(), b.end(),
                    [](char x, char y) { return lower(x) == lower(y); });
}

bool is_digit(char c) {
  return c >= '0' && c <= '9';
}

// The same text in ASCII: micro and ohm signs, the typographic minus and no-break spaces have
// several code points that all mean one thing here.
std::string to_ascii(std::string_view text) {
  static constexpr std::array<std::pair<std::string_view, std::string_view>, 9> kSame{{
      {"\xC2\xB5", "u"},        // micro sign
      {"\xCE\xBC", "u"},        // Greek mu
      {"\xCE\xA9", "ohm"},      // Greek capital omega
      {"\xE2\x84\xA6", "ohm"},  // ohm sign
      {"\xE2\x88\x92", "-"},    // minus sign
      {"\xC2\xA0", " "},        // no-break space
      {"\xE2\x80\xAF", " "},    // narrow no-break space
      {"\xE2\x80\x89", " "},    // thin space
      {"\t", " "},
  }};
  std::string ascii;
  while (!text.empty()) {
    const auto same = std::find_if(kSame.begin(), kSame.end(),
                                   [&](const auto& s) { return text.starts_with(s.first); });
    if (same != kSame.end()) {
      ascii += same->second;
      text.remove_prefix(same->first.size());
    } else {
      ascii += text.front();
      text.remove_prefix(1);
    }
  }
  return ascii;
}

std::string_view trimmed(std::string_view text) {
  while (!text.empty() && text.front() == ' ') text.remove_prefix(1);
  while (!text.empty() && text.back() == ' ') text.remove_suffix(1);
  return text;
}

// `text` cut to a length fit for a message, with control characters masked.
std::string quoted(std::string_view text) {
  constexpr std::size_t kLongest = 40;
  std::size_t length = std::min(text.size(), kLongest);
  // A cut must not fall inside a UTF-8 sequence.
  while (length < text.size() && length > 0 && (text[length] & 0xC0) == 0x80) --length;
  std::string out = "\"";
  for (const char c : text.substr(0, length)) {
    out += static_cast<unsigned char>(c) < 0x20 || c == 0x7F ? '?' : c;
  }
  return out + (length < text.size() ? "...\"" : "\"");
}

struct ParsedUnit {
  Unit unit;
  int exponent;
};

std::optional<ParsedUnit> read_unit(std::string_view text) {
  for (const UnitEntry& e : kUnits) {
    if (e.symbol.empty() || text.size() < e.symbol.size()) continue;
    const std::string_view tail = text.substr(text.size() - e.symbol.size());
    const bool same = e.unit == Unit::ohm ? equal_ignoring_case(tail, e.symbol) : tail == e.symbol;
    if (!same) continue;
    const std::string_view head = text.substr(0, text.size() - tail.size());
    if (head.empty()) return ParsedUnit{e.unit, 0};
    if (head.size() > 1 || !e.prefixed) continue;
    for (const Prefix& prefix : kPrefixes) {
      if (prefix.letter == head.front()) return ParsedUnit{e.unit, prefix.exponent};
    }
  }
  return std::nullopt;
}

// What was probably meant by `text`, which is no unit as it stands; empty if nothing is close.
std::string near_miss(std::string_view text, const UnitEntry& wanted) {
  if (wanted.symbol.empty()) return {};
  if (equal_ignoring_case(text, wanted.symbol)) return std::string(wanted.symbol);
  if (!wanted.prefixed) return {};
  for (const Prefix& prefix : kPrefixes) {
    const std::string whole = prefix.letter + std::string(wanted.symbol);
    const bool bare_prefix = text.size() == 1 && text.front() == prefix.letter;
    if (bare_prefix || equal_ignoring_case(text, whole) || equal_ignoring_case(text, whole + "s")) {
      return whole;
    }
  }
  return {};
}

std::string unit_fault(std::string_view found, const UnitEntry& wanted) {
  std::string fault = "found ";
  if (read_unit(found)) {
    fault += found;
  } else if (std::any_of(found.begin(), found.end(), is_digit)) {
    fault += quoted(found) + " after the number";
  } else {
    fault += quoted(found) + ", which is no unit known here";
  }
  fault += ", wanted " + std::string(wanted.wanted);
  const std::string meant = near_miss(found, wanted);
  return meant.empty() ? fault : fault + "; did you mean \"" + meant + "\"?";
}

}  // namespace

std::string_view unit_symbol(Unit unit) {
  return entry(unit).symbol;
}

Result<double, std::string> parse_quantity(std::string_view text, Unit unit) {
  const UnitEntry& wanted = entry(unit);
  const std::string wish = "wanted " + std::string(wanted.wanted);
  const std::string ascii = to_ascii(text.substr(0, 200));
  std::string_view rest = trimmed(ascii);
  if (rest.empty()) return "found nothing, " + wish;
  if (text.size() > 200) return "found a text of more than 200 bytes, " + wish;

  const bool is_signed = rest.starts_with('+') || rest.starts_with('-');
  const std::string_view unsigned_rest = rest.substr(is_signed ? 1 : 0);
  if (rest.starts_with('+')) rest.remove_prefix(1);
  // Asked here because from_chars would also read "inf" and "nan".
  if (unsigned_rest.empty() || (!is_digit(unsigned_rest.front()) && unsigned_rest.front() != '.')) {
    return "found " + quoted(text) + ", which does not start with a number; " + wish;
  }
  double plain = 0;
  const auto read = std::from_chars(rest.data(), rest.data() + rest.size(), plain);
  if (read.ec == std::errc::invalid_argument) {
    return "found " + quoted(text) + ", which does not start with a number; " + wish;
  }
  const std::string_view number = rest.substr(0, read.ptr - rest.data());
  rest.remove_prefix(number.size());
  if (rest.size() > 1 && rest.front() == ',' && is_digit(rest[1])) {
    return "found a comma in " + quoted(text) + ": use a point as the decimal mark, and no comma";
  }
  rest = trimmed(rest);

  int exponent = 0;
  if (!rest.empty()) {
    const auto parsed = read_unit(rest);
    if (!parsed || parsed->unit != unit) return unit_fault(rest, wanted);
    exponent = parsed->exponent;
  }
  const std::optional<double> value = read_decimal(number, exponent);
  if (!value) return "found " + quoted(text) + ", which is too large or too small a number";
  return *value;
}

std::string format_quantity(double value, Unit unit, int digits) {
  const UnitEntry& shown = entry(unit);
  const std::string suffix = shown.symbol.empty() ? "" : " " + std::string(shown.symbol);
  digits = std::clamp(digits, 1, 17);
  std::array<char, 64> buffer;
  const auto plain = [&] {
    const auto end = std::to_chars(buffer.data(), buffer.data() + buffer.size(), value,
                                   std::chars_format::general, digits);
    return std::string(buffer.data(), end.ptr) + suffix;
  };
  if (!shown.prefixed || value == 0 || !std::isfinite(value))
    return value == 0 ? "0" + suffix : plain();

  // Rounding comes first, so that 999.96 kHz carries over to 1 MHz.
  const auto end = std::to_chars(buffer.data(), buffer.data() + buffer.size(), std::abs(value),
                                 std::chars_format::scientific, digits - 1);
  const std::string_view text(buffer.data(), end.ptr - buffer.data());
  const std::size_t mark = text.find('e');
  int exponent = 0;
  const std::size_t first = mark + (text[mark + 1] == '+' ? 2 : 1);
  std::from_chars(text.data() + first, text.data() + text.size(), exponent);
  std::string figures;
  std::copy_if(text.begin(), text.begin() + mark, std::back_inserter(figures), is_digit);

  const int group = static_cast<int>(std::floor(exponent / 3.0)) * 3;
  const auto prefix = std::find_if(kPrefixes.begin(), kPrefixes.end(),
                                   [&](const Prefix& p) { return p.exponent == group; });
  if (group != 0 && prefix == kPrefixes.end()) return plain();

  const std::size_t whole = static_cast<std::size_t>(exponent - group) + 1;
  if (figures.size() < whole) figures.resize(whole, '0');
  std::string fraction = figures.substr(whole);
  fraction.erase(fraction.find_last_not_of('0') + 1);
  std::string out = value < 0 ? "-" : "";
  out += figures.substr(0, whole);
  if (!fraction.empty()) out += "." + fraction;
  out += " ";
  if (group != 0) out += prefix->letter;
  return out + std::string(shown.symbol);
}

}  // namespace bandwright
