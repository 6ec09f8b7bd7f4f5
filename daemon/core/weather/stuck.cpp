// Sensors that do not move; see judge_stuck in judge.hpp.
// This file must not know hours.
#include <algorithm>
#include <cmath>
#include <cstddef>
#include <optional>

#include "core/weather/judge.hpp"

namespace antherd::weather {
namespace {

constexpr double hair = 1e-9;  // decimal readings subtract to a hair beside their difference

constexpr Seconds temperature_stretch{6 * 3600};
constexpr double temperature_move = 0.1;  // °C: less is none
constexpr double humidity_moves = 10.0;   // %: so much says that the air did change
constexpr Seconds humidity_stretch{12 * 3600};
constexpr Seconds fog_stretch{24 * 3600};  // fog is real: it holds a sensor for long
constexpr double fog_humidity = 95.0;      // %
constexpr double humidity_move = 1.0;      // %
// At its top a hygrometer stands still through days of rain or fog. Only air that warms or cools by
// so much in the stretch would have moved it: it dries saturated air to 69 % (15 to 21 °C, FAO-56
// eq. 11). A judgement: wet days swing less, dry sunny ones more.
constexpr double drying_swing = 6.0;  // °C

/// The places of a sliding window's extreme values, the oldest first. Linear in all its calls.
class Extremes {
 public:
  explicit Extremes(double sign) : sign_(sign) {}

  bool empty() const { return head_ == places_.size(); }
  std::size_t front() const { return places_[head_]; }
  void clear() {
    places_.clear();
    head_ = 0;
  }
  void push(const Series& series, std::size_t place) {
    const double value = sign_ * series[place].value;
    while (!empty() && sign_ * series[places_.back()].value <= value) places_.pop_back();
    places_.push_back(place);
  }
  void pop_front() {
    ++head_;
    if (empty()) {
      clear();
    } else if (head_ > 1024 && 2 * head_ > places_.size()) {
      places_.erase(places_.begin(), places_.begin() + static_cast<std::ptrdiff_t>(head_));
      head_ = 0;
    }
  }

 private:
  double sign_;
  std::size_t head_ = 0;
  std::vector<std::size_t> places_;
};

/// The longest stretch up to the newest value in which values moved by less than `move`.
class FlatStretch {
 public:
  FlatStretch(const Series& series, double move, Seconds hole)
      : series_(series), move_(move), hole_(hole) {}

  void add(std::size_t place) {
    const bool anew = least_.empty() || series_[place].time - series_[newest_].time > hole_ ||
                      std::abs(series_[place].value - series_[newest_].value) >= move_ - hair;
    if (anew) {
      least_.clear();
      most_.clear();
      start_ = place;
    }
    newest_ = place;
    least_.push(series_, place);
    most_.push(series_, place);
    while (series_[most_.front()].value - series_[least_.front()].value >= move_ - hair) {
      Extremes& older = least_.front() < most_.front() ? least_ : most_;
      start_ = older.front() + 1;
      older.pop_front();
    }
    while (!series_[start_].used()) ++start_;
  }
  Seconds lasted() const { return series_[newest_].time - series_[start_].time; }
  double least() const { return series_[least_.front()].value; }

 private:
  const Series& series_;
  double move_;
  Seconds hole_;
  std::size_t start_ = 0, newest_ = 0;
  Extremes least_{-1.0}, most_{1.0};
};

/// By how much the used values of the last hours before a moment moved; nothing where there are
/// none. Ask in time order.
class Movement {
 public:
  Movement(const Series& series, Seconds length) : series_(series), length_(length) {}

  std::optional<double> until(Instant moment) {
    const Instant since = moment - length_;
    for (; next_ < series_.size() && series_[next_].time <= moment; ++next_) {
      if (series_[next_].time < since || !series_[next_].used()) continue;
      least_.push(series_, next_);
      most_.push(series_, next_);
    }
    for (Extremes* side : {&least_, &most_}) {
      while (!side->empty() && series_[side->front()].time < since) side->pop_front();
    }
    if (least_.empty()) return std::nullopt;
    return series_[most_.front()].value - series_[least_.front()].value;
  }

 private:
  const Series& series_;
  Seconds length_;
  std::size_t next_ = 0;
  Extremes least_{-1.0}, most_{1.0};
};

/// Whether air whose temperature moved so in a day cannot have kept its humidity: it swung too far,
/// or nothing at all moved, as of a logger that repeats its last reading.
bool speaks_against_fog(std::optional<double> moved) {
  return moved && (*moved >= drying_swing - hair || *moved < temperature_move - hair);
}

}  // namespace

void judge_stuck(Series& temperature, Series& humidity, Seconds interval) {
  const Seconds hole = std::max(one_hour, 2 * interval);
  FlatStretch still_air(temperature, temperature_move, hole);
  Movement humidity_movement(humidity, temperature_stretch);
  for (std::size_t i = 0; i < temperature.size(); ++i) {
    if (!temperature[i].used()) continue;
    still_air.add(i);
    if (still_air.lasted() < temperature_stretch) continue;
    if (humidity_movement.until(temperature[i].time).value_or(0.0) < humidity_moves - hair)
      continue;
    temperature[i].marks |= mark_stuck;
  }
  FlatStretch still_humidity(humidity, humidity_move, hole);
  Movement temperature_movement(temperature, fog_stretch);
  for (std::size_t i = 0; i < humidity.size(); ++i) {
    if (!humidity[i].used()) continue;
    still_humidity.add(i);
    const bool fog = still_humidity.least() >= fog_humidity;
    if (still_humidity.lasted() < (fog ? fog_stretch : humidity_stretch)) continue;
    if (fog && !speaks_against_fog(temperature_movement.until(humidity[i].time))) continue;
    humidity[i].marks |= mark_stuck;
  }
}

}  // namespace antherd::weather
