// Wetness, infection and the humid spell: science §7, §8 and §11, by hand where no page prints it.
#include <chrono>
#include <cmath>

#include "core/risk/humid.hpp"
#include "core/risk/infection.hpp"
#include "core/risk/wetness.hpp"
#include "core/weather/sun.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::risk;
using std::chrono::hours;

namespace {

const HumidRules rules;

/// 18:00 solar on the eve of day 20000 at longitude 0, where solar time is UTC.
constexpr HourStart evening{hours{20000 * 24 - 6}};
constexpr Instant sunrise{Seconds{20000LL * 86400 + 5 * 3600}};

/// A whole humid day, dry at 20 °C and 50 %, on which `change` works.
template <class Change>
std::vector<DayHour> humid_day(Change change) {
  std::vector<DayHour> day;
  for (int i = 0; i < 24; ++i) {
    DayHour hour{evening + hours{i}, true, 20, 50, false, false};
    change((18 + i) % 24, hour);
    day.push_back(hour);
  }
  return day;
}

DayWetness evaluated(const std::vector<DayHour>& day) {
  return evaluate_day(day, sunrise, Degree(0), rules);
}

}  // namespace

TEST_CASE("dew counts after sunrise, water from its first hour") {
  const double per_hour = 1.0 / *wetness_needed(Celsius(20), rules);
  SECTION("dew from 22:00 to 09:00 counts from sunrise on") {
    const auto day = humid_day([](int clock, DayHour& h) { h.wet = clock >= 22 || clock < 9; });
    const DayWetness wetness = evaluated(day);
    CHECK(wetness.infection == Approx(4 * per_hour));  // 05…08, middles after 05:00
    CHECK_FALSE(wetness.water);
    CHECK(wetness.wet_hours == 11);
  }
  SECTION("sprinklers at 23:00 count all hours from there") {
    const auto day = humid_day([](int clock, DayHour& h) {
      h.wet = clock >= 22 || clock < 9;
      h.water = clock == 23;
    });
    const DayWetness wetness = evaluated(day);
    CHECK(wetness.infection == Approx(10 * per_hour));
    CHECK(wetness.water);
  }
  SECTION("one dry hour is bridged but not counted, two are not bridged, a gap never") {
    const auto one = humid_day(
        [](int clock, DayHour& h) { h.wet = h.water = clock >= 6 && clock < 12 && clock != 8; });
    CHECK(evaluated(one).infection == Approx(5 * per_hour));
    const auto two = humid_day([](int clock, DayHour& h) {
      h.wet = h.water = clock >= 6 && clock < 12 && clock != 8 && clock != 9;
    });
    CHECK(evaluated(two).infection == Approx(2 * per_hour));
    const auto gap = humid_day([](int clock, DayHour& h) {
      h.wet = h.water = clock >= 6 && clock < 12;
      if (clock == 8) h.valid = false;
    });
    CHECK(evaluated(gap).infection == Approx(3 * per_hour));
  }
  SECTION("more wetness never lowers I: a cold wet hour adds nothing and takes nothing") {
    const auto day = humid_day([](int clock, DayHour& h) {
      h.wet = h.water = clock < 6;
      if (clock == 0) h.temperature = 2;
    });
    CHECK(evaluated(day).infection == Approx(5 * per_hour));
  }
}

TEST_CASE("dry-out is four hours in a row between 10 and 18") {
  const auto humid_but = [](int from, int to) {
    return evaluated(humid_day([=](int clock, DayHour& h) {
             h.humidity = clock >= from && clock < to ? 84.9 : 85.0;
           }))
        .dry_out;
  };
  CHECK(humid_but(10, 14));
  CHECK(humid_but(14, 18));
  CHECK_FALSE(humid_but(9, 13));  // three of them
  CHECK_FALSE(humid_but(15, 20));
  CHECK_FALSE(humid_but(0, 0));
}

