// Hygrometers whose top end has drifted; see suspicion.hpp. Capacitive sensors do so in both
// directions (common practice).
#include <algorithm>
#include <chrono>

#include "core/weather/suspicion_parts.hpp"

namespace antherd::weather {
namespace {

using std::chrono::days;

constexpr std::size_t nights_judged = 30;
constexpr days nights_reach{150};
constexpr double honest_top = 92.0;     // %: reached in any humid night
constexpr double humid = 75.0;          // %: below it air that stands still is only dry
constexpr double still_humidity = 2.0;  // %
constexpr int still_hours = 4;
constexpr double cooling = 1.5;  // °C: it would lift the humidity by 8 % were no dew falling
constexpr double rain_of_a_humid_night = 1.0;  // mm

constexpr double saturated = 99.0;  // %
constexpr double high_sun = 20.0;   // degrees
constexpr double bright = 400.0;    // W/m²: no fog lets it through
constexpr double warming = 6.0;     // °C: it dries saturated air to 69 %
constexpr int hours_of_a_day = 2;
constexpr int days_of_ten = 4;
constexpr int hours_after_rain = 3;

}  // namespace

void LowTopWatch::end_night() {
  // A night near saturation speaks for the sensor, whatever it was.
  const bool counts =
      night_.dew || night_.rain >= rain_of_a_humid_night || night_.top >= honest_top;
  if (counts) humid_.push_back(night_);
  while (humid_.size() > nights_judged) humid_.pop_front();
  while (!humid_.empty() && night_.night - humid_.front().night > nights_reach) {
    humid_.pop_front();
  }
  low_.reset();
  if (humid_.size() == nights_judged) {
    double top = 0.0;
    for (const Night& night : humid_) top = std::max(top, night.top);
    if (top < honest_top) low_ = top;
  }
}

/// Air that cools while its relative humidity stands still loses water: dew is falling, and that
/// air is near saturation whatever the sensor says.
std::optional<Suspicion> LowTopWatch::look(const SunnyHour& now) {
  const Hour& hour = now.hour;
  if (now.humid_night != night_.night) {
    if (last_) end_night();
    night_ = Night{};
    night_.night = now.humid_night;
    still_ = 0;
  }
  const bool next = last_ && hour.start - *last_ == std::chrono::hours{1};
  last_ = hour.start;
  if (now.altitude < 0.0 && hour.rain_for_wetness) night_.rain += hour.rain_for_wetness->value;
  if (!hour.temperature || !hour.humidity) {
    still_ = 0;
  } else {
    const double humidity = hour.humidity->value, temperature = hour.temperature->value;
    night_.top = std::max(night_.top, hour.humidity_max->value);
    least_ = still_ > 0 ? std::min(least_, humidity) : humidity;
    most_ = still_ > 0 ? std::max(most_, humidity) : humidity;
    if (!next || now.altitude > 0.0 || most_ - least_ > still_humidity || still_ == 0) {
      still_ = 1;
      least_ = most_ = humidity;
      first_temperature_ = temperature;
    } else {
      ++still_;
    }
    night_.dew = night_.dew || (still_ >= still_hours && least_ >= humid &&
                                first_temperature_ - temperature >= cooling);
  }
  if (!low_ || !hour.humidity) return std::nullopt;
  return Suspicion{Reason::humidity_low_top, *low_};
}

/// Air in the sun that stays at 100 % while it warms, or under a sun that no fog lets through.
std::optional<Suspicion> HighTopWatch::look(const SunnyHour& now) {
  const Hour& hour = now.hour;
  if (now.solar_day != day_) {
    day_ = now.solar_day;
    hours_ = 0;
  }
  while (!days_.empty() && day_ - days_.front() >= days{10}) days_.pop_front();
  const bool raining = hour.rain && hour.rain->value > 0.0;
  since_rain_ = raining ? 0 : since_rain_ + 1;
  const bool at_top = hour.temperature && hour.humidity && hour.humidity->value >= saturated;
  if (!at_top || now.altitude < 0.0) {
    from_.reset();
  } else {
    const double temperature = hour.temperature->value;
    if (!from_) from_ = temperature;
    const bool in_sun = now.altitude >= high_sun && since_rain_ > hours_after_rain;
    const bool no_fog = hour.solar ? hour.solar->value >= bright : temperature - *from_ >= warming;
    if (in_sun && no_fog && ++hours_ == hours_of_a_day) days_.push_back(day_);
  }
  if (days_.size() < days_of_ten || !hour.humidity) return std::nullopt;
  return Suspicion{Reason::humidity_high_top, hour.humidity_max->value};
}

}  // namespace antherd::weather
