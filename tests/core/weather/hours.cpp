// The hour record: means, counts, stamps, coverage, and its independence of order and windows.
#include <cmath>
#include <random>

#include "readings.hpp"

using namespace readings;

TEST_CASE("an hour holds mean, extremes and counts of its samples") {
  std::vector<Sample> samples{reading(start, 20.0, 60.0), reading(start + 20min, 21.0, 58.0),
                              reading(start + 40min, 21.5, 57.0), reading(start + 1h, 30.0, 40.0)};
  samples[0].wind = MetrePerSecond(2.0);
  samples[2].wind = MetrePerSecond(3.0);
  samples[1].solar = WattPerSquareMetre(500);
  Station station = station_every(1200s);
  station.wind_height = Metre(10);
  const auto list = gather(samples, station, hour_of(start), hour_of(start) + hours{1});
  REQUIRE(list.size() == 1);  // [from, to)
  const Hour& hour = list[0];
  CHECK(hour.start == hour_of(start));
  CHECK(hour.n == 3);
  CHECK(hour.n_humidity == 3);
  CHECK(hour.coverage == 1.0);
  CHECK(hour.temperature->value == 20.833333);  // 62.5 / 3, rounded to 1e-6
  CHECK(hour.temperature_max->value == 21.5);
  CHECK(hour.temperature_min->value == 20.0);
  CHECK(hour.humidity->value == 58.333333);
  CHECK(hour.humidity_max->value == 60.0);
  CHECK(hour.humidity_min->value == 57.0);
  // FAO-56 example 14 (from memory): 2.4 m/s at 2 m of 3.2 at 10 m, a factor of 0.748.
  CHECK(hour.wind->value == Approx(2.5 * 0.748).margin(0.001));
  CHECK(hour.solar->value == 500.0);
  CHECK_FALSE(hour.rain);
  CHECK_FALSE(hour.wet_minutes);
  CHECK(hour.valid());
}

TEST_CASE("coverage is the share of the expected samples") {
  struct Case {
    Seconds interval;
    int samples;
    double coverage;
  };
  for (const Case& c : {Case{300s, 9, 0.75}, Case{300s, 8, 8.0 / 12}, Case{3600s, 1, 1.0},
                        Case{10800s, 1, 1.0}, Case{900s, 5, 1.0}}) {
    std::vector<Sample> samples;
    for (int i = 0; i < c.samples; ++i) samples.push_back(reading(start + i * 60s, 20.0, 50.0));
    const auto list = all_hours(samples, station_every(c.interval));
    INFO(c.interval.count() << " s, " << c.samples);
    CHECK(list.at(0).coverage == Approx(c.coverage).epsilon(1e-12));
    CHECK(list.at(0).valid() == (c.coverage >= 0.75));
  }
}

TEST_CASE("an hour without a sample is a gap, one without a usable sample is a record") {
  std::vector<Sample> samples{reading(start, 20.0, 50.0), reading(start + 3h, 70.0, 50.0)};
  const auto list = all_hours(samples, station_every(3600s));
  REQUIRE(list.size() == 2);
  CHECK(list[1].start == hour_of(start + 3h));
  CHECK(list[1].n == 0);
  CHECK(list[1].coverage == 0.0);
  CHECK_FALSE(list[1].temperature);
  CHECK_FALSE(list[1].valid());
  CHECK(list[1].humidity->value == 50.0);
  CHECK(gather({}, station_every(300s), hour_of(start), hour_of(start + 48h)).empty());
  // All time may be asked for.
  CHECK(gather(samples, station_every(3600s), HourStart::min(), HourStart::max()) == list);
}

TEST_CASE("a humidity that is missing leaves the temperature standing") {
  const auto list = all_hours(temperatures(900s, {20, 20, 21, 21}), station_every(900s));
  CHECK(list.at(0).has_temperature());
  CHECK_FALSE(list.at(0).valid());
  CHECK(list.at(0).n_humidity == 0);
}

TEST_CASE("samples stamped at the end of their interval belong to the time before") {
  const auto samples = temperatures(1800s, {20, 21, 22, 23});  // 00:00, 00:30, 01:00, 01:30
  Station station = station_every(1800s);
  for (const Stamp stamp : {Stamp::instant, Stamp::start}) {
    station.stamp = stamp;
    const auto list = all_hours(samples, station);
    REQUIRE(list.size() == 2);
    CHECK(hour_at(list, start).temperature->value == 20.5);
    CHECK(hour_at(list, start + 1h).temperature->value == 22.5);
  }
  station.stamp = Stamp::end;
  const auto list = all_hours(samples, station);
  REQUIRE(list.size() == 3);
  CHECK(hour_at(list, start - 1h).temperature->value == 20.0);
  CHECK(hour_at(list, start).temperature->value == 21.5);
  CHECK(hour_at(list, start + 1h).temperature->value == 23.0);
}

