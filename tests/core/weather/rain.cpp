// What a rain gauge's readings mean (science §3).
#include "readings.hpp"

using namespace readings;

namespace {

struct Drop {
  Seconds after;
  double value;
};

Station gauge(RainMeaning meaning) {
  Station station = station_every(900s);
  station.measures_rain = true;
  station.rain_meaning = meaning;
  return station;
}

std::vector<Sample> drops(std::initializer_list<Drop> list) {
  std::vector<Sample> samples;
  for (const Drop& drop : list) {
    Sample sample = reading(start + drop.after, 15.0);
    sample.rain = Millimetre(drop.value);
    samples.push_back(sample);
  }
  return samples;
}

double rain_at(const std::vector<Hour>& list, Seconds after) {
  const Hour& hour = hour_at(list, start + after);
  REQUIRE(hour.rain);
  return hour.rain->value;
}
double wetting_at(const std::vector<Hour>& list, Seconds after) {
  const Hour& hour = hour_at(list, start + after);
  REQUIRE(hour.rain_for_wetness);
  return hour.rain_for_wetness->value;
}

}  // namespace

TEST_CASE("rain since the last reading counts as it stands in the hour of its time") {
  const auto list = all_hours(drops({{0s, 0.2}, {30min, 0.4}, {1h, 0.6}, {9h, 1.0}}),
                              gauge(RainMeaning::since_last));
  CHECK(rain_at(list, 0s) == Approx(0.6).epsilon(1e-9));
  CHECK(rain_at(list, 1h) == Approx(0.6).epsilon(1e-9));
  CHECK(rain_at(list, 9h) == 1.0);
  CHECK(wetting_at(list, 9h) == 1.0);
}

TEST_CASE("a counter books differences to the later reading's hour") {
  const auto list = all_hours(drops({{30min, 812.4}, {45min, 812.6}, {1h, 813.0}, {75min, 813.0}}),
                              gauge(RainMeaning::counter));
  CHECK(rain_at(list, 0s) == Approx(0.2).epsilon(1e-9));  // the first is 0
  CHECK(rain_at(list, 1h) == Approx(0.4).epsilon(1e-9));
  CHECK(wetting_at(list, 1h) == Approx(0.4).epsilon(1e-9));
}

TEST_CASE("a counter that falls was reset and its new value counts") {
  const auto list =
      all_hours(drops({{0s, 99.8}, {15min, 0.6}, {30min, 0.8}}), gauge(RainMeaning::counter));
  CHECK(rain_at(list, 0s) == Approx(0.8).epsilon(1e-9));
}

TEST_CASE("a counter's midnight is no reset") {
  const auto list =
      all_hours(drops({{23h + 50min, 5.0}, {24h + 5min, 5.2}}), gauge(RainMeaning::counter));
  CHECK(rain_at(list, 24h) == Approx(0.2).epsilon(1e-9));
}

TEST_CASE("rain gathered over a gap goes to the water balance alone") {
  const auto list = all_hours(drops({{0s, 10.0}, {1h, 10.5}, {2h + 1s, 12.0}, {150min, 12.3}}),
                              gauge(RainMeaning::counter));
  CHECK(rain_at(list, 1h) == Approx(0.5).epsilon(1e-9));  // one hour is no gap
  CHECK(wetting_at(list, 1h) == Approx(0.5).epsilon(1e-9));
  CHECK(rain_at(list, 2h) == Approx(1.8).epsilon(1e-9));
  CHECK(wetting_at(list, 2h) == Approx(0.3).epsilon(1e-9));
}

TEST_CASE("a silence beyond 30 h starts a counter anew") {
  const auto list =
      all_hours(drops({{0s, 10.0}, {30h, 14.0}, {60h + 1s, 19.0}}), gauge(RainMeaning::counter));
  CHECK(rain_at(list, 30h) == 4.0);
  CHECK(wetting_at(list, 30h) == 0.0);
  CHECK(rain_at(list, 60h) == 0.0);
}

