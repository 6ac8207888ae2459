// Strict reading of a JSON text from outside.
//
// One pass over the text builds the document and refuses on the way what the library would let
// pass or pay dearly for: depth over 32 (before anything deeper is built), more than 100,000
// values, a member given twice, NUL and trailing bytes, numbers no double can hold, strings over
// 64 KiB (1 MiB for a member called "touchstone"). At most two texts are read at once, because a
// parsed text can take thirty times its own size.
#pragma once

#include <string_view>

#include "server/api/fault.h"
#include "server/api/json.h"
#include "solver/base/result.h"

namespace bandwright {

// The document, or the first fault: the text cannot be read past it. A whole number written with a
// point or an exponent is held as an integer, so that 1, 1.0 and 1e0 are one value.
Result<Json, Fault> read_json(std::string_view text);

}  // namespace bandwright