TEST_CASE("minutes of wetness add up, an hour at most") {
  std::vector<Sample> samples = temperatures(900s, {20, 20, 20, 20});
  for (Sample& sample : samples) sample.wet_minutes = 12.5;
  CHECK(all_hours(samples, station_every(900s)).at(0).wet_minutes == 50.0);
  for (Sample& sample : samples) sample.wet_minutes = 20.0;
  CHECK(all_hours(samples, station_every(900s)).at(0).wet_minutes == 60.0);
  for (Sample& sample : samples) sample.wet_minutes = 0.0;
  CHECK(all_hours(samples, station_every(900s)).at(0).wet_minutes == 0.0);
}

TEST_CASE("whole degrees are noticed") {
  const auto series = [](int count, auto value) {
    std::vector<Sample> samples;
    for (int i = 0; i < count; ++i) samples.push_back(reading(start + i * 1h, value(i)));
    return all_hours(samples, station_every(3600s));
  };
  const auto celsius = [](int i) { return 20.0 + i % 5; };
  const auto list = series(20, celsius);
  CHECK_FALSE(list[10].whole_degrees);  // eleven values
  CHECK(list[11].whole_degrees);
  // °F to two decimals of °C: 68 °F = 20.00, 69 = 20.56, 71 = 21.67.
  const auto fahrenheit = [](int i) { return std::round((36.0 + i % 7) / 1.8 * 100) / 100; };
  CHECK(series(20, fahrenheit)[15].whole_degrees);
  const auto tenths = [](int i) { return 20.0 + 0.1 * (i % 5); };
  CHECK_FALSE(series(20, tenths)[15].whole_degrees);
  // One broken reading speaks for the 24 h after its hour.
  const auto one_broken = [](int i) { return i == 14 ? 22.4 : 22.0; };
  const auto mixed = series(60, one_broken);
  CHECK(mixed[13].whole_degrees);
  CHECK_FALSE(mixed[14].whole_degrees);
  CHECK_FALSE(mixed[38].whole_degrees);
  CHECK(mixed[39].whole_degrees);
}

TEST_CASE("of two samples for one time the warmer, then the more humid stands") {
  const Sample cool = reading(start, 20.0, 90.0), warm = reading(start, 21.0, 40.0);
  const Sample warm_damp = reading(start, 21.0, 45.0), bare = reading(start, std::nullopt, 99.0);
  CHECK(stands_before(warm, cool));
  CHECK_FALSE(stands_before(cool, warm));
  CHECK(stands_before(warm_damp, warm));
  CHECK(stands_before(cool, bare));
  CHECK_FALSE(stands_before(warm, warm));
  for (const auto& order :
       {std::vector{cool, warm, warm_damp, bare}, std::vector{bare, warm_damp, warm, cool}}) {
    const auto left = standing(order);
    REQUIRE(left.size() == 1);
    CHECK(left[0] == warm_damp);
  }
}

TEST_CASE("of two samples for one time a possible one stands before one that no air has") {
  // The same air, 25 °C and 55 %: as it is, as a logger slipped, in °F, in kelvin, swapped, and
  // with a humidity that a broken plug reports.
  const Sample right = reading(start, 25.0, 55.0);
  const std::vector<Sample> worse{reading(start, 343.0, 55.0),  reading(start, 77.0, 55.0),
                                  reading(start, 298.15, 55.0), reading(start, 55.1, 25.0),
                                  reading(start, 30.0, 655.35), reading(start, std::nullopt, 55.0)};
  for (const Sample& wrong : worse) {
    CAPTURE(wrong.temperature.has_value(), wrong.humidity->value);
    CHECK(stands_before(right, wrong));
    CHECK_FALSE(stands_before(wrong, right));
  }
  // The ends of the range are possible: the warmer stands as before.
  CHECK(stands_before(reading(start, 55.0, 55.0), right));
  CHECK(stands_before(right, reading(start, -40.0, 55.0)));
  CHECK(stands_before(right, reading(start, -40.1, 55.0)));
  // An impossible temperature leaves its flag, a missing one nothing.
  CHECK(stands_before(worse[0], worse[5]));
  // Wind, sun and dew point count too; a warmer sample is not worth a garbled row.
  Sample garbled = reading(start, 26.0, 55.0);
  garbled.wind = MetrePerSecond(655.35);
  CHECK(stands_before(right, garbled));
  garbled.wind = MetrePerSecond(6.5);
  CHECK(stands_before(garbled, right));
}

