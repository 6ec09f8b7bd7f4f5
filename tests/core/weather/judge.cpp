// Quality control of single values: range, saturation, spikes, dew points (science §3, the table).
#include "readings.hpp"

using namespace readings;

namespace {

constexpr auto temperature = Element::temperature;
constexpr auto humidity = Element::humidity;

std::vector<Hour> judged(Seconds interval, std::initializer_list<double> values) {
  return all_hours(temperatures(interval, values), station_every(interval));
}
std::vector<Hour> judged_humidity(Seconds interval, std::initializer_list<double> values) {
  return all_hours(humidities(interval, values), station_every(interval));
}
int wrong_spikes(const std::vector<Hour>& list, Element element = temperature) {
  return flagged(list, element, Verdict::wrong, Reason::spike);
}
int suspect_spikes(const std::vector<Hour>& list, Element element = temperature) {
  return flagged(list, element, Verdict::suspect, Reason::spike);
}
int unconfirmed(const std::vector<Hour>& list, Element element = temperature) {
  return flagged(list, element, Verdict::suspect, Reason::unconfirmed);
}

}  // namespace

TEST_CASE("temperature outside its range is wrong and left out") {
  const auto list = judged(300s, {20.0, -40.1, 55.1, 21.0});
  REQUIRE(list.size() == 1);
  CHECK(list[0].n == 2);
  CHECK(list[0].temperature->value == Approx(20.5).epsilon(1e-12));
  CHECK(flagged(list, temperature, Verdict::wrong, Reason::out_of_range) == 2);
  const Flag& flag = list[0].flags.at(0);
  CHECK(flag.value == -40.1);
  CHECK(flag.at == start + 300s);
  // The ends themselves are plausible.
  CHECK(flagged(judged(300s, {-40.0, -40.0})) == 0);
  CHECK(flagged(judged(300s, {55.0, 55.0})) == 0);
}

TEST_CASE("humidity above saturation is set to 100, doubted above 102 and wrong above 104") {
  const auto list = judged_humidity(300s, {99.0, 101.0, 102.0, 102.1, 104.0, 104.1, -0.1});
  REQUIRE(list.size() == 1);
  CHECK(list[0].n_humidity == 5);
  // By hand: (99 + 4 × 100) / 5.
  CHECK(list[0].humidity->value == Approx(99.8).epsilon(1e-12));
  CHECK(list[0].humidity_max->value == 100.0);
  CHECK(flagged(list, humidity, Verdict::suspect, Reason::above_saturation) == 2);
  CHECK(flagged(list, humidity, Verdict::wrong, Reason::out_of_range) == 2);
}

TEST_CASE("the single night spike is wrong") {
  // One sample of 39.7 °C between 28.6 at a quarter of an hour: 11.1 is above twice 4.
  const auto list = judged(900s, {28.6, 28.6, 39.7, 28.6});
  CHECK(wrong_spikes(list) == 1);
  CHECK(flagged(list) == 1);
  REQUIRE(list.size() == 1);
  CHECK(list[0].n == 3);
  CHECK(list[0].temperature_max->value == 28.6);
  CHECK(list[0].flags[0].value == 39.7);
  CHECK(list[0].coverage == 0.75);
}

TEST_CASE("temperature spikes by the time between values") {
  struct Step {
    Seconds apart;
    double limit;
  };
  // Science §3: 3 °C to 10 min, 4 to 60 min, 7 to 2 h, 9 to 3 h.
  for (const Step step : {Step{300s, 3}, Step{600s, 3}, Step{660s, 4}, Step{3600s, 4},
                          Step{3660s, 7}, Step{7200s, 7}, Step{7260s, 9}, Step{10800s, 9}}) {
    INFO(step.apart.count() << " s");
    for (const double sign : {1.0, -1.0}) {
      const auto spike = [&](double size) {
        return judged(step.apart, {10, 10 + sign * size, 10});
      };
      CHECK(flagged(spike(step.limit)) == 0);
      CHECK(suspect_spikes(spike(step.limit + 0.1)) == 1);
      CHECK(suspect_spikes(spike(2 * step.limit)) == 1);
      CHECK(wrong_spikes(spike(2 * step.limit + 0.1)) == 1);
    }
  }
  CHECK(flagged(judged(10860s, {10, 40, 10})) == 0);  // no test beyond 3 h
}

