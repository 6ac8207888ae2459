#include "server/api/iso_time.h"

#include <chrono>
#include <cstdio>

namespace bandwright {

std::string iso_time(UnixMillis time) {
  using namespace std::chrono;
  const sys_time<milliseconds> point{milliseconds{time}};
  const auto day = floor<days>(point);
  const year_month_day date{day};
  const hh_mm_ss clock{point - day};
  char buffer[64];
  std::snprintf(
      buffer, sizeof buffer, "%04d-%02u-%02uT%02d:%02d:%02d.%03dZ", static_cast<int>(date.year()),
      static_cast<unsigned>(date.month()), static_cast<unsigned>(date.day()),
      static_cast<int>(clock.hours().count()), static_cast<int>(clock.minutes().count()),
      static_cast<int>(clock.seconds().count()), static_cast<int>(clock.subseconds().count()));
  return buffer;
}

}  // namespace bandwright
