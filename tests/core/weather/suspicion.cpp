// What shows only over days: units, columns, clocks and the top end of hygrometers.
#include "core/weather/suspicion.hpp"

#include <cmath>
#include <numbers>

#include "core/weather/sun.hpp"
#include "core/weather/verdict_count.hpp"
#include "readings.hpp"
#include "support/weather_generator.hpp"

using namespace readings;

namespace {

const Degree west{-120};
const Instant june{std::chrono::sys_days{std::chrono::year{2026} / 6 / 1}};

Station hourly(double latitude = 46.7, double elevation = 300.0) {
  Station station = station_every(Seconds{3600});
  station.stamp = Stamp::start;
  station.place = {Degree(latitude), west, Metre(elevation)};
  return station;
}

std::vector<Sample> inland(int count, double low, double high) {
  return synthetic::dry_inland({june, count, west, 7}, low, high, 1.5);
}

std::vector<Hour> judged(const std::vector<Sample>& samples, const Station& station) {
  return with_suspicions(
      gather(samples, station, hour_of(samples.front().time), hour_of(samples.back().time) + 1h),
      station);
}

/// The hours that bear a reason.
int bearing(const std::vector<Hour>& list, Reason reason) {
  return static_cast<int>(std::count_if(list.begin(), list.end(), [&](const Hour& hour) {
    return std::any_of(hour.flags.begin(), hour.flags.end(),
                       [&](const Flag& flag) { return flag.reason == reason; });
  }));
}

int suspicions(const std::vector<Hour>& list) {
  int n = 0;
  for (const Reason reason :
       {Reason::not_air_temperature, Reason::fahrenheit_as_celsius, Reason::celsius_as_fahrenheit,
        Reason::columns_swapped, Reason::clock_off, Reason::humidity_low_top,
        Reason::humidity_high_top}) {
    n += bearing(list, reason);
  }
  return n;
}

int hours_at_35(const std::vector<Hour>& list) {
  return static_cast<int>(std::count_if(list.begin(), list.end(), [](const Hour& hour) {
    return hour.has_temperature() && hour.temperature->value >= 35.0;
  }));
}

std::vector<Sample> in_fahrenheit(std::vector<Sample> samples) {
  for (Sample& s : samples) s.temperature = Celsius(s.temperature->value * 1.8 + 32.0);
  return samples;
}

std::vector<Sample> later(std::vector<Sample> samples, int by) {
  for (Sample& s : samples) s.time += hours{by};
  return samples;
}

/// A sun of 800 W/m² at its highest.
std::vector<Sample> with_sun(std::vector<Sample> samples, const Place& place) {
  for (Sample& s : samples) {
    const double height = sun_altitude(s.time, place).value * std::numbers::pi / 180.0;
    s.solar = WattPerSquareMetre(std::max(0.0, 800.0 * std::sin(height)));
  }
  return samples;
}

}  // namespace

TEST_CASE("real heat, fog and cold raise no suspicion") {
  // Hotter than any record at hand: 30…47 °C for a month, and the warmest nights of a farm.
  CHECK(suspicions(judged(inland(30, 15, 43), hourly())) == 0);
  CHECK(suspicions(judged(inland(30, 30, 47), hourly(33))) == 0);
  CHECK(suspicions(judged(synthetic::cool_fog_coast({june, 60, west, 3}), hourly(43))) == 0);
  CHECK(suspicions(judged(inland(30, 3, 9), hourly())) == 0);           // a cold late spring
  CHECK(suspicions(judged(inland(30, -6, 5), hourly(46, 3800))) == 0);  // a high plateau
  CHECK(suspicions(judged(inland(30, -8, 6), hourly(-20))) == 0);       // its winter
  // A month in the sun, every reading by its own clock.
  const Station station = hourly();
  CHECK(suspicions(judged(with_sun(inland(30, 12, 36), station.place), station)) == 0);
}