TEST_CASE("humidity spikes by the time between values") {
  const auto spike = [](Seconds apart, double size) {
    return judged_humidity(apart, {5, 5 + size, 5});
  };
  CHECK(flagged(spike(600s, 15)) == 0);
  CHECK(suspect_spikes(spike(600s, 15.1), humidity) == 1);
  CHECK(suspect_spikes(spike(600s, 30), humidity) == 1);
  CHECK(wrong_spikes(spike(600s, 30.1), humidity) == 1);
  CHECK(flagged(spike(660s, 45)) == 0);
  CHECK(suspect_spikes(spike(3600s, 45.1), humidity) == 1);
  CHECK(wrong_spikes(spike(3600s, 90.1), humidity) == 1);
  CHECK(flagged(spike(3660s, 90)) == 0);  // no test beyond an hour
}

TEST_CASE("a suspect value is used, counted and named") {
  const auto list = judged(300s, {20, 24, 20, 20});
  REQUIRE(list.size() == 1);
  CHECK(list[0].n == 4);
  CHECK(list[0].temperature_max->value == 24.0);
  CHECK(suspect_spikes(list) == 1);
}

TEST_CASE("a step is no spike, and both neighbours must differ") {
  CHECK(flagged(judged(300s, {20, 20, 32, 32, 32})) == 0);  // a new level
  CHECK(flagged(judged(300s, {20, 26, 32, 38, 38})) == 0);  // a steep rise
  CHECK(flagged(judged(300s, {20, 32, 30, 29})) == 0);      // differs from the one before only
  // Wrong asks for twice the limit on both sides.
  CHECK(suspect_spikes(judged(300s, {20, 28, 24})) == 1);
}

TEST_CASE("each neighbour counts by its own distance") {
  // 6 °C from a value 2 h before (limit 7) and 6 °C from one 5 min after (limit 3).
  std::vector<Sample> samples{reading(start, 20.0), reading(start + 2h, 26.0),
                              reading(start + 2h + 5min, 20.0), reading(start + 2h + 10min, 20.0)};
  CHECK(flagged(all_hours(samples, station_every(300s))) == 0);
  samples[1].temperature = Celsius(27.5);  // now above 7, and above twice 3: suspect on one side
  CHECK(suspect_spikes(all_hours(samples, station_every(300s))) == 1);
}

TEST_CASE("a wrong value is no neighbour") {
  // Between two spikes the good value differs from both, and yet it is the good one.
  const auto list = judged(300s, {20, 35, 20, 35, 20, 20});
  CHECK(wrong_spikes(list) == 2);
  CHECK(flagged(list) == 2);
  // A value out of range hides nothing: the neighbours are those beyond it.
  CHECK(wrong_spikes(judged(300s, {20, 99, 35, -70, 20})) == 1);
  // Two wild values of two heights: with the higher gone the lower is alone.
  CHECK(wrong_spikes(judged(300s, {20, 30, 45, 20, 20})) == 2);
}

TEST_CASE("a jump is unconfirmed until a later value comes") {
  auto list = judged(300s, {20, 20, 27});
  CHECK(unconfirmed(list) == 1);
  CHECK(list[0].n == 2);
  CHECK(list[0].temperature->value == 20.0);
  // Confirmed as a new level, or refuted.
  CHECK(flagged(judged(300s, {20, 20, 27, 27})) == 0);
  CHECK(wrong_spikes(judged(300s, {20, 20, 27, 20})) == 1);
  // What comes too late to be compared confirms nothing; an implausible value neither.
  std::vector<Sample> samples = temperatures(300s, {20, 20, 27});
  samples.push_back(reading(start + 10min + 3h + 1s, 27.0));
  CHECK(unconfirmed(all_hours(samples, station_every(300s))) == 1);
  CHECK(unconfirmed(judged(300s, {20, 20, 27, 80})) == 1);
  // The first value has no earlier one and no jump.
  CHECK(flagged(judged(300s, {27})) == 0);
  CHECK(unconfirmed(judged_humidity(300s, {40, 40, 60}), humidity) == 1);
}

