// One-ports given as samples over frequency, as arrays or as a Touchstone text.
#pragma once

#include <optional>

#include "server/api/decode_node.h"
#include "server/api/decode_one_port.h"

namespace bandwright {

// {"frequency_hz": [...], "z_re_ohm": [...], "z_im_ohm": [...]}, or with s_re and s_im, or y_re_s
// and y_im_s; reference_ohm 50.
std::optional<OnePort> decode_samples(const Node& samples, PortRole role);

// `node` holds "touchstone" and, for more than one port, "port".
std::optional<OnePort> decode_touchstone(const Node& node, PortRole role);

}  // namespace bandwright
