#include "server/http/peer_limits.h"

#include <doctest/doctest.h>

namespace bandwright {
namespace {

using Admission = PeerLimits::Admission;

TEST_CASE("a peer is refused past its share while others are served") {
  PeerLimits limits(10, 2, 5);
  CHECK(limits.admit("a") == Admission::served);
  CHECK(limits.admit("a") == Admission::served);
  CHECK(limits.admit("a") == Admission::refused);
  CHECK(limits.admit("b") == Admission::served);
  CHECK(limits.open() == 3);
}

TEST_CASE("everyone is refused past the limit of all, and dropped past that of the refused") {
  PeerLimits limits(2, 2, 1);
  CHECK(limits.admit("a") == Admission::served);
  CHECK(limits.admit("b") == Admission::served);
  CHECK(limits.admit("c") == Admission::refused);
  CHECK(limits.admit("d") == Admission::dropped);
}

TEST_CASE("a place that was given back can be taken again") {
  PeerLimits limits(1, 1, 1);
  REQUIRE(limits.admit("a") == Admission::served);
  REQUIRE(limits.admit("a") == Admission::refused);
  limits.release("a", Admission::refused);
  CHECK(limits.admit("a") == Admission::refused);
  limits.release("a", Admission::served);
  CHECK(limits.open() == 0);
  CHECK(limits.admit("b") == Admission::served);
}

}  // namespace
}  // namespace bandwright