TEST_CASE("humidity comes from a dew point where there is no humidity") {
  Sample sample = reading(start, 25.0);
  sample.dew_point = Celsius(15.0);
  auto list = all_hours({sample}, station_every(3600s));
  // FAO-56 table 2.3 (from memory): 1.705 / 3.168 = 53.82 %; the reverse would be 185.8.
  CHECK(list.at(0).humidity->value == Approx(53.82).margin(0.02));
  CHECK(list.at(0).humidity_coverage == 1.0);

  SECTION("a dew point up to half a degree above the air is rounding") {
    sample.dew_point = Celsius(25.5);
    list = all_hours({sample}, station_every(3600s));
    CHECK(list.at(0).humidity->value == 100.0);
    CHECK(flagged(list) == 0);
  }
  SECTION("more is wrong for the dew point") {
    sample.dew_point = Celsius(25.6);
    list = all_hours({sample}, station_every(3600s));
    CHECK_FALSE(list.at(0).humidity);
    CHECK(list.at(0).temperature->value == 25.0);
    CHECK(flagged(list, Element::dew_point, Verdict::wrong, Reason::dew_above_temperature) == 1);
    CHECK(flagged(list) == 1);
  }
  SECTION("out of range, or without a usable temperature, gives no humidity") {
    sample.dew_point = Celsius(-99.0);
    list = all_hours({sample}, station_every(3600s));
    CHECK_FALSE(list.at(0).humidity);
    CHECK(flagged(list, Element::dew_point, Verdict::wrong, Reason::out_of_range) == 1);
    sample.dew_point = Celsius(15.0);
    sample.temperature = Celsius(70.0);
    list = all_hours({sample}, station_every(3600s));
    CHECK_FALSE(list.at(0).humidity);
    CHECK(list.at(0).n == 0);
    sample.temperature.reset();
    CHECK_FALSE(all_hours({sample}, station_every(3600s)).at(0).humidity);
  }
  SECTION("a humidity column goes before it") {
    sample.humidity = Percent(61.0);
    CHECK(all_hours({sample}, station_every(3600s)).at(0).humidity->value == 61.0);
  }
}

TEST_CASE("a humidity derived from a dew point is tested for spikes too") {
  std::vector<Sample> samples = temperatures(300s, {25, 25, 25});
  for (Sample& sample : samples) sample.dew_point = Celsius(5.0);  // 27.5 %
  samples[1].dew_point = Celsius(20.0);                            // 73.8 %
  const auto list = all_hours(samples, station_every(300s));
  CHECK(wrong_spikes(list, humidity) == 1);
  CHECK(list.at(0).n_humidity == 2);
  CHECK(list.at(0).n == 3);
}

TEST_CASE("rain in dry air is doubted") {
  std::vector<Sample> samples = humidities(900s, {45, 46, 47, 48});
  for (Sample& sample : samples) sample.rain = Millimetre(0.125);
  Station station = station_every(900s);
  station.measures_rain = true;
  CHECK(flagged(all_hours(samples, station), humidity, Verdict::suspect, Reason::rain_in_dry_air) ==
        4);
  samples[0].rain = Millimetre(0.1);  // 0.475 mm
  CHECK(flagged(all_hours(samples, station)) == 0);
  samples[0].rain = Millimetre(3.0);
  for (Sample& sample : samples) sample.humidity = Percent(50.0);
  CHECK(flagged(all_hours(samples, station)) == 0);
}

TEST_CASE("other elements out of range are left out and named") {
  Sample sample = reading(start, 20.0, 50.0);
  sample.wind = MetrePerSecond(80);
  sample.solar = WattPerSquareMetre(5000);
  sample.rain = Millimetre(-0.2);
  sample.wet_minutes = 90.0;
  const auto list = all_hours({sample}, station_every(3600s));
  const Hour& hour = list.at(0);
  CHECK_FALSE(hour.wind);
  CHECK_FALSE(hour.solar);
  CHECK_FALSE(hour.rain);
  CHECK_FALSE(hour.wet_minutes);
  CHECK(hour.flags.size() == 4);
  for (const Flag& flag : hour.flags) {
    CHECK(flag.verdict == Verdict::wrong);
    CHECK(flag.reason == Reason::out_of_range);
  }
  sample.solar = WattPerSquareMetre(-4);  // a pyranometer at night
  CHECK(all_hours({sample}, station_every(3600s)).at(0).solar->value == 0.0);
}

TEST_CASE("flags have words") {
  const auto list = judged(900s, {28.6, 39.7, 28.6});
  const Flag& flag = list.at(0).flags.at(0);
  CHECK(describe(flag) == "spike, left out");
  CHECK(std::string(name_of(flag.element)) == "temperature");
  CHECK(std::string(name_of(flag.verdict)) == "wrong");
  CHECK(std::string(name_of(flag.reason)) == "spike");
}
