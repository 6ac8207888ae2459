// Preferred values of IEC 60063.
#pragma once

#include <optional>
#include <span>
#include <string_view>
#include <vector>

namespace bandwright {

enum class Series { e3, e6, e12, e24, e48, e96, e192 };

std::string_view series_name(Series series);                    // "E24"
std::optional<Series> series_from_name(std::string_view name);  // exact, upper case
std::span<const Series> all_series();

// The values of one decade, 1.0 <= value < 10, increasing.
std::span<const double> decade(Series series);

// All preferred values in [min, max], increasing. Each is the closest double to its decimal
// figure (4.7e-9, not 4.7 * 1e-9). Precondition: 0 < min <= max, both finite.
std::vector<double> preferred_values(Series series, double min, double max);

}  // namespace bandwright