TEST_CASE("which sample stands is a strict order, whatever the mixture") {
  std::vector<Sample> all;
  for (const std::optional<double> t : {std::optional<double>(), {-60.0}, {12.0}, {343.0}}) {
    for (const std::optional<double> rh : {std::optional<double>(), {-5.0}, {40.0}, {250.0}}) {
      for (const std::optional<double> wind : {std::optional<double>(), {3.0}, {90.0}}) {
        Sample sample = reading(start, t, rh);
        if (wind) sample.wind = MetrePerSecond(*wind);
        all.push_back(sample);
      }
    }
  }
  REQUIRE(all.size() == 48);
  std::mt19937 dice(20260714);
  const auto stands = standing(all);
  REQUIRE(stands.size() == 1);
  CHECK(stands[0].temperature == Celsius(12.0));
  CHECK(stands[0].humidity == Percent(40.0));
  CHECK(stands[0].wind == MetrePerSecond(3.0));
  for (int round = 0; round < 50; ++round) {
    std::shuffle(all.begin(), all.end(), dice);
    CHECK(standing(all) == stands);
    // One after the other, as a store meets them.
    Sample kept = all.front();
    for (const Sample& next : all) kept = stands_before(next, kept) ? next : kept;
    CHECK(kept == stands[0]);
  }
  for (const Sample& a : all) {
    for (const Sample& b : all) {
      CHECK(stands_before(a, b) + stands_before(b, a) == (a == b ? 0 : 1));
    }
  }
}

TEST_CASE("an hour closes two intervals after its end, ten minutes at least") {
  const HourStart hour = hour_of(start);
  CHECK(closes_at(hour, station_every(60s)) == start + 70min);
  CHECK(closes_at(hour, station_every(300s)) == start + 70min);
  CHECK(closes_at(hour, station_every(900s)) == start + 90min);
  CHECK(closes_at(hour, station_every(3600s)) == start + 3h);
}

namespace {

/// Ten days of a poor station: spikes in bunches, frozen spells, holes, a counter with resets.
std::vector<Sample> hostile(unsigned seed, bool by_dew_point, Seconds interval) {
  std::mt19937 random(seed);
  const auto chance = [&](double p) {
    return std::uniform_real_distribution<double>(0, 1)(random) < p;
  };
  std::vector<Sample> samples;
  double counter = 0.0, held = 20.0;
  int wild = 0, frozen = 0, silent = 0;
  const auto count = static_cast<int>(days{10} / interval);
  const double share = static_cast<double>(interval.count()) / 3600.0;  // of an hour
  // Starts a spell at so many chances an hour; its length in samples.
  const auto spell = [&](int running, double per_hour, double least_h, double most_h) {
    if (running > 0 || !chance(per_hour * share)) return running;
    const double length = std::uniform_real_distribution(least_h, most_h)(random);
    return std::max(1, static_cast<int>(length / share));
  };
  for (int i = 0; i < count; ++i) {
    silent = spell(silent, 0.01, 0.3, 40.0);
    frozen = spell(frozen, 0.02, 5.0, 30.0);
    wild = spell(wild, 0.04, 0.1, 9.0);
    if (silent > 0 && silent--) continue;
    const double turn = i * static_cast<double>(interval.count()) / 86400.0 * 6.2831853;
    const double air = std::round((20 - 8 * std::cos(turn)) * 10) / 10;
    held = frozen > 0 && frozen-- ? held : air;
    Sample sample = reading(start + i * interval, held);
    const double damp = std::round(60 + 39.9 * std::cos(turn * 0.37));
    if (wild > 0 && wild--) {
      sample.temperature =
          Celsius(chance(0.5) ? 5 : std::uniform_real_distribution(-5., 60.)(random));
    }
    if (by_dew_point) {
      sample.dew_point = Celsius(held - (100.0 - damp) / 5.0 + (chance(0.01) ? 12 : 0));
    } else {
      sample.humidity = Percent(chance(0.01) ? 20 : damp);
    }
    if (chance(0.05)) counter += 0.2;
    if (chance(0.002)) counter = 0.0;
    sample.rain = Millimetre(counter);
    samples.push_back(sample);
  }
  return samples;
}

}  // namespace

