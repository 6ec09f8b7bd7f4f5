// What growers know of dew and sprinklers must hold whatever rule tells the dew: the scenarios of
// common practice (science §11) with films by the leaf's energy balance.
#include <algorithm>

#include "core/weather/sun.hpp"
#include "seasons/common.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::seasons;
using risk::Film;
using risk::Level;

namespace {

constexpr int growing = 60;

season::Plan plan_by(Film film, const PlainSeason& plain = {}) {
  season::Plan plan = plan_of(plain);
  plan.rules.humid.film = film;
  return plan;
}

PlainSeason cool_coast() {
  PlainSeason coast;
  coast.latitude = 44.6;
  coast.longitude = -124.0;
  coast.elevation = 20;
  coast.irrigation = field::Method::none;
  coast.sown =
      std::chrono::year_month_day{std::chrono::year{2026}, std::chrono::May, std::chrono::day{1}};
  return coast;
}

/// Such readings with still nights, windy days and a sun that shines through `clearness`.
std::vector<weather::Sample> with_wind_and_sun(std::vector<weather::Sample> samples,
                                               const season::Plan& plan, double night, double day,
                                               double clearness) {
  for (weather::Sample& sample : samples) {
    const double ra =
        std::max(0.0, 4.92 * std::sin(weather::sun_altitude(sample.time, plan.place()).value *
                                      std::numbers::pi / 180));
    sample.wind = MetrePerSecond(ra > 0 ? day : night);
    sample.solar = WattPerSquareMetre(clearness * 0.75 * ra / 0.0036);
  }
  return samples;
}

struct Wetness {
  Outcome outcome;
  int wet = 0, hours = 0;
  std::vector<season::HourRecord> records;
};

/// Like fold_season, but wind and sun reach the hours.
Wetness fold_hours(const season::Plan& plan, const field::Diary& diary,
                   const std::vector<weather::Sample>& samples) {
  auto hours = synthetic::hours_from(samples);
  for (std::size_t i = 0; i < hours.size(); ++i) {
    hours[i].wind = samples[i].wind;
    hours[i].solar = samples[i].solar;
  }
  Wetness result;
  result.outcome.state =
      season::fold(plan, season::DiaryView(diary, plan.place()), {hours},
                   hours.back().start + std::chrono::hours{1}, &result.outcome.chronicle,
                   [&](const season::State&, const season::Step& step) {
                     ++result.hours;
                     if (step.hour.wet.wet) ++result.wet;
                     result.records.push_back(step.hour);
                     result.records.back().air.measured = nullptr;
                   });
  return result;
}

Wetness sprinkled(Film film, int count, int every = 1) {
  const season::Plan plan = plan_by(film);
  const auto samples =
      with_wind_and_sun(synthetic::dry_inland(stretch_of(plan, 90), 12, 27), plan, 1.0, 2.5, 0.95);
  return fold_hours(plan, sprinklers(plan, growing, count, 20, 23, every), samples);
}

}  // namespace

TEST_CASE("sprinklers in dry weather: the same levels on the same days by every film rule") {
  for (const Film film : {Film::humidity, Film::dew_point, Film::energy}) {
    INFO(risk::name_of(film));
    const season::Plan plan = plan_by(film);
    const Wetness evenings = sprinkled(film, 5);
    CHECK(evenings.outcome.humid_level(plan, growing, 1) == Level::none);
    CHECK(evenings.outcome.humid_level(plan, growing, 2) == Level::moderate);
    CHECK(evenings.outcome.humid_level(plan, growing, 3) == Level::severe);
    CHECK(sprinkled(film, 1).outcome.highest_humid() == Level::none);
    CHECK(sprinkled(film, 24, 3).outcome.highest_humid() == Level::none);
  }
}

TEST_CASE("fog and dew on a cool coast are seldom a problem by the energy balance either") {
  const season::Plan plan = plan_by(Film::energy, cool_coast());
  const CivilDay july{std::chrono::sys_days{std::chrono::year{2026} / 7 / 1}.time_since_epoch()};
  int days = 0, grave = 0;
  for (const double night_wind : {0.7, 2.0}) {
    for (std::uint64_t seed = 1; seed <= 5; ++seed) {
      const auto samples = with_wind_and_sun(synthetic::cool_fog_coast(stretch_of(plan, 123, seed)),
                                             plan, night_wind, 3.5, 0.8);
      for (const auto& day : fold_hours(plan, {}, samples).outcome.chronicle.humid_days) {
        if (day.date < july) continue;
        ++days;
        if (day.level >= Level::severe) ++grave;
      }
    }
  }
  INFO(grave << " of " << days << " days Severe or Extreme");
  REQUIRE(days > 600);
  CHECK(grave * 20 <= days);
}

TEST_CASE("clear calm nights bring dew that the morning dries, cloud and wind bring none") {
  // A dew point 1.5 °C below the night's minimum: 90 % at dawn and never 95. By day 12 °C more.
  const season::Plan plan = plan_by(Film::energy);
  auto samples = synthetic::dry_inland(stretch_of(plan, 30), 10, 22);
  for (weather::Sample& sample : samples) {
    sample.humidity =
        Percent(std::min(92.0, synthetic::humidity_of(sample.temperature->value, 8.5)));
  }
  const auto wet_by = [&](double wind, double clearness) {
    return fold_hours(plan, {}, with_wind_and_sun(samples, plan, wind, 2.5, clearness));
  };
  const Wetness clear = wet_by(0.6, 0.95), broken = wet_by(0.6, 0.65), grey = wet_by(4.0, 0.3);
  CHECK(clear.wet > broken.wet);
  CHECK(grey.wet == 0);
  CHECK(clear.wet >= 2 * 29);  // hours a night: the air comes near its dew point only at dawn
  // On each fair morning the dew is gone one to three hours after sunrise (common practice).
  for (int day = 3; day < 29; ++day) {
    const CivilDay date = plan.field.sown + std::chrono::days{day};
    const Instant rise = *weather::sun_day(date, plan.place()).rise;
    Instant last{};
    double night = 0;
    for (const auto& record : clear.records) {
      const Instant end = end_of(record.air.start);
      if (end > rise - 12 * one_hour && end <= rise) night -= record.leaf.exchange.value;
      if (record.wet.wet && end > rise && end < rise + 10 * one_hour) last = end;
    }
    INFO("day " << day << ", " << night << " mm");
    CHECK(last > rise);
    CHECK(last - rise <= 3 * one_hour + one_hour / 2);
    CHECK(night <= 0.8);
  }
}