TEST_CASE("the longest silence of a counter lies within the stated reach") {
  auto readings = drops({{0s, 10.0}, {29h + 30min, 14.0}});
  const auto before = all_hours(readings, gauge(RainMeaning::counter));
  readings[0].rain = Millimetre(11.0);
  const auto after = all_hours(readings, gauge(RainMeaning::counter));
  CHECK(rain_at(before, 29h) == 4.0);
  CHECK(rain_at(after, 29h) == 3.0);
  CHECK(hour_of(start + hours_touched_after) >= hour_of(start + 29h));
  CHECK(hour_of(start + 29h) - context_before < start);
}

TEST_CASE("a counter that leaps beyond any rain books nothing") {
  const auto list =
      all_hours(drops({{0s, 10.0}, {15min, 6500.0}, {30min, 6500.2}}), gauge(RainMeaning::counter));
  CHECK(rain_at(list, 0s) == Approx(0.2).epsilon(1e-9));
  CHECK(flagged(list, Element::rain, Verdict::wrong, Reason::out_of_range) == 1);
}

TEST_CASE("a day's total starts anew at midnight of its zone") {
  Station station = gauge(RainMeaning::day_total);
  // Midnight at UTC−7 is 07:00 UTC. The new day's first total is above the old day's last.
  station.rain_zone = Calendar::fixed(Seconds{-7 * 3600}, "UTC-07:00");
  auto list = all_hours(
      drops({{6h + 30min, 0.2}, {6h + 45min, 0.4}, {7h + 15min, 0.6}, {7h + 30min, 0.9}}), station);
  CHECK(rain_at(list, 6h) == Approx(0.2).epsilon(1e-9));
  CHECK(rain_at(list, 7h) == Approx(0.9).epsilon(1e-9));
  // In UTC the same readings lie in one day.
  station.rain_zone = Calendar::fixed();
  list = all_hours(drops({{6h + 45min, 0.4}, {7h + 15min, 0.6}, {7h + 30min, 0.9}}), station);
  CHECK(rain_at(list, 7h) == Approx(0.5).epsilon(1e-9));
  // Within a day a fall is a reset.
  list = all_hours(drops({{6h, 3.0}, {6h + 15min, 0.1}}), station);
  CHECK(rain_at(list, 6h) == Approx(0.1).epsilon(1e-9));
}

TEST_CASE("a total stamped at midnight closes the day that ended") {
  Station station = gauge(RainMeaning::day_total);
  const auto readings = drops({{23h + 45min, 12.0}, {24h, 12.2}, {24h + 15min, 0.3}});
  CHECK(rain_at(all_hours(readings, station), 24h) == Approx(0.5).epsilon(1e-9));
  // Stamped at the end of its interval it lies in the day before altogether.
  station.stamp = Stamp::end;
  const auto ended = all_hours(readings, station);
  CHECK(rain_at(ended, 23h) == Approx(0.2).epsilon(1e-9));
  CHECK(rain_at(ended, 24h) == Approx(0.3).epsilon(1e-9));
  // Stamped at the start it is the new day's.
  station.stamp = Stamp::start;
  CHECK(rain_at(all_hours(readings, station), 24h) == Approx(12.5).epsilon(1e-9));
}

TEST_CASE("the days of a total follow the clock changes of its zone") {
  // A zone that moves from +1 h to +2 h in the night of 10 July 2026, 01:00 UTC, a made-up change:
  // the midnight after it comes at 22:00 UTC, not at 23:00.
  Station station = gauge(RainMeaning::day_total);
  station.rain_zone =
      Calendar("made-up", {{Instant::min(), Seconds{3600}}, {start + 1h, Seconds{7200}}});
  const auto list = all_hours(drops({{21h + 45min, 0.1}, {22h + 15min, 0.5}}), station);
  CHECK(rain_at(list, 22h) == Approx(0.5).epsilon(1e-9));
  const auto day_before = all_hours(drops({{20h + 45min, 0.1}, {21h + 15min, 0.5}}), station);
  CHECK(rain_at(day_before, 21h) == Approx(0.4).epsilon(1e-9));
}

TEST_CASE("without a gauge, or without its reading, there is no rain figure") {
  auto samples = drops({{0s, 0.2}, {1h, 0.2}});
  samples[1].rain.reset();
  const auto list = all_hours(samples, gauge(RainMeaning::since_last));
  CHECK(hour_at(list, start).rain);
  CHECK_FALSE(hour_at(list, start + 1h).rain);
  CHECK_FALSE(hour_at(list, start + 1h).rain_for_wetness);
}
