#include "solver/limit/limit.h"

#include <doctest/doctest.h>

#include <cmath>

#include "tests/solver/limit/limit_fixture.h"

namespace bandwright {
namespace {

using namespace limit_fixture;

const Circuit kShuntRc = parallel({resistor(50), capacitor(10e-12)});

void check_equal(const MatchLimit& a, const MatchLimit& b) {
  CHECK(a.return_loss_db == b.return_loss_db);
  CHECK(a.gain_db == b.gain_db);
  CHECK(a.section == b.section);
  CHECK(a.error_db == b.error_db);
}

TEST_CASE("a resistance can be matched perfectly") {
  const MatchLimit limit = limit_of(OnePort::constant(7), {{1e6, 1e9}});
  CHECK(limit.return_loss_db == kPerfectReturnLossDb);
  CHECK(limit.gain_db == 0);
  CHECK(limit.error_db == 0);
  CHECK(limit.tight);
}

TEST_CASE("one frequency can be matched perfectly, and so can no band at all") {
  CHECK(limit_of(kShuntRc, {{1e9, 1e9}}).return_loss_db == kPerfectReturnLossDb);
  CHECK(limit_of(kShuntRc, {}).return_loss_db == kPerfectReturnLossDb);
}

TEST_CASE("a load that takes in no power cannot be matched, in finite figures") {
  for (const Circuit& load : {inductor(1e-9), capacitor(1e-12), resistor(0)}) {
    const MatchLimit limit = limit_of(load, {{1e9, 2e9}});
    CHECK(limit.return_loss_db == 0);
    CHECK(limit.gain_db == -kPerfectReturnLossDb);
  }
}

TEST_CASE("the gain that is bound goes with the return loss that is bound") {
  const MatchLimit limit = limit_of(kShuntRc, {{1e9, 2e9}});
  const double r = reflection_from_return_loss_db(limit.return_loss_db);
  CHECK(limit.gain_db == doctest::Approx(10 * std::log10(1 - r * r)).epsilon(1e-12));
}

TEST_CASE("a larger section never raises the return loss") {
  const OnePort whip = sampled_load("whip-120-180mhz.s1p");
  double before_db = kPerfectReturnLossDb;
  int section = 0;
  for (int refinements = 1; refinements <= kLimitRefinements; ++refinements) {
    const MatchLimit limit = limit_of(whip, {{140e6, 160e6}}, refinements);
    CHECK(limit.return_loss_db < before_db);
    CHECK(limit.section > section);
    CHECK(limit.error_db == before_db - limit.return_loss_db);
    before_db = limit.return_loss_db;
    section = limit.section;
  }
}

TEST_CASE("refinement ends once it changes less than asked") {
  const OnePort load = OnePort::from_circuit(kShuntRc);
  const OnePort source = OnePort::constant(50);
  const MatchLimit rough = match_limit(source, load, {{1e9, 2e9}}, {kLimitRefinements, 1.0});
  const MatchLimit fine = match_limit(source, load, {{1e9, 2e9}}, {kLimitRefinements, 0.0});
  CHECK(rough.section < fine.section);
  CHECK(rough.error_db < 1.0);
  CHECK(rough.return_loss_db - fine.return_loss_db < rough.error_db);
}

TEST_CASE("a wider band never has a better limit") {
  const OnePort dipole = sampled_load("dipole-700-1060mhz.s1p");
  double before_db = kPerfectReturnLossDb;
  for (const double half_hz : {1e6, 3e6, 10e6, 30e6, 68e6, 100e6}) {
    const MatchLimit limit = limit_of(dipole, {{892e6 - half_hz, 892e6 + half_hz}}, 3);
    CHECK(limit.return_loss_db <= before_db);
    before_db = limit.return_loss_db;
  }
  CHECK(before_db < 30);
}

TEST_CASE("a further band never makes the limit better") {
  const double one_db = limit_of(kShuntRc, {{1e9, 1.5e9}}, 3).return_loss_db;
  const double two_db = limit_of(kShuntRc, {{1e9, 1.5e9}, {2e9, 2.2e9}}, 3).return_loss_db;
  const double three_db =
      limit_of(kShuntRc, {{2e9, 2.2e9}, {1e9, 1.5e9}, {3e9, 3.3e9}}, 3).return_loss_db;
  CHECK(two_db < one_db);
  CHECK(three_db < two_db);
}

TEST_CASE("bands that overlap count once") {
  check_equal(limit_of(kShuntRc, {{1e9, 2e9}}, 2),
              limit_of(kShuntRc, {{1.5e9, 2e9}, {1e9, 1.6e9}, {1.2e9, 1.2e9}}, 2));
}

TEST_CASE("of more bands than can be afforded the hardest give a bound that says so") {
  const std::vector<BandRange> bands{
      {1e9, 1.1e9}, {1.5e9, 1.9e9}, {2.5e9, 2.55e9}, {3e9, 3.4e9}, {4e9, 4.5e9}};
  const MatchLimit all = limit_of(kShuntRc, bands, 2);
  CHECK_FALSE(all.tight);
  const MatchLimit kept = limit_of(kShuntRc, {bands[1], bands[3], bands[4]}, 2);
  CHECK(kept.tight);
  check_equal(all, kept);
}

TEST_CASE("the source's resistance does not matter") {
  const OnePort load = OnePort::from_circuit(kShuntRc);
  check_equal(match_limit(OnePort::constant(50), load, {{1e9, 2e9}}),
              match_limit(OnePort::constant(3000), load, {{1e9, 2e9}}));
}

TEST_CASE("the limit is the same in other units of impedance and of frequency") {
  const Circuit scaled = parallel({resistor(50e3), capacitor(10e-12)});
  CHECK(limit_of(scaled, {{1e6, 2e6}}, 3).return_loss_db ==
        doctest::Approx(limit_of(kShuntRc, {{1e9, 2e9}}, 3).return_loss_db).epsilon(1e-7));
}

TEST_CASE("dual loads have one limit") {
  const Circuit load = series({inductor(2.3), parallel({resistor(1), capacitor(1.2)})});
  const Circuit dual = parallel({capacitor(2.3), series({resistor(1), inductor(1.2)})});
  const std::vector<BandRange> band{{0.3 * kPerRadian, kPerRadian}};
  CHECK(limit_of(load, band, 3).return_loss_db ==
        doctest::Approx(limit_of(dual, band, 3).return_loss_db).epsilon(1e-7));
}

TEST_CASE("samples of a circuit have the circuit's limit, few or very many") {
  const Circuit load = series({resistor(20), inductor(8e-9), capacitor(2e-12)});
  const std::vector<BandRange> band{{1.1e9, 1.5e9}};
  const double exact_db = limit_of(load, band, 3).return_loss_db;
  for (const int count : {60, 1001, 9000}) {
    const OnePort table = sampled(load, 1e9, 1.6e9, count);
    CHECK(std::abs(limit_of(table, band, 3).return_loss_db - exact_db) < 1e-3);
  }
}

TEST_CASE("the limit is the same to the last bit each time") {
  check_equal(limit_of(kShuntRc, {{1e9, 2e9}, {3e9, 4e9}}, 2),
              limit_of(kShuntRc, {{1e9, 2e9}, {3e9, 4e9}}, 2));
}

TEST_CASE("a reactive source is held to its own limit too") {
  const OnePort source = OnePort::from_circuit(kShuntRc);
  const MatchLimit limit = match_limit(source, OnePort::constant(75), {{1e9, 2e9}});
  CHECK_FALSE(limit.tight);
  CHECK(limit.return_loss_db == doctest::Approx(8.685889638).epsilon(1e-5));

  const OnePort load = OnePort::from_circuit(parallel({resistor(50), capacitor(15e-12)}));
  CHECK(match_limit(source, load, {{1e9, 2e9}}).return_loss_db ==
        doctest::Approx(8.685889638 / 1.5).epsilon(1e-5));
}

TEST_CASE("a sampled source of a passive circuit bounds the load as a resistance does") {
  const OnePort source = sampled(series({resistor(40), inductor(1e-9)}), 0.9e9, 2.1e9, 121);
  const MatchLimit limit = match_limit(source, OnePort::from_circuit(kShuntRc), {{1e9, 2e9}});
  CHECK_FALSE(limit.tight);
  CHECK(limit.return_loss_db >= 8.685889638);
  CHECK(limit.return_loss_db < 8.69);
}

TEST_CASE("a constant reactance, which no passive source has, weakens the bound at the load") {
  const OnePort source = OnePort::constant({50, 200});
  const MatchLimit limit = match_limit(source, OnePort::from_circuit(kShuntRc), {{1e9, 2e9}});
  CHECK_FALSE(limit.tight);
  CHECK(limit.return_loss_db > 8.8);
  // Source and load that match as they are: no network at all is perfect.
  const MatchLimit matched = match_limit(source, OnePort::constant({50, -200}), {{1e9, 2e9}});
  CHECK(matched.return_loss_db == kPerfectReturnLossDb);
}

}  // namespace
}  // namespace bandwright
