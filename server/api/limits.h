// The limits of one request. `/v1/service` shows them, the decoder enforces them.
#pragma once

#include <cstddef>
#include <cstdint>

namespace bandwright::limits {

inline constexpr int kJsonDepth = 32;
inline constexpr std::size_t kJsonValues = 100'000;
inline constexpr std::size_t kStringBytes = 64u << 10;
inline constexpr std::size_t kTouchstoneBytes = 1u << 20;
inline constexpr int kJsonParsesAtOnce = 2;

inline constexpr std::size_t kFaults = 50;

inline constexpr std::size_t kNameBytes = 200;
inline constexpr std::size_t kLoadPoints = 10'000;
inline constexpr std::size_t kLoadStates = 8;
inline constexpr std::size_t kGoals = 32;
inline constexpr std::size_t kElements = 8;
inline constexpr std::size_t kTopologies = 4096;
inline constexpr std::size_t kListedValues = 500;
inline constexpr int kToleranceSamples = 1'000'000;
inline constexpr int kDesigns = 50;
inline constexpr std::int64_t kSeed = 9'007'199'254'740'991;  // the largest every JSON reader keeps
inline constexpr double kRunSecondsLeast = 0.1;
inline constexpr double kRunSeconds = 3600;
inline constexpr double kRunSecondsDefault = 60;
inline constexpr int kSweepPoints = 10'000;

inline constexpr int kWaitSeconds = 55;
inline constexpr int kPageSize = 50;
inline constexpr int kPageSizeMost = 500;

}  // namespace bandwright::limits