TEST_CASE("a hot day kills spores") {
  const auto hot = [](double t, int count) {
    return evaluated(humid_day([=](int clock, DayHour& h) {
             if (clock >= 8 && clock < 8 + count) h.temperature = t;
           }))
        .hot;
  };
  CHECK(hot(30, 2));
  CHECK_FALSE(hot(30, 1));
  CHECK(hot(29, 4));
  CHECK(hot(28, 6));
  CHECK_FALSE(hot(27, 7));
  CHECK(hot(27, 8));
}

TEST_CASE("leaf wetness: films, bucket, gaps") {
  LeafState state;
  LeafHour hour;
  hour.temperature = Celsius(15);
  hour.humidity = Percent(80);
  hour.dew_point = Celsius(11.6);
  hour.drying = Millimetre(0.05);
  CHECK_FALSE(wet_hour(state, hour, {}, rules).wet);
  SECTION("95 % is wet, 90 % only while little dries") {
    hour.humidity = Percent(95);
    CHECK(wet_hour(state, hour, {}, rules).wet);
    CHECK_FALSE(wet_hour(state, hour, {}, rules).water);
    hour.humidity = Percent(90);
    CHECK(wet_hour(state, hour, {}, rules).wet);
    hour.drying = Millimetre(0.1);
    CHECK_FALSE(wet_hour(state, hour, {}, rules).wet);
  }
  SECTION("rain leaves a film of at most 0.2 mm that dries") {
    hour.rain = Millimetre(5);
    CHECK(wet_hour(state, hour, {}, rules).water);
    hour.rain = Millimetre(0);
    CHECK(wet_hour(state, hour, {}, rules).wet);  // 0.15 left
    CHECK(wet_hour(state, hour, {}, rules).wet);  // 0.10
    CHECK(wet_hour(state, hour, {}, rules).wet);  // 0.05
    CHECK_FALSE(wet_hour(state, hour, {}, rules).wet);
    hour.rain = Millimetre(5);
    wet_hour(state, hour, {}, rules);
    after_gap(state);
    hour.rain = Millimetre(0);
    CHECK_FALSE(wet_hour(state, hour, {}, rules).wet);
  }
  SECTION("a sensor replaces the films, not rain and sprinklers") {
    hour.humidity = Percent(99);
    hour.sensor_minutes = 29;
    CHECK_FALSE(wet_hour(state, hour, {}, rules).wet);
    hour.sensor_minutes = 30;
    CHECK(wet_hour(state, hour, {}, rules).wet);
    hour.sensor_minutes = 0;
    CHECK(wet_hour(state, hour, Watering{.overlaps = true}, rules).water);
    CHECK_FALSE(wet_hour(state, hour, Watering{.night_set = true}, rules).wet);
  }
  SECTION("the dew-point option has a hysteresis") {
    HumidRules option;
    option.film = Film::dew_point;
    hour.dew_point = Celsius(13.0);
    CHECK(wet_hour(state, hour, {}, option).wet);
    hour.dew_point = Celsius(11.5);
    CHECK(wet_hour(state, hour, {}, option).wet);
    hour.dew_point = Celsius(11.2);
    CHECK_FALSE(wet_hour(state, hour, {}, option).wet);
    hour.dew_point = Celsius(11.5);
    CHECK_FALSE(wet_hour(state, hour, {}, option).wet);
  }
}

