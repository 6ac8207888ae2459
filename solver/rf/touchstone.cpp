#include "solver/rf/touchstone.h"

#include "solver/rf/touchstone_keywords.h"
#include "solver/rf/touchstone_points.h"
#include "solver/rf/touchstone_version1.h"
#include "solver/rf/touchstone_version2.h"

namespace bandwright {
namespace {

constexpr std::size_t kMostBytes = std::size_t{1} << 20;

// Version 2 texts start with [Version]. Any other keyword there is a version 2 text that lacks it.
std::optional<NetworkData> read(const std::vector<TextLine>& lines, int ports, FaultList& faults) {
  if (!is_keyword_line(lines.front())) return read_version1(lines, ports, faults);
  FaultList unused(1);
  const std::optional<KeywordLine> first = parse_keyword(lines.front(), unused);
  if (!first || first->keyword != Keyword::version) {
    faults.add(lines.front().number, "wanted \"[Version] 2.0\" before any other keyword");
  }
  return read_version2(lines, ports, faults);
}

}  // namespace

Result<NetworkData, std::vector<TextFault>> parse_touchstone(std::string_view text, int ports,
                                                             std::size_t max_faults) {
  FaultList faults(max_faults);
  if (text.size() > kMostBytes) {
    faults.add(0, "the text has " + std::to_string(text.size()) + " bytes, at most " +
                      std::to_string(kMostBytes) + " are read");
    return faults.sorted();
  }
  if (ports < 0 || ports > kMostPorts) {
    faults.add(0, "a port count of " + std::to_string(ports) + ", wanted 1 to " +
                      std::to_string(kMostPorts));
    return faults.sorted();
  }
  const std::vector<TextLine> lines = content_lines(text);
  if (lines.empty()) {
    faults.add(0, "the text holds no data");
    return faults.sorted();
  }
  std::optional<NetworkData> data = read(lines, ports, faults);
  if (!faults.empty() || !data) return faults.sorted();
  return std::move(*data);
}

}  // namespace bandwright
