// Which share of a season's flowers heat has met, reckoned anew from the days' heat and from what
// is believed of flowering now (science §6, "Flowers exposed"). It must not know letters or levels.
#pragma once

#include <optional>
#include <span>
#include <vector>

#include "core/season/phenology.hpp"

namespace antherd::season {

/// One day's heat as flowers would meet it, whatever is believed of flowering.
struct DayHeat {
  CivilDay date{};
  bool severe = false;  // had an hour at 35.0 °C or more
  double low = 0;   // sterile share of flowers open that day, 0…1: T50 40, about sunrise + 6 h
  double high = 0;  // likewise: T50 35, all daylight hours alike
};

/// Shares of the season's flowers, 0…1, of one day.
struct DayExposure {
  CivilDay date{};
  bool severe = false;
  double share = 0;          // opened this day
  double low = 0, high = 0;  // affected by this day's heat, indicative
};

struct Exposure {
  double exposed = 0;             // opened on days with an hour at 35.0 °C or more
  double low = 0, high = 0;       // affected, indicative
  std::vector<DayExposure> days;  // with flowers, or severe; oldest first
  /// Exposed up to a day, that day included.
  double exposed_until(CivilDay day) const;
};

/// Sterile shares of one day from its hourly means. Nothing where no hour has daylight.
/// Source: science §6, "Affected"; judgement.
/// @param sunrise, sunset  of the day
std::optional<DayHeat> day_heat(CivilDay date, bool severe,
                                std::span<const std::pair<HourStart, double>> hours,
                                Instant sunrise, Instant sunset);

/// Low: each day's flowers meet that day. High: each flower counts once, with the worst day of the
/// 7 before it opens or its own, so that the days that heat reaches never add up beyond 1; flowers
/// due within the next 7 days count too. All 0 while flowering is not known.
/// @param heat  oldest first, one a day; today's may be the day so far
Exposure exposure_of(const Phenology& crop, const Plan& plan, std::span<const DayHeat> heat);

}  // namespace antherd::season
