// Touchstone version 1 texts (1.0 and 1.1): an option line and then lines of numbers.
//
// Nothing says how many ports there are; the shape of the lines does. A line with an odd count of
// numbers starts a point (frequency and pairs), a line with an even count goes on with it:
//
//   1-port   f N11                      one line of 3 numbers
//   2-port   f N11 N21 N12 N22          one line of 9 numbers, columns first
//   n-port   f row 1 / row 2 / ...      each row on lines of its own, at most 4 pairs a line
//
// After the last point of a 2-port, lines of 5 numbers that start at or below the last frequency
// are noise data. They are checked and passed over.
#pragma once

#include <optional>
#include <span>

#include "solver/rf/touchstone_text.h"

namespace bandwright {

// `ports` as in parse_touchstone. Nothing is returned if the text is too far off to go on; a value
// is only good if `faults` stayed empty.
std::optional<NetworkData> read_version1(std::span<const TextLine> lines, int ports,
                                         FaultList& faults);

}  // namespace bandwright