TEST_CASE("a humid sensor in real heat is not taken for a unit") {
  // 43 °C by day with a hygrometer that stays at 99 %: a dew point beyond any measured, and the
  // heat is real.
  auto samples = inland(10, 29, 43);
  for (Sample& s : samples) s.humidity = Percent(99.0);
  const auto list = judged(samples, hourly(33));
  CHECK(bearing(list, Reason::not_air_temperature) == 0);
  CHECK(bearing(list, Reason::fahrenheit_as_celsius) == 0);
  // One that reads 85 % too, where the night falls below 28 °C.
  for (Sample& s : samples) s.humidity = Percent(85.0), s.temperature->value -= 3.0;
  CHECK(bearing(judged(samples, hourly(33)), Reason::fahrenheit_as_celsius) == 0);
}

TEST_CASE("°F read as °C is named and opens no heat") {
  // 8…30 °C are 46…86 °F: by day out of range, by night 46…55 "°C".
  const auto samples = in_fahrenheit(inland(20, 8, 30));
  const auto raw = gather(samples, hourly(), hour_of(june), hour_of(june + days{20}));
  REQUIRE(hours_at_35(raw) > 100);
  const auto list = with_suspicions(raw, hourly());
  CHECK(hours_at_35(list) == 0);
  CHECK(bearing(list, Reason::fahrenheit_as_celsius) > 400);
  CHECK(bearing(list, Reason::celsius_as_fahrenheit) == 0);
  // Begun in the dark, the first day has no name yet and is left out all the same.
  const auto dark = with_suspicions({raw.begin() + 7, raw.end()}, hourly());
  CHECK(bearing(dark, Reason::not_air_temperature) > 5);
  CHECK(hours_at_35(dark) <= 2);  // the evening, until one hour proves it
  const Hour& last = list.back();
  CHECK_FALSE(last.temperature);
  CHECK(last.n == 0);
  CHECK_FALSE(last.has_temperature());
  CHECK(last.humidity);  // is what it is
}

TEST_CASE("°F read as °C is named without a hygrometer, and after the unit changed in mid season") {
  auto bare = in_fahrenheit(inland(10, 8, 30));
  for (Sample& s : bare) s.humidity.reset();
  const auto list = judged(bare, hourly());
  CHECK(bearing(list, Reason::fahrenheit_as_celsius) > 190);

  auto mixed = inland(20, 8, 30);
  const auto wrong = in_fahrenheit(mixed);
  for (std::size_t i = 240; i < 360; ++i) mixed[i] = wrong[i];
  const auto both = judged(mixed, hourly());
  CHECK(bearing(both, Reason::fahrenheit_as_celsius) >= 90);  // from a day after the change
  // Mended, it is believed again with the first reading below 28 °C.
  for (std::size_t i = 376; i < both.size(); ++i) CHECK(both[i].has_temperature());
}

TEST_CASE("°C read as °F is named in the season of long days") {
  auto samples = inland(20, 8, 30);
  for (Sample& s : samples) s.temperature = Celsius((s.temperature->value - 32.0) / 1.8);
  const auto list = judged(samples, hourly());
  CHECK(bearing(list, Reason::celsius_as_fahrenheit) > 200);
  CHECK_FALSE(list.back().temperature);
  // The same numbers in the short days are a cold spell.
  const auto winter = later(samples, -24 * 120);
  CHECK(bearing(judged(winter, hourly()), Reason::celsius_as_fahrenheit) == 0);
}

TEST_CASE("swapped columns are named and both left out") {
  auto samples = inland(10, 10, 30);
  for (Sample& s : samples) {
    const double t = s.temperature->value;
    s.temperature = Celsius(s.humidity->value);
    s.humidity = Percent(t);
  }
  const auto list = judged(samples, hourly());
  CHECK(bearing(list, Reason::columns_swapped) > 200);
  CHECK_FALSE(list.back().temperature);
  CHECK_FALSE(list.back().humidity);
  CHECK(bearing(list, Reason::fahrenheit_as_celsius) == 0);
}

