// What the fold needs of a field that does not change during the season, and the weather of one
// hour as it is on the field. This file must not know what the hours are used for.
#pragma once

#include <optional>
#include <span>
#include <string>
#include <vector>

#include "core/crop/traits.hpp"
#include "core/field/field.hpp"
#include "core/risk/rules.hpp"
#include "core/units/time.hpp"
#include "core/weather/hour.hpp"
#include "core/weather/station.hpp"

namespace antherd::season {

struct Plan {
  field::Field field;
  crop::Traits traits;
  risk::Rules rules;
  Calendar calendar;                       // farm time
  std::vector<weather::Station> stations;  // in the field's order

  weather::Place place() const { return {field.latitude, field.longitude, field.elevation}; }
  /// 00:00 farm time of the sowing date.
  HourStart first_hour() const;
};

/// One hour of weather on the field (science §4). What was not measured is nothing.
struct Air {
  HourStart start;
  int station = -1;                         // index into the plan's stations; −1: a gap
  const weather::Hour* measured = nullptr;  // as measured there; lives as long as the hours do
  std::optional<Celsius> temperature;       // at the field, rounded to 1e-6
  std::optional<Percent> humidity;
  std::optional<Celsius> dew_point;
  std::optional<Kilopascal> vpd;
  std::optional<MetrePerSecond> wind;  // at 2 m
  std::optional<double> solar;         // measured, W/m²
  std::optional<Millimetre> rain;
  Millimetre rain_for_wetness{0};
  std::optional<double> wet_minutes;
  bool whole_degrees = false;
  bool daylight = false;        // sun up at the hour's middle
  double extraterrestrial = 0;  // Ra, MJ m⁻² h⁻¹

  bool valid() const { return temperature && humidity; }
};

/// From a station's hour to the field's: the measured offset (first station) or the lapse rate,
/// 6.5 °C/km by day (ISO 2533) and 3.0 by night (Minder et al. 2010; Blandford et al. 2008);
/// vapour pressure kept, humidity capped at 100 %. Source: science §4.
/// @param hour  nothing for a gap
Air air_at_field(const Plan& plan, HourStart start, const weather::Hour* hour, int station);

/// The hours of a field's stations, each in time order; index as in Plan::stations.
using StationHours = std::vector<std::span<const weather::Hour>>;

/// Walks hour by hour and picks the station: the first in order whose hour is valid, else the
/// first with temperature.
class HourPicker {
 public:
  explicit HourPicker(StationHours hours) : hours_(std::move(hours)), at_(hours_.size(), 0) {}
  struct Pick {
    const weather::Hour* hour = nullptr;
    int station = -1;
  };
  /// Must be asked in time order.
  Pick pick(HourStart start);

 private:
  StationHours hours_;
  std::vector<std::size_t> at_;
};

}  // namespace antherd::season
