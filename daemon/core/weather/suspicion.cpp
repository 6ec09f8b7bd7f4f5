// Lets the watchers look at a station's hours and writes down what they say; see suspicion.hpp.
#include "core/weather/suspicion.hpp"

#include <algorithm>
#include <chrono>
#include <cmath>
#include <tuple>

#include "core/weather/suspicion_parts.hpp"

namespace antherd::weather {
namespace {

using std::chrono::days;
using std::chrono::hours;

constexpr int common_hours_needed = 168;
constexpr double temperature_drift = 1.5;  // °C
constexpr double humidity_drift = 8.0;     // %

SunnyHour in_the_sun(const Hour& hour, const Place& place) {
  const Instant middle = middle_of(hour.start);
  SunnyHour sunny{hour};
  sunny.altitude = sun_altitude(middle, place).value;
  const CivilTime clock = solar_time(middle, place.longitude);
  sunny.solar_day = std::chrono::floor<days>(clock);
  sunny.humid_night = std::chrono::floor<days>(clock + hours{12});
  sunny.solar_clock = static_cast<double>((clock - sunny.solar_day).count()) / 3600.0;
  return sunny;
}

void raise(Hour& hour, Element element, Verdict verdict, const Suspicion& said, int count) {
  hour.flags.push_back(
      Flag{element, verdict, said.reason, std::max(1, count), Instant(hour.start), said.value});
}

void leave_out_temperature(Hour& hour) {
  hour.temperature = hour.temperature_max = hour.temperature_min = std::nullopt;
  hour.n = 0;
  hour.coverage = 0.0;
}

void leave_out_humidity(Hour& hour) {
  hour.humidity = hour.humidity_max = hour.humidity_min = std::nullopt;
  hour.n_humidity = 0;
  hour.humidity_coverage = 0.0;
}

void write_unit(Hour& hour, const Suspicion& said) {
  const int n = hour.n;
  leave_out_temperature(hour);
  raise(hour, Element::temperature, Verdict::wrong, said, n);
  if (said.reason == Reason::columns_swapped) leave_out_humidity(hour);
}

void sort_flags(Hour& hour) {
  std::sort(hour.flags.begin(), hour.flags.end(), [](const Flag& a, const Flag& b) {
    return std::tie(a.element, a.reason, a.verdict) < std::tie(b.element, b.reason, b.verdict);
  });
}

struct Difference {
  double temperature = 0.0, humidity = 0.0;
  int n = 0;
};

}  // namespace

struct Suspector::Watchers {
  explicit Watchers(const Station& station)
      : place(station.place), unit(station.place), clock(station) {}

  Place place;
  UnitWatch unit;
  ClockWatch clock;
  LowTopWatch low_top;
  HighTopWatch high_top;
};

Suspector::Suspector(const Station& station) : watchers_(std::make_unique<Watchers>(station)) {}
Suspector::Suspector(const Suspector& other)
    : watchers_(std::make_unique<Watchers>(*other.watchers_)) {}
Suspector& Suspector::operator=(const Suspector& other) {
  *watchers_ = *other.watchers_;
  return *this;
}
Suspector::~Suspector() = default;

void Suspector::judge(Hour& hour) {
  const SunnyHour sunny = in_the_sun(hour, watchers_->place);
  const auto wrong = watchers_->unit.look(sunny);
  const auto late = watchers_->clock.look(sunny);
  // What stands in a wrong column says nothing of the hygrometer.
  const auto low = wrong ? std::nullopt : watchers_->low_top.look(sunny);
  const auto high = wrong ? std::nullopt : watchers_->high_top.look(sunny);
  if (!wrong && !late && !low && !high) return;
  if (late && !wrong) raise(hour, Element::temperature, Verdict::suspect, *late, hour.n);
  if (low) raise(hour, Element::humidity, Verdict::suspect, *low, hour.n_humidity);
  if (high) raise(hour, Element::humidity, Verdict::suspect, *high, hour.n_humidity);
  if (wrong) write_unit(hour, *wrong);
  sort_flags(hour);
}

std::vector<Hour> with_suspicions(std::vector<Hour> hours, const Station& station) {
  Suspector suspector(station);
  for (Hour& hour : hours) suspector.judge(hour);
  return hours;
}

bool Drift::large() const {
  return std::abs(temperature) > temperature_drift || std::abs(humidity) > humidity_drift;
}

std::optional<Drift> drift_between(std::span<const Hour> a, std::span<const Hour> b,
                                   Instant until) {
  const Instant middle = until - days{14}, first = until - days{28};
  Difference before, after;
  auto other = b.begin();
  for (const Hour& hour : a) {
    if (Instant(hour.start) < first || end_of(hour.start) > until || !hour.valid()) continue;
    while (other != b.end() && other->start < hour.start) ++other;
    if (other == b.end()) break;
    if (other->start != hour.start || !other->valid()) continue;
    Difference& half = Instant(hour.start) < middle ? before : after;
    half.temperature += hour.temperature->value - other->temperature->value;
    half.humidity += hour.humidity->value - other->humidity->value;
    ++half.n;
  }
  if (before.n < common_hours_needed || after.n < common_hours_needed) return std::nullopt;
  Drift drift;
  drift.temperature = after.temperature / after.n - before.temperature / before.n;
  drift.humidity = after.humidity / after.n - before.humidity / before.n;
  drift.hours_before = before.n;
  drift.hours_after = after.n;
  return drift;
}

}  // namespace antherd::weather
