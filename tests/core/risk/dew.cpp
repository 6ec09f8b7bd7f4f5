// Films of dew by the leaf's energy balance (weather/leaf.hpp): nights and mornings against
// published bounds; and the record of all rules beside a sensor.
#include "core/risk/wetness.hpp"
#include "core/weather/air.hpp"
#include "core/weather/leaf.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::risk;

namespace {

HumidRules energy_rules() {
  HumidRules rules;
  rules.film = Film::energy;
  return rules;
}

struct Weather {
  double temperature = 14, humidity = 95, wind = 1, watts = 0, clearness = 0.95;
};

LeafHour hour_of_weather(const Weather& weather) {
  weather::HourAir air;
  air.temperature = Celsius(weather.temperature);
  air.humidity = Percent(weather.humidity);
  air.wind = MetrePerSecond(weather.wind);
  air.solar = weather.watts * 0.0036;
  air.clear_sky = air.solar / weather.clearness;
  LeafHour hour;
  hour.temperature = air.temperature;
  hour.humidity = air.humidity;
  hour.dew_point = weather::dew_point(air.temperature, air.humidity);
  hour.drying = weather::potential_drying(air);
  hour.exchange = weather::leaf_exchange(air, weather.clearness);
  return hour;
}

/// Wet hours of a night of twelve hours of the same weather.
int wet_hours(const Weather& weather, LeafState& state) {
  int wet = 0;
  for (int i = 0; i < 12; ++i) {
    if (wet_hour(state, hour_of_weather(weather), {}, energy_rules()).wet) ++wet;
  }
  return wet;
}
int wet_hours(const Weather& weather) {
  LeafState state;
  return wet_hours(weather, state);
}

}  // namespace

TEST_CASE("dew of a clear damp night: at most 0.8 mm fall, what is above the bucket drips off") {
  // Garratt & Segal 1988, Monteith 1957: 0.5 to 0.8 mm a night is the most (from memory).
  for (double t : {5.0, 15.0, 25.0}) {
    const double night = -12 * hour_of_weather({t, 100, 1}).exchange.value;
    INFO(t << " °C: " << night << " mm");
    CHECK(night <= 0.8);
    CHECK(night >= 0.2);
    LeafState state;
    CHECK(wet_hours({t, 100, 1}, state) == 12);
    CHECK(state.dew_mm == Approx(0.2));
  }
}

TEST_CASE(
    "dew wets a leaf at a humidity that a constant threshold calls dry, where the sky is clear") {
  CHECK(wet_hours({14, 89, 0.7, 0, 0.95}) >= 8);
  CHECK(wet_hours({14, 89, 0.7, 0, 0.3}) == 0);   // under cloud
  CHECK(wet_hours({14, 89, 5.0, 0, 0.95}) == 0);  // in wind
  CHECK(wet_hours({14, 65, 0.7, 0, 0.95}) == 0);  // in dry air
  int before = 0;
  for (double humidity = 50; humidity <= 100; humidity += 1) {
    const int wet = wet_hours({14, humidity, 1});
    CHECK(wet >= before);
    before = wet;
  }
  CHECK(before == 12);
  // Overcast and windy at 93 %: dry here, wet for the usual rule, whose air hardly dries.
  const LeafHour grey = hour_of_weather({14, 93, 3, 0, 0.3});
  LeafState state;
  const Wet wet = wet_hour(state, grey, {}, energy_rules());
  CHECK_FALSE(wet.wet);
  CHECK(wet.estimate[static_cast<std::size_t>(Film::humidity)] == (grey.drying.value < 0.1));
}

TEST_CASE("dew outlasts sunrise and is gone one to three hours into a fair morning") {
  // Fair mornings dry dew one to three hours after sunrise (common practice).
  for (double dew : {0.08, 0.12, 0.2}) {
    LeafState state;
    state.dew_mm = dew;
    int hours = 0;
    for (const Weather& weather :
         {Weather{11, 93, 0.8, 40}, Weather{13, 86, 1.2, 170}, Weather{16, 75, 1.8, 320},
          Weather{18, 66, 2.2, 460}, Weather{20, 60, 2.5, 580}}) {
      if (!wet_hour(state, hour_of_weather(weather), {}, energy_rules()).wet) break;
      ++hours;
    }
    INFO(dew << " mm: " << hours << " h");
    CHECK(hours >= 1);
    CHECK(hours <= 3);
  }
  // A grey morning without wind keeps it longer.
  LeafState grey;
  grey.dew_mm = 0.2;
  int hours = 0;
  while (hours < 24 &&
         wet_hour(grey, hour_of_weather({11, 93, 0.8, 30, 0.3}), {}, energy_rules()).wet) {
    ++hours;
  }
  CHECK(hours >= 4);
}

TEST_CASE("water leaves a leaf before the dew under it; a gap takes both; dew is no water") {
  LeafState state;
  state.film_mm = 0.1;
  state.dew_mm = 0.05;
  LeafHour hour;
  hour.temperature = Celsius(15);
  hour.humidity = Percent(80);
  hour.dew_point = Celsius(11.6);
  hour.drying = Millimetre(0.06);
  hour.exchange = Millimetre(0.08);
  CHECK(wet_hour(state, hour, {}, energy_rules()).water);
  CHECK(state.film_mm == Approx(0.04));
  CHECK(state.dew_mm == Approx(0.03));  // 0.08 less the 0.06 that the water took
  wet_hour(state, hour, {}, energy_rules());
  CHECK(state.dew_mm == 0);
  state.dew_mm = 0.1;
  const Wet dewy = wet_hour(state, hour, {}, energy_rules());
  CHECK(dewy.wet);
  CHECK_FALSE(dewy.water);
  state.dew_mm = 0.1;
  after_gap(state);
  CHECK_FALSE(wet_hour(state, hour, {}, energy_rules()).wet);
}

TEST_CASE("beside a sensor each rule is counted right, missing or imagining wetness") {
  SensorRecord record;
  LeafState state;
  LeafHour hour;
  hour.temperature = Celsius(15);
  hour.humidity = Percent(96);     // wet by humidity and by energy
  hour.dew_point = Celsius(12.5);  // a depression of 2.5: not yet on by dew point
  hour.drying = Millimetre(0.2);
  hour.exchange = Millimetre(0.2);
  const auto book = [&](std::optional<double> minutes) {
    hour.sensor_minutes = minutes;
    compare(record, wet_hour(state, hour, {}, HumidRules{}));
  };
  book(60);            // wet: dew point misses it
  book(0);             // dry: the other two imagine it
  book(std::nullopt);  // no truth, no count
  hour.humidity = Percent(50);
  book(0);  // dry, and all say so
  CHECK(record.hours == 3);
  CHECK(record.wet == 1);
  CHECK(record.missed == ByFilm<int>{0, 1, 0});
  CHECK(record.imagined == ByFilm<int>{1, 0, 1});
  CHECK(record.right(Film::humidity) == 2);
  CHECK(record.right(Film::dew_point) == 2);
  CHECK(record.right(Film::energy) == 2);
}
