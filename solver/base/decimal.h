// Decimal numbers read exactly, with a power of ten applied before rounding.
//
// 3.3 times 1e-9 is not the double closest to 3.3e-9. Where a text holds a number and a unit apart,
// the exponent is therefore moved inside the decimal figure, so that "170.3 MHz" and "170300000"
// are the same double.
#pragma once

#include <optional>
#include <string_view>

namespace bandwright {

// The finite double closest to `text` * 10^shift. Nothing if `text` is not wholly a number
// (optional sign, digits with an optional point, optional exponent) or the value is out of range.
std::optional<double> read_decimal(std::string_view text, int shift = 0);

}  // namespace bandwright
