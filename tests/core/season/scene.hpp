// One field on one station at longitude 0, where solar time, farm time and UTC are the same; the
// weather of a test is a function of the hour since sowing.
#pragma once

#include <functional>
#include <optional>
#include <string>
#include <vector>

#include "core/crop/traits.hpp"
#include "core/season/fold.hpp"

namespace antherd::season::scene {

using std::chrono::days;
using std::chrono::hours;

struct Weather {
  double temperature = 13;  // 10 °C above the base: 10 °C·d a day
  double humidity = 50;
};

/// Weather of the n-th hour since sowing; nothing for a gap.
using Course = std::function<std::optional<Weather>(int)>;

inline std::optional<Weather> cool(int) { return Weather{}; }

/// A coastal crop sown on 1 May 2026, watered overhead.
inline Plan plan_at_greenwich() {
  Plan plan;
  plan.field.name = "north bench";
  plan.field.stations = {"bench"};
  plan.field.latitude = Degree(45);
  plan.field.longitude = Degree(0);
  plan.field.elevation = Metre(100);
  const auto first_of_may = std::chrono::sys_days{std::chrono::year{2026} / std::chrono::May / 1};
  plan.field.sown = CivilDay{first_of_may.time_since_epoch()};
  plan.field.irrigation = field::Method::overhead;
  plan.traits = *crop::traits_of("coastal");
  weather::Station station;
  station.name = "bench";
  station.place = plan.place();
  station.interval = one_hour;
  plan.stations = {station};
  return plan;
}

inline std::vector<weather::Hour> hours_of(const Plan& plan, int count, const Course& course) {
  std::vector<weather::Hour> result;
  for (int n = 0; n < count; ++n) {
    const auto weather = course(n);
    if (!weather) continue;
    weather::Hour hour;
    hour.start = plan.first_hour() + hours{n};
    hour.n = hour.n_humidity = 1;
    hour.coverage = hour.humidity_coverage = 1;
    hour.temperature = Celsius(weather->temperature);
    hour.humidity = Percent(weather->humidity);
    result.push_back(hour);
  }
  return result;
}

inline field::Scouting note(const Plan& plan, int day, int stage, bool began) {
  field::Scouting seen;
  seen.field = plan.field.name;
  seen.date = plan.field.sown + days{day};
  seen.stage = stage;
  seen.began = began;
  return seen;
}

/// Two hours of sprinklers, 6 mm, from a clock hour of the n-th day on.
inline field::Irrigation set_on(const Plan& plan, int day, int clock = 20) {
  field::Irrigation set;
  set.field = plan.field.name;
  set.start = plan.calendar.at(CivilTime(plan.field.sown + days{day}) + hours{clock});
  set.end = set.start + 2 * one_hour;
  set.method = field::Method::overhead;
  set.depth = Millimetre(6);
  return set;
}

struct Told {
  State state;
  Chronicle chronicle;
  std::vector<HourRecord> records;

  const HeatDay& day(int n) const { return chronicle.days.at(static_cast<std::size_t>(n)); }
  const HourRecord& hour(int n) const { return records.at(static_cast<std::size_t>(n)); }
  std::vector<alerts::Notice> notices(const std::string& key) const {
    std::vector<alerts::Notice> found;
    for (const auto& notice : state.notices) {
      if (notice.key == key) found.push_back(notice);
    }
    return found;
  }
};

inline Told tell(const Plan& plan, int count, const Course& course, field::Diary diary = {}) {
  Told told;
  const auto measured = hours_of(plan, count, course);
  const DiaryView view(std::move(diary), plan.place());
  told.state = fold(plan, view, {measured}, plan.first_hour() + hours{count}, &told.chronicle,
                    [&](const State&, const Step& step) {
                      told.records.push_back(step.hour);
                      told.records.back().air.measured = nullptr;  // it dies with `measured`
                    });
  return told;
}

}  // namespace antherd::season::scene