TEST_CASE("hours do not depend on the order in which samples came") {
  auto samples = hostile(7, false, 300s);
  samples.insert(samples.end(), samples.begin(), samples.begin() + 300);  // some come twice
  Station station = station_every(300s);
  station.rain_meaning = RainMeaning::counter;
  const auto expected = all_hours(standing(samples), station);
  std::mt19937 random(11);
  for (int round = 0; round < 5; ++round) {
    std::shuffle(samples.begin(), samples.end(), random);
    CHECK(all_hours(standing(samples), station) == expected);
  }
}

TEST_CASE("a window with its context gives the same hours as the whole record") {
  for (unsigned seed = 1; seed <= 6; ++seed) {
    for (const Seconds interval : {300s, 1200s, 3600s, 10800s}) {
      for (const Stamp stamp : {Stamp::instant, Stamp::end}) {
        const auto samples = hostile(seed, seed % 2 == 0, interval);
        Station station = station_every(interval);
        station.stamp = stamp;
        station.rain_meaning = seed % 3 == 0 ? RainMeaning::day_total : RainMeaning::counter;
        const auto whole = all_hours(samples, station);
        CHECK(flagged(whole) > 0);
        std::vector<Hour> pieces;
        const HourStart end = hour_of(samples.back().time) + hours{1};
        for (HourStart from = hour_of(start) - hours{24}; from < end; from += hours{5}) {
          const HourStart to = std::min(from + hours{5}, end);
          std::vector<Sample> seen;
          for (const Sample& sample : samples) {
            if (sample.time >= Instant(from) - context_before &&
                sample.time < Instant(to) + context_after) {
              seen.push_back(sample);
            }
          }
          for (Hour& hour : gather(seen, station, from, to)) pieces.push_back(hour);
        }
        INFO("seed " << seed << ", interval " << interval.count());
        CHECK(pieces == whole);
      }
    }
  }
}

TEST_CASE("wild values without end do not make an hour depend on all the past") {
  // Every value differs from both neighbours: which are wrong hangs on where one begins.
  std::vector<Sample> samples;
  for (int i = 0; i < 400; ++i) {
    samples.push_back(reading(start + i * 20min, i % 2 == 0 ? 20.0 : 35.0));
  }
  const Station station = station_every(1200s);
  const auto whole = all_hours(samples, station);
  CHECK(flagged(whole, Element::temperature, Verdict::wrong, Reason::spike) >= 190);
  for (int skipped = 1; skipped < 8; ++skipped) {
    const std::span<const Sample> later(samples.begin() + skipped, samples.end());
    const HourStart from = hour_of(later.front().time + context_before) + hours{1};
    const auto part = gather(later, station, from, hour_of(start + 120h));
    REQUIRE(!part.empty());
    const auto first = std::find(whole.begin(), whole.end(), part.front());
    REQUIRE(whole.end() - first >= static_cast<std::ptrdiff_t>(part.size()));
    CHECK(std::equal(part.begin(), part.end(), first));
  }
}

TEST_CASE("a changed sample changes no hour beyond the stated reach") {
  for (unsigned seed = 1; seed <= 8; ++seed) {
    const Seconds interval = seed % 2 == 0 ? 1200s : 3600s;
    const auto samples = hostile(seed, seed % 3 == 0, interval);
    Station station = station_every(interval);
    station.stamp = seed % 4 < 2 ? Stamp::end : Stamp::instant;
    station.rain_meaning = RainMeaning::counter;
    const auto before = all_hours(samples, station);
    int changed = 0;
    for (std::size_t k = 1; k + 1 < samples.size(); ++k) {
      // Every so often, and wherever a silence follows: what came before it reaches furthest.
      if (k % 7 != 0 && samples[k + 1].time - samples[k].time <= 2 * interval) continue;
      auto other = samples;
      if (k % 2 == 0) {
        other.erase(other.begin() + static_cast<std::ptrdiff_t>(k));
      } else {
        other[k].temperature = Celsius(other[k].temperature->value + 11.0);
        other[k].rain = Millimetre(other[k].rain->value + 0.4);
      }
      const auto after = all_hours(other, station);
      const HourStart first = hour_of(samples[k].time - hours_touched_before);
      const HourStart last = hour_of(samples[k].time + hours_touched_after);
      const auto beyond = [&](const std::vector<Hour>& list) {
        std::vector<Hour> kept;
        for (const Hour& hour : list) {
          if (hour.start < first || hour.start > last) kept.push_back(hour);
        }
        return kept;
      };
      INFO("seed " << seed << ", sample " << k);
      CHECK(beyond(before) == beyond(after));
      changed += before != after;
    }
    CHECK(changed > 10);
  }
}
