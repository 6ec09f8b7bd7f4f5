// A station whose settings name the wrong unit: no heat is told, the reason is.
#include <algorithm>

#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant begins = farm_time("2026-07-02 00:00");
const Instant ends = farm_time("2026-07-06 09:00");

/// A cool July in °F, as a column of °C: nights of 41…46, days of 66.
std::vector<weather::Sample> in_fahrenheit(Instant from, Instant to) {
  auto samples = readings(Weather{}, from, to);
  for (auto& sample : samples) {
    sample.temperature = Celsius((sample.temperature->value - 8.0) * 1.8 + 32.0);
  }
  return samples;
}

bool holds(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

}  // namespace

TEST_CASE("°F read as °C: no heat is told, the unit is") {
  Farm farm;
  farm.sown = "2026-05-05";  // the flowering of a field whose station came late is not known
  Bench bench(farm);
  bench.open(begins);
  for (Instant now = begins; now <= ends; now += minutes{60}) {
    bench.drop("bench-" + utc_clock(now).substr(0, 10) + utc_clock(now).substr(11, 2) + ".csv",
               in_fahrenheit(now - minutes{60}, now));
    bench.turn(now);
  }
  const auto& hours = bench.desk->keeper().lookout().station_hours("bench");
  const auto hot = std::count_if(hours.begin(), hours.end(), [](const auto& hour) {
    return hour.has_temperature() && hour.temperature->value >= 38.0;
  });
  CHECK(hot > 20);  // as gathered, and each would be Extreme
  CHECK(bench.letters_of("heat").empty());
  const auto letters = bench.letters_of("doubtful_sensor");
  REQUIRE(letters.size() >= 1);
  CHECK(letters.size() <= 5);  // in its window: the opening and a reminder a day
  CHECK(holds(letters.back().letter.body, "looks like °F read as °C"));
  CHECK(holds(letters.back().letter.body, "unit in the settings"));
  CHECK(holds(letters.back().letter.body, "no heat"));
}
