// The invented climates of the scenario tests are what their names promise; otherwise a scenario
// could pass for want of weather.
#include "support/weather_generator.hpp"

#include <algorithm>

#include "support/catch.hpp"

using namespace antherd;
using namespace std::chrono;

namespace {

Instant july_first() { return sys_days(2026y / July / 1) + hours(8); }

double share_at_or_above(const std::vector<weather::Sample>& samples, double humidity) {
  const auto count = std::count_if(samples.begin(), samples.end(), [&](const auto& sample) {
    return sample.humidity->value >= humidity;
  });
  return static_cast<double>(count) / static_cast<double>(samples.size());
}

/// Solar days on which four hours in a row between 10:00 and 18:00 stay below 85 %.
int days_that_dry_out(const std::vector<weather::Sample>& samples,
                      const synthetic::Stretch& stretch) {
  int days = 0, run = 0, last_counted = -1;
  for (const auto& sample : samples) {
    const double hour = synthetic::solar_hours(sample.time, stretch.longitude);
    const bool dry = hour >= 10 && hour < 18 && sample.humidity->value < 85;
    run = dry ? run + 1 : 0;
    const int number = synthetic::solar_day_number(stretch, sample.time);
    if (run >= 4 && number != last_counted) ++days, last_counted = number;
  }
  return days;
}

}  // namespace

TEST_CASE("fog coast is humid for more than a third of all hours and mostly dries out") {
  for (std::uint64_t seed = 1; seed <= 20; ++seed) {
    const synthetic::Stretch stretch{july_first(), 62, Degree(-124), seed};
    const auto samples = synthetic::cool_fog_coast(stretch);
    CAPTURE(seed);
    REQUIRE(samples.size() == 62u * 24u);
    const double humid = share_at_or_above(samples, 90);
    CHECK(humid > 1.0 / 3.0);
    CHECK(humid < 0.75);
    const int dry = days_that_dry_out(samples, stretch);
    CHECK(dry > 62 * 6 / 10);  // most afternoons …
    CHECK(dry < 62);           // … but not every one
    for (const auto& sample : samples) {
      REQUIRE(sample.temperature->value > 6.5);
      REQUIRE(sample.temperature->value < 20.5);
    }
  }
}

TEST_CASE("dry inland keeps its ends and its dew point") {
  const synthetic::Stretch stretch{july_first(), 10, Degree(-120), 1};
  const auto samples = synthetic::dry_inland(stretch, 12, 27);
  const auto by_temperature = [](const auto& a, const auto& b) {
    return *a.temperature < *b.temperature;
  };
  const auto [low, high] = std::minmax_element(samples.begin(), samples.end(), by_temperature);
  // readings stand half an hour beside the extremes: half a cosine is 0.6 % from its end there
  CHECK(low->temperature->value == Approx(12.0).margin(0.4));
  CHECK(high->temperature->value == Approx(27.0).margin(0.4));
  CHECK(synthetic::solar_hours(high->time, stretch.longitude) == Approx(15.0).margin(0.51));
  // e0(7 °C) = 1.0017 kPa, e0(12 °C) = 1.4028 kPa (FAO-56 eq. 11 by hand): 71.4 % at dawn
  CHECK(low->humidity->value == Approx(71.4).margin(1.8));
  CHECK(share_at_or_above(samples, 85) == 0.0);
}

TEST_CASE("maritime season has the mean that was asked for") {
  const Instant sown = sys_days(2026y / April / 20) + hours(8);
  for (const double asked : {13.0, 15.0, 17.0}) {
    const synthetic::Stretch stretch{sown, 150, Degree(-124), 7};
    const auto samples = synthetic::maritime_spring_sown(stretch, asked);
    double sum = 0, first = 0, midsummer = 0;
    for (std::size_t i = 0; i < samples.size(); ++i) {
      const double t = samples[i].temperature->value;
      sum += t;
      if (i < 240) first += t / 240;                           // ten days after sowing
      if (i >= 98 * 24 && i < 108 * 24) midsummer += t / 240;  // ten days about 1 August
    }
    CHECK(sum / static_cast<double>(samples.size()) == Approx(asked).margin(0.3));
    CHECK(midsummer > first);
  }
}

TEST_CASE("a seed is a season, another seed is another") {
  const synthetic::Stretch one{july_first(), 5, Degree(-124), 42};
  synthetic::Stretch two = one;
  two.seed = 43;
  CHECK(synthetic::cool_fog_coast(one) == synthetic::cool_fog_coast(one));
  CHECK(synthetic::cool_fog_coast(one) != synthetic::cool_fog_coast(two));
  // SplitMix64 from state 0: first output 0xE220A8397B1DCDAF (published with the generator, from
  // memory), divided by 2^64
  CHECK(synthetic::Dice(0).uniform() == Approx(0.883310).margin(1e-6));
}

TEST_CASE("hour records of the readings stand at their hours") {
  const synthetic::Stretch stretch{july_first(), 2, Degree(-120), 1};
  const auto hours_made = synthetic::hours_from(synthetic::dry_inland(stretch, 12, 27));
  REQUIRE(hours_made.size() == 48);
  CHECK(Instant(hours_made.front().start) == stretch.start);
  CHECK(hours_made.back().start - hours_made.front().start == hours(47));
  CHECK(hours_made.front().valid());
}
