#include "solver/base/decimal.h"

#include <doctest/doctest.h>

#include <string>
#include <vector>

namespace bandwright {
namespace {

TEST_CASE("a power of ten is applied before rounding") {
  CHECK(read_decimal("3.3", -9) == 3.3e-9);
  CHECK(read_decimal("170.3", 6) == 170.3e6);
  CHECK(read_decimal("1e-310", 12) == 1e-298);
  CHECK(read_decimal("1e310", -15) == 1e295);
  CHECK(read_decimal("+2.5e+3") == 2500.0);
  CHECK(read_decimal("-.5") == -0.5);
  CHECK(read_decimal("0", 400) == 0.0);
}

TEST_CASE("only a whole finite number is a decimal") {
  for (const std::string& text : std::vector<std::string>{
           "", "+", "-", "+-1", "1x", " 1", "1 ", "inf", "-inf", "nan", "0x1p3", "1e", "1e400",
           "1e-400", "1,5", "1e99999999999999999999"}) {
    CAPTURE(text);
    CHECK_FALSE(read_decimal(text));
    CHECK_FALSE(read_decimal(text, 3));
  }
  CHECK_FALSE(read_decimal("1e308", 6));
}

}  // namespace
}  // namespace bandwright
