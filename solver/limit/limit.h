// The best match that any network of any size could give: a bound from in-band data alone.
//
// Whatever a passive network is made of, the reflection it presents to the load is analytic and at
// most 1 in the right half plane. For a worst mismatch r in the bands, that reflection must also
// stay, at each in-band frequency, in a disc about the load's conjugate that shrinks with r. Such a
// function exists exactly when a Hankel operator has norm at most 1 (Nehari, Annals of Mathematics
// 65, 1957; Helton, IEEE Trans. Circuits Syst. 28, 1981). The smallest r is the limit. README.md
// beside this file tells the method.
//
// What it binds: the transducer gain of every passive network, lossy ones too. The return loss it
// binds for lossless networks only, because loss improves a return loss.
#pragma once

#include <cstddef>
#include <vector>

#include "solver/rf/one_port.h"

namespace bandwright {

struct BandRange {
  double from_hz = 0;
  double to_hz = 0;
};

inline constexpr int kLimitRefinements = 4;
inline constexpr std::size_t kMostLimitBands = 3;

struct LimitOptions {
  // Successive sections to try, 1 to kLimitRefinements; each holds the one before.
  int refinements = kLimitRefinements;
  // No further section is tried once one lowers the return loss by less than this.
  double settled_db = 0.005;
};

// The return loss is never below the true limit, save for rounding (under 0.001 dB), and falls to
// it as the section grows. All figures are finite: kPerfectReturnLossDb is a match without limit.
struct MatchLimit {
  double return_loss_db = 0;
  // Of the worst transducer gain in the bands, 10 log10(1 - r^2); -kPerfectReturnLossDb where no
  // power can reach the load.
  double gain_db = 0;
  // Number of rational functions in the last section, over all bands; 0 if none was needed.
  int section = 0;
  // By how much the last section lowered the return loss: an estimate, from above as a rule, of how
  // far it may still be above the true limit. After a single section that is not known, and large.
  double error_db = 0;
  // False if the limit holds but can, in general, not be approached: the source is reactive or
  // changes with frequency, or bands were left out.
  bool tight = true;
};

// The limit for one network that serves all `bands` at once (where they overlap they are one).
//
// A constant resistance as the source does not matter: a transformer reaches any other. With any
// other source the bound still holds, because source and network together are a passive one-port to
// the load; and, exchanging the ends, so does the bound with the source as the load. The smaller is
// reported. It is not tight: the source's reactance is not the network's to choose. Data that no
// passive one-port has, such as a reactance that is the same at all frequencies, weaken the bound
// for the other end by their distance from the nearest that one has.
//
// A band of no width has no limit, because any one frequency can be matched. A load that takes in
// no power at some in-band frequency cannot be matched: 0 dB. Of more than kMostLimitBands separate
// bands the hardest are kept, which is still a bound.
//
// Precondition: 0 <= from_hz <= to_hz, all bands inside what source and load cover. Deterministic;
// may be called from any thread.
MatchLimit match_limit(const OnePort& source, const OnePort& load,
                       const std::vector<BandRange>& bands, const LimitOptions& options = {});

}  // namespace bandwright