TEST_CASE("night sets begin three hours before sunset and end with sunrise") {
  using namespace std::chrono;
  const weather::Place place{Degree(46.7), Degree(0), Metre(700)};
  const local_days day{2026y / July / 14};
  const Instant sunset = *weather::sun_day(day, place).set;
  const Instant rise = *weather::sun_day(day + days{1}, place).rise;
  const auto set = [&](Instant start, Instant end, std::optional<Millimetre> depth) {
    field::Irrigation irrigation{0, "north", start, end, field::Method::overhead, depth, 0};
    return night_sets({irrigation}, place);
  };
  CHECK(set(sunset - hours{6}, sunset - hours{3} - Seconds{1}, std::nullopt).empty());
  const auto first = set(sunset - hours{6}, sunset - hours{3}, std::nullopt);
  REQUIRE(first.size() == 1);
  CHECK(first[0].sunrise == rise);
  CHECK(first[0].close_to_limit);
  CHECK(first[0].enough);
  const auto last = set(rise - hours{2}, rise, Millimetre(1));
  REQUIRE(last.size() == 1);
  CHECK(last[0].enough);
  CHECK_FALSE(last[0].close_to_limit);
  CHECK(set(rise - hours{2}, rise + Seconds{1}, Millimetre(1)).empty());
  CHECK_FALSE(set(sunset, sunset + hours{1}, Millimetre(0.9))[0].enough);
  // Every hour whose middle lies between its start and sunrise stays wet.
  const auto sets = set(sunset, sunset + hours{1}, Millimetre(3));
  CHECK(watering_of(hour_of(rise - minutes{40}), {}, sets).night_set);
  CHECK_FALSE(watering_of(hour_of(rise + minutes{40}), {}, sets).night_set);
}

TEST_CASE("known depth is spread evenly over its hours") {
  const Instant from{Seconds{1800}};
  const field::Irrigation irrigation{
      0, "north", from, from + hours{2}, field::Method::overhead, Millimetre(8), 0};
  const auto at = [&](int hour) {
    return watering_of(HourStart{hours{hour}}, {irrigation}, {}).depth.value;
  };
  CHECK(at(0) == Approx(2));
  CHECK(at(1) == Approx(4));
  CHECK(at(2) == Approx(2));
  CHECK_FALSE(watering_of(HourStart{hours{3}}, {irrigation}, {}).overlaps);
  field::Irrigation drip = irrigation;
  drip.method = field::Method::drip;
  CHECK_FALSE(watering_of(HourStart{hours{1}}, {drip}, {}).overlaps);
}

namespace {

DayWetness wetness(double infection, bool water, bool dry_out, int valid = 24) {
  DayWetness day;
  day.infection = infection;
  day.water = water;
  day.dry_out = dry_out;
  day.valid_hours = valid;
  day.mean_temperature = 15;
  return day;
}

SpellDay next(Spell& spell, const DayWetness& day, DayContext context = {}) {
  return advance(spell, day, context);
}

}  // namespace

TEST_CASE("scores of a humid day") {
  DayContext context;
  CHECK(score_day(wetness(0.99, true, false), context).score == 0);
  CHECK(score_day(wetness(1, false, true), context).score == 0.5);
  CHECK(score_day(wetness(1, false, false), context).score == 1.0);
  CHECK(score_day(wetness(1, true, true), context).score == 1.0);
  CHECK(score_day(wetness(1.99, true, false), context).score == 1.0);
  CHECK(score_day(wetness(2, true, false), context).score == 1.5);
  context.after_hot_day = true;
  CHECK(score_day(wetness(2, true, false), context).score == 0.75);
  CHECK(score_day(wetness(2, true, false), context).score_before == 1.5);
  context.disease_seen = true;
  CHECK(score_day(wetness(1, false, true), context).score == 0.5);  // 1.0 halved
  CHECK_FALSE(score_day(wetness(1, false, true), context).capped);
  CHECK(score_day(wetness(5, true, false, 19), context).score == 0);  // not judged
}

TEST_CASE("fog that lifts every day counts at most one") {
  Spell spell;
  SpellDay day;
  for (int i = 0; i < 10; ++i) day = next(spell, wetness(3, false, true));
  CHECK(*day.r == 1.0);
  CHECK(day.level == Level::none);
}

