// Touchstone version 2 texts (2.0 and 2.1): keywords say what the numbers are.
//
// [Version], the option line and [Number of Ports] come first, in this order; then the other
// keywords in any order; then [Network Data], perhaps [Noise Data], and [End]. Line breaks have no
// meaning among the numbers, and Y, Z, H and G values are in siemens and ohm. Noise data are
// checked and passed over. Mixed-mode data are refused.
#pragma once

#include <optional>
#include <span>

#include "solver/rf/touchstone_text.h"

namespace bandwright {

// `ports`: what the caller knows of the port count, 0 for nothing. A value is only good if `faults`
// stayed empty.
std::optional<NetworkData> read_version2(std::span<const TextLine> lines, int ports,
                                         FaultList& faults);

}  // namespace bandwright