TEST_CASE("a clock that is off is told by the sun, else by the day's warmth") {
  const Station station = hourly();
  const auto honest = with_sun(inland(20, 12, 32), station.place);
  for (const int late : {-7, -3, 3, 7, 12}) {
    INFO("late " << late);
    const auto list = judged(later(honest, late), station);
    CHECK(bearing(list, Reason::clock_off) > 200);
    for (const Flag& flag : list.back().flags) {
      if (flag.reason != Reason::clock_off) continue;
      CHECK(flag.verdict == Verdict::suspect);
      CHECK(std::abs(std::remainder(flag.value - late, 24.0)) <= 1.0);
    }
    CHECK(list.back().has_temperature());  // used all the same
  }
  CHECK(bearing(judged(later(honest, 1), station), Reason::clock_off) == 0);
  auto bare = inland(20, 12, 32);
  CHECK(bearing(judged(later(bare, 8), station), Reason::clock_off) > 200);
  CHECK(bearing(judged(later(bare, -7), station), Reason::clock_off) > 200);
  CHECK(bearing(judged(later(bare, 2), station), Reason::clock_off) == 0);
}

TEST_CASE("a lamp at night is no sun") {
  const Station station = hourly();
  auto samples = with_sun(inland(20, 12, 32), station.place);
  for (Sample& s : samples) s.solar = WattPerSquareMetre(std::max(60.0, s.solar->value));
  CHECK(bearing(judged(samples, station), Reason::clock_off) == 0);
}

namespace {

/// Nights that cool at a standing humidity of `top`: dew falls.
std::vector<Sample> dewy(int count, double top) {
  return synthetic::each_hour({june, count, west, 1}, [&](Instant at, int, double hour) {
    Sample sample;
    sample.time = at;
    const double course = synthetic::course(hour);
    sample.temperature = Celsius(9.0 + 16.0 * course);
    sample.humidity = Percent(course < 0.35 ? top - 0.5 * course : top - 60.0 * (course - 0.35));
    return sample;
  });
}

}  // namespace

TEST_CASE("a hygrometer that never nears saturation in thirty nights of dew is named") {
  const auto low = judged(dewy(45, 88.0), hourly());
  CHECK(bearing(low, Reason::humidity_low_top) > 300);
  CHECK(low[29 * 24].flags.empty());  // thirty nights are needed
  CHECK(low.back().humidity);
  for (const Flag& flag : low.back().flags) CHECK(std::abs(flag.value - 88.0) < 0.5);
  CHECK(bearing(judged(dewy(45, 97.0), hourly()), Reason::humidity_low_top) == 0);
  // One night near saturation speaks for the sensor.
  auto once = dewy(45, 88.0);
  for (std::size_t i = 40 * 24 + 10; i < 40 * 24 + 14; ++i) once[i].humidity = Percent(96.0);
  CHECK(bearing(judged(once, hourly()), Reason::humidity_low_top) <
        bearing(low, Reason::humidity_low_top));
  // Dry nights say nothing.
  CHECK(bearing(judged(inland(60, 12, 34), hourly()), Reason::humidity_low_top) == 0);
}

TEST_CASE("a hygrometer at saturation in the sun is named") {
  const Station station = hourly();
  auto samples = with_sun(inland(12, 10, 28), station.place);
  for (Sample& s : samples) s.humidity = Percent(100.0);
  const auto list = judged(samples, station);
  CHECK(bearing(list, Reason::humidity_high_top) > 150);
  CHECK(list.back().humidity);
  // A grey day of fog under little sun, and rain, are real.
  auto fog = samples;
  for (Sample& s : fog) s.solar = WattPerSquareMetre(s.solar->value / 5.0);
  CHECK(bearing(judged(fog, station), Reason::humidity_high_top) == 0);
}

