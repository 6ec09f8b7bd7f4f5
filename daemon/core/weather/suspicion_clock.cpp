// Stamps that do not fit the sun; see suspicion.hpp. Solar radiation tells them where it is
// measured, else the day's course of temperature.
#include <algorithm>
#include <chrono>
#include <cmath>
#include <numbers>

#include "core/weather/suspicion_parts.hpp"

namespace antherd::weather {
namespace {

using std::chrono::days;

constexpr int days_judged = 10;
constexpr int days_needed = 8;
constexpr int hours_of_a_day = 20;        // fewer say nothing of its course
constexpr double off_by_sun = 2.0;        // h; honest records were seen up to 1.4
constexpr double sun_that_counts = 20.0;  // W/m², mean of the ten days
constexpr double concentrated = 0.3;      // of the radiation's wave: a lamp all night is none
constexpr double course_needed = 2.5;     // °C, half the range of the mean day
constexpr double warmest_hour = 14.6;     // mean solar time, of the first harmonic
constexpr double off_by_warmth = 4.0;     // h; honest records were seen 2.1 either side

double hours_of(std::complex<double> wave) { return std::arg(wave) * 12.0 / std::numbers::pi; }

/// −12…12 h.
double around(double difference) { return difference - 24.0 * std::round(difference / 24.0); }

}  // namespace

ClockWatch::ClockWatch(const Station& station) : place_(station.place) {
  // Samples of an instant, every hour on the hour, are of its start and not of its middle.
  if (station.stamp != Stamp::instant) return;
  const double interval = std::min(1.0, static_cast<double>(station.interval.count()) / 3600.0);
  centre_ = (1.0 - interval) / 2.0;
}

void ClockWatch::add(const SunnyHour& now) {
  Day& day = days_.back();
  const double clock = now.solar_clock - 0.5 + centre_;
  const Wave turn = std::polar(1.0, clock * std::numbers::pi / 12.0);
  if (now.hour.temperature) {
    ++day.hours;
    day.temperature += now.hour.temperature->value;
    day.temperature_wave += now.hour.temperature->value * turn;
    day.clock_wave += turn;
  }
  if (!now.hour.solar) return;
  ++day.solar_hours;
  day.solar += now.hour.solar->value;
  day.solar_wave += now.hour.solar->value * turn;
  // A clear sky over the same hours: holes, the season and the equation of time cancel.
  const Instant then =
      Instant(now.hour.start) + Seconds(static_cast<std::int64_t>(std::lround(centre_ * 3600.0)));
  const double altitude = sun_altitude(then, place_).value;
  day.sun_wave += std::max(0.0, std::sin(altitude * std::numbers::pi / 180.0)) * turn;
}

std::optional<double> ClockWatch::by_sun() const {
  Wave measured, expected;
  double sum = 0.0;
  int seen = 0, hours = 0;
  for (const Day& day : days_) {
    if (day.solar_hours < hours_of_a_day) continue;
    ++seen;
    hours += day.solar_hours;
    sum += day.solar;
    measured += day.solar_wave;
    expected += day.sun_wave;
  }
  if (seen < days_needed || sum / hours < sun_that_counts) return std::nullopt;
  if (std::abs(measured) < concentrated * sum || std::abs(expected) < 1.0) return std::nullopt;
  return around(hours_of(measured) - hours_of(expected));
}

std::optional<double> ClockWatch::by_warmth() const {
  Wave wave;
  int seen = 0;
  for (const Day& day : days_) {
    if (day.hours < hours_of_a_day) continue;
    ++seen;
    const double mean = day.temperature / day.hours;
    wave += (day.temperature_wave - mean * day.clock_wave) * (2.0 / day.hours);
  }
  if (seen < days_needed || std::abs(wave) < course_needed * seen) return std::nullopt;
  return around(hours_of(wave) - warmest_hour);
}

void ClockWatch::judge() {
  off_.reset();
  if (const auto late = by_sun()) {
    if (std::abs(*late) >= off_by_sun) off_ = late;
    return;
  }
  const auto late = by_warmth();
  if (late && std::abs(*late) >= off_by_warmth) off_ = late;
}

std::optional<Suspicion> ClockWatch::look(const SunnyHour& now) {
  if (days_.empty() || days_.back().day != now.solar_day) {
    while (!days_.empty() && now.solar_day - days_.front().day > days{days_judged}) {
      days_.pop_front();
    }
    judge();
    days_.emplace_back();
    days_.back().day = now.solar_day;
  }
  add(now);
  if (!off_) return std::nullopt;
  return Suspicion{Reason::clock_off, std::round(*off_)};
}

}  // namespace antherd::weather
