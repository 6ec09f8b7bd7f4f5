// A plain season for the scenario tests: one field on one station; a scenario says only what
// differs from it.
#pragma once

#include <vector>

#include "core/crop/traits.hpp"
#include "core/season/fold.hpp"
#include "support/weather_generator.hpp"

namespace antherd::seasons {

struct PlainSeason {
  double latitude = 46.74, longitude = -117.17, elevation = 800;
  std::chrono::year_month_day sown{std::chrono::year{2026}, std::chrono::April,
                                   std::chrono::day{28}};
  const char* crop = "coastal";
  field::Method irrigation = field::Method::overhead;
};

inline season::Plan plan_of(const PlainSeason& plain) {
  season::Plan plan;
  plan.field.name = "north bench";
  plan.field.stations = {"bench"};
  plan.field.latitude = Degree(plain.latitude);
  plan.field.longitude = Degree(plain.longitude);
  plan.field.elevation = Metre(plain.elevation);
  plan.field.sown = CivilDay{std::chrono::sys_days{plain.sown}.time_since_epoch()};
  plan.field.irrigation = plain.irrigation;
  plan.traits = *crop::traits_of(plain.crop);
  // Mean solar time as the farm's zone: clock hours of a scenario are the sun's.
  plan.calendar = Calendar::fixed(Seconds{static_cast<long>(plain.longitude / 15.0 * 3600.0)});
  weather::Station station;
  station.name = "bench";
  station.place = plan.place();
  station.interval = one_hour;
  station.measures_rain = false;
  plan.stations = {station};
  return plan;
}

/// Weather that begins at sowing.
inline synthetic::Stretch stretch_of(const season::Plan& plan, int days, std::uint64_t seed = 1) {
  synthetic::Stretch stretch;
  stretch.start = plan.first_hour();
  stretch.days = days;
  stretch.longitude = plan.field.longitude;
  stretch.seed = seed;
  return stretch;
}

/// An overhead set every `every` days, from clock hour `from` to `to`, on `count` evenings that
/// begin `first` days after sowing.
inline field::Diary sprinklers(const season::Plan& plan, int first, int count, double from,
                               double to, int every = 1) {
  field::Diary diary;
  for (int i = 0; i < count; i += every) {
    const CivilDay day = plan.field.sown + std::chrono::days{first + i};
    const auto at = [&](double clock) {
      return plan.calendar.at(CivilTime(day) + Seconds{static_cast<long>(clock * 3600)});
    };
    field::Irrigation set;
    set.field = plan.field.name;
    set.start = at(from);
    set.end = at(to);
    set.method = field::Method::overhead;
    set.depth = Millimetre(8);
    diary.irrigations.push_back(set);
  }
  return diary;
}

struct Outcome {
  season::State state;
  season::Chronicle chronicle;

  /// Level of the humid day on which the n-th evening's night ends (1 is the first).
  risk::Level humid_level(const season::Plan& plan, int first, int evening) const {
    const CivilDay date = plan.field.sown + std::chrono::days{first + evening};
    for (const season::HumidDay& day : chronicle.humid_days) {
      if (day.date == date) return day.level;
    }
    return risk::Level::none;
  }
  risk::Level highest_humid() const {
    risk::Level highest = risk::Level::none;
    for (const season::HumidDay& day : chronicle.humid_days) highest = std::max(highest, day.level);
    return highest;
  }
};

inline Outcome fold_season(const season::Plan& plan, const field::Diary& diary,
                           const std::vector<weather::Sample>& samples) {
  const std::vector<weather::Hour> hours = synthetic::hours_from(samples);
  Outcome outcome;
  outcome.state = season::fold(plan, season::DiaryView(diary, plan.place()), {hours},
                               hours.back().start + std::chrono::hours{1}, &outcome.chronicle);
  return outcome;
}

}  // namespace antherd::seasons
