// See arrivals.hpp.
#include "core/weather/arrivals.hpp"

#include <algorithm>

namespace antherd::weather {
namespace {

constexpr std::chrono::hours kept{24};
constexpr int arrivals_needed = 12;
constexpr std::chrono::hours span_needed{12};
constexpr Seconds ahead_counts{2 * 60};  // less is a matter of seconds and of rounding to minutes

}  // namespace

Arrivals::Hour& Arrivals::hour_at(Instant at) {
  const HourStart hour = hour_of(at);
  // What a clock that stood ahead has written is gone with it.
  std::erase_if(hours_, [&](const Hour& h) { return h.hour > hour || h.hour + kept <= hour; });
  if (hours_.empty() || hours_.back().hour != hour) {
    Hour fresh;
    fresh.hour = hour;
    hours_.push_back(fresh);
  }
  return hours_.back();
}

void Arrivals::came(Arrival arrival) {
  Hour& hour = hour_at(arrival.at);
  hour.youngest = hour.came == 0 ? arrival.age : std::min(hour.youngest, arrival.age);
  hour.oldest = hour.came == 0 ? arrival.age : std::max(hour.oldest, arrival.age);
  ++hour.came;
  last_ = arrival;
}

void Arrivals::refused(Instant at, int rows, Seconds least_ahead) {
  if (rows <= 0) return;
  Hour& hour = hour_at(at);
  hour.least_ahead = hour.refused == 0 ? least_ahead : std::min(hour.least_ahead, least_ahead);
  hour.refused += rows;
}

void Arrivals::forget_refused() {
  for (Hour& hour : hours_) hour.refused = 0;
  std::erase_if(hours_, [](const Hour& hour) { return hour.came == 0; });
}

bool Arrivals::any_refused() const {
  return std::any_of(hours_.begin(), hours_.end(), [](const Hour& h) { return h.refused > 0; });
}

std::optional<ClockDoubt> Arrivals::doubt(Instant now, Seconds interval) const {
  int arrivals = 0, rows = 0;
  std::optional<HourStart> first, last;
  Seconds youngest = Seconds::max(), oldest = Seconds::min(), least_ahead = Seconds::max();
  for (const Hour& hour : hours_) {
    if (hour.hour + kept <= hour_of(now) || hour.hour > hour_of(now)) continue;
    rows += hour.refused;
    if (hour.refused > 0) least_ahead = std::min(least_ahead, hour.least_ahead);
    if (hour.came == 0) continue;
    arrivals += hour.came;
    youngest = std::min(youngest, hour.youngest);
    oldest = std::max(oldest, hour.oldest);
    first = first.value_or(hour.hour);
    last = hour.hour;
  }
  if (arrivals == 0 && rows > 0) return ClockDoubt{ClockDoubt::How::refused, least_ahead};
  if (arrivals < arrivals_needed || *last - *first < span_needed) return std::nullopt;
  if (youngest > interval + late_on_arrival) return ClockDoubt{ClockDoubt::How::behind, youngest};
  if (oldest <= -ahead_counts) return ClockDoubt{ClockDoubt::How::ahead, -oldest};
  return std::nullopt;
}

}  // namespace antherd::weather