TEST_CASE("an hour is judged by itself and what was before it") {
  const auto samples = in_fahrenheit(inland(12, 8, 30));
  const auto raw = gather(samples, hourly(), hour_of(june), hour_of(june + days{12}));
  const auto whole = with_suspicions(raw, hourly());
  for (const std::size_t n : {1U, 20U, 26U, 100U, 250U}) {
    const auto part = with_suspicions({raw.begin(), raw.begin() + n}, hourly());
    CHECK(std::equal(part.begin(), part.end(), whole.begin()));
  }
}

TEST_CASE("a copy of the one who suspects goes on from where it was made") {
  const auto samples = in_fahrenheit(inland(12, 8, 30));
  auto list = gather(samples, hourly(), hour_of(june), hour_of(june + days{12}));
  const auto whole = with_suspicions(list, hourly());
  Suspector first(hourly());
  for (std::size_t i = 0; i < 100; ++i) first.judge(list[i]);
  Suspector second(first);
  Suspector third(hourly());
  third = first;
  auto other = list;
  for (std::size_t i = 100; i < list.size(); ++i) second.judge(list[i]), third.judge(other[i]);
  CHECK(list == whole);
  CHECK(other == whole);
}

TEST_CASE("two stations that drift apart are told by the double difference") {
  const auto samples = inland(28, 10, 28);
  const Station station = hourly();
  const auto one = judged(samples, station);
  auto moved = samples;
  for (std::size_t i = 0; i < moved.size(); ++i) {
    moved[i].temperature = Celsius(moved[i].temperature->value - (i < 336 ? 0.5 : 2.5));
    moved[i].humidity = Percent(std::max(0.0, moved[i].humidity->value - (i < 336 ? 0.0 : 9.0)));
  }
  const auto other = judged(moved, station);
  const Instant until = june + days{28};
  const auto drift = drift_between(one, other, until);
  REQUIRE(drift);
  CHECK(std::abs(drift->temperature - 2.0) < 1e-6);  // 2.5 − 0.5
  CHECK(std::abs(drift->humidity - 9.0) < 0.5);
  CHECK(drift->large());
  CHECK(drift->hours_before == 336);
  CHECK(drift->hours_after == 336);
  const auto none = drift_between(one, one, until);
  REQUIRE(none);
  CHECK_FALSE(none->large());
  CHECK(none->temperature == 0.0);
  CHECK_FALSE(drift_between(one, other, until - days{8}));  // too few hours before
  CHECK_FALSE(drift_between(one, {}, until));
  CHECK_FALSE(Drift{1.5, -8.0, 336, 336}.large());
  CHECK(Drift{-1.6, 0.0, 336, 336}.large());
  CHECK(Drift{0.0, 8.1, 336, 336}.large());
}

TEST_CASE("verdicts are counted by hours, each by its gravest") {
  auto list = gather(inland(2, 10, 25), hourly(), hour_of(june), hour_of(june + days{2}));
  REQUIRE(list.size() == 48);
  list[3].flags = {{Element::humidity, Verdict::suspect, Reason::stuck, 1, june, 50.0}};
  list[4].flags = {{Element::temperature, Verdict::wrong, Reason::spike, 1, june, 50.0},
                   {Element::humidity, Verdict::suspect, Reason::stuck, 1, june, 50.0}};
  list.erase(list.begin() + 10);
  const auto count = count_verdicts(list, hour_of(june), hour_of(june + days{1}));
  CHECK(count.expected == 24);
  CHECK(count.seen() == 23);
  CHECK(count.missing() == 1);
  CHECK(count.good == 21);
  CHECK(count.suspect == 1);
  CHECK(count.wrong == 1);
  const std::map<std::string, int> reasons{{"humidity stuck", 2}, {"temperature spike", 1}};
  CHECK(count.reasons == reasons);
  CHECK(count_verdicts(list, hour_of(june), hour_of(june)).expected == 0);
}