TEST_CASE("sprinklers reach Moderate on day 2 and Severe on day 3; dry days bring it down") {
  Spell spell;
  CHECK(next(spell, wetness(2, true, true)).level == Level::none);
  CHECK(next(spell, wetness(2, true, true)).level == Level::moderate);
  CHECK(next(spell, wetness(2, true, true)).level == Level::severe);
  CHECK(next(spell, wetness(2, true, true)).level == Level::severe);
  CHECK(next(spell, wetness(2, true, true)).level == Level::extreme);  // R = 5
  CHECK(next(spell, wetness(0, false, true)).level == Level::severe);  // falls one a day
  CHECK(next(spell, wetness(0, false, true)).level == Level::none);    // two quiet days end it
}

TEST_CASE("a day without dry-out or without data lowers nothing") {
  Spell spell;
  for (int i = 0; i < 3; ++i) next(spell, wetness(2, true, true));
  CHECK(next(spell, wetness(0, false, false)).level == Level::severe);
  const SpellDay blind = next(spell, wetness(0, false, false, 10));
  CHECK(blind.level == Level::severe);
  CHECK_FALSE(blind.r);
}

TEST_CASE("three mild days without dry-out are Moderate when one of them is favourable") {
  Spell spell;
  next(spell, wetness(0.5, false, false));
  next(spell, wetness(0.5, false, false));
  CHECK(next(spell, wetness(0.5, false, false)).level == Level::none);
  CHECK(next(spell, wetness(1.0, false, false)).level == Level::moderate);
  Spell broken;
  next(broken, wetness(1, false, false));
  next(broken, wetness(1, false, false, 10));  // not judged breaks "in a row"
  CHECK(next(broken, wetness(0.9, false, false)).level == Level::none);
}

TEST_CASE("sets before four of five mornings are Moderate whatever was measured") {
  Spell spell;
  DayContext watered;
  watered.night_set = true;
  for (int i = 0; i < 3; ++i)
    CHECK(next(spell, wetness(0, false, true), watered).level == Level::none);
  CHECK(next(spell, wetness(0, false, true), watered).level == Level::moderate);
  Spell blind;
  for (int i = 0; i < 3; ++i) next(blind, wetness(0, false, false, 0), watered);
  CHECK(next(blind, wetness(0, false, false, 0), watered).level == Level::moderate);
}

TEST_CASE("before buds the level is cut, out of season it is nothing") {
  Spell spell;
  DayContext young;
  young.before_buds = true;
  SpellDay day;
  for (int i = 0; i < 5; ++i) day = next(spell, wetness(3, true, false), young);
  CHECK(day.level == Level::moderate);
  DayContext over;
  over.in_season = false;
  CHECK(next(spell, wetness(3, true, false), over).level == Level::none);
}

TEST_CASE("the dew-point film switches at exactly 2.0 and 3.8 degrees, noise or not") {
  HumidRules by_dew_point;
  by_dew_point.film = Film::dew_point;
  const auto film_after = [&](bool before, double depression) {
    LeafState leaf;
    leaf.humid_film = before;
    LeafHour hour;
    hour.temperature = Celsius(17);
    hour.dew_point = Celsius(17 - depression);
    hour.humidity = Percent(85);
    hour.drying = Millimetre(0.3);
    return wet_hour(leaf, hour, {}, by_dew_point).wet;
  };
  CHECK(film_after(false, 2.0 + 2e-7));  // as read back from a humidity rounded to 1e-6
  CHECK_FALSE(film_after(false, 2.1));
  CHECK(film_after(true, 3.7));
  CHECK_FALSE(film_after(true, 3.8 - 2e-7));
}

TEST_CASE("twelve hours of a twelfth each are favourable") {
  // W(25.5) is cut to Wmax = 12 h: twelve water-wet hours make I = 1, eleven do not.
  const auto wet_for = [](int count) {
    return evaluated(humid_day([count](int clock, DayHour& h) {
      h.temperature = 25.5;
      h.wet = h.water = clock < count;
    }));
  };
  CHECK(wet_for(12).infection >= 1);
  CHECK(wet_for(11).infection < 1);
}
