#include "server/http/log_line.h"

#include <doctest/doctest.h>

namespace bandwright {
namespace {

TEST_CASE("a log line is a list of JSON members whatever the values hold") {
  CHECK(LogLine("a \"b\" \\").add("n", -5).add("raw", "x\n\x7f\xE9").text() ==
        R"("msg":"a \"b\" \\","n":-5,"raw":"x\u000a\u007f\u00e9")");
}

}  // namespace
}  // namespace bandwright
