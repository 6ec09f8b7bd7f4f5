// A leaf wetness sensor from its column to the review, and the rules that stand in for it.
#include <functional>
#include <nlohmann/json.hpp>
#include <sstream>

#include "program.hpp"
#include "service/ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant until = farm_time("2026-07-16 20:00");

/// Whether the sensor is wet, at a clock hour of the farm.
using Sensor = std::function<std::string(int hour)>;

/// Dry days and nights by the hygrometer (below 90 %); a fourth column for the sensor.
std::string rows(const Sensor& sensor) {
  std::string text = "time,temp_c,rh_pct,rain_mm,leaf_min\n";
  Weather mild;
  mild.hot_last = mild.hot_first - days{1};  // no hot days
  for (const auto& sample : readings(mild, sown, until)) {
    std::string row = row_of(sample);
    row.pop_back();
    const int hour = std::stoi(farm_clock(sample.time).substr(11, 2));
    text += row + "," + sensor(hour) + "\n";
  }
  return text;
}

Farm farm_with_sensor(const std::string& film) {
  Farm farm;
  farm.extra_farm = "exercise = true";  // now is the newest reading's time
  farm.values =
      "wetness = { column = \"leaf_min\", unit = \"min\", interval = \"15 min\" }\n"
      "missing = [\"\"]\n";
  farm.of_field = "humid = { film = \"" + film + "\" }\n";
  return farm;
}

struct Season {
  Bench bench;
  Season(const std::string& film, const Sensor& sensor) : bench(farm_with_sensor(film)) {
    bench.open(sown);
    bench.folder.write("drop/bench.csv", rows(sensor));
    bench.turn(until);
  }
  program::Ended run(std::vector<std::string> arguments) const {
    arguments.insert(arguments.end(), {"--settings", bench.folder / "antherd.toml"});
    return program::run(arguments);
  }
  /// Hours whose `wet` is true, of those with data.
  std::pair<int, int> wet_hours() const {
    const auto ended = run({"hours", "north", "--lines"});
    REQUIRE(ended.status == 0);
    std::istringstream stream(ended.out);
    std::pair<int, int> found;
    for (std::string line; std::getline(stream, line);) {
      const auto row = nlohmann::json::parse(line);
      if (row["wet"].is_null()) continue;
      ++found.second;
      if (row["wet"].get<bool>()) ++found.first;
    }
    return found;
  }
};

/// Whether a text holds a part, wherever its lines were broken.
bool holds(const std::string& text, const std::string& part) {
  std::string even;
  for (const char c : text) {
    const bool blank = c == ' ' || c == '\n';
    if (!blank || (!even.empty() && even.back() != ' ')) even += blank ? ' ' : c;
  }
  return even.find(part) != std::string::npos;
}

}  // namespace

TEST_CASE(
    "a leaf sensor decides, from its column to the warning, and the review keeps its record") {
  // Wet from midnight to noon in dry air: dew that no rule sees. Seven hours after sunrise are
  // favourable; as dew alone, which dries by day, they count one at most, and no letter is due.
  const Season season("humidity", [](int hour) { return hour < 12 ? "15" : "0"; });
  // 25 June to 16 July, 20:00: 21 days and 20 hours are 524 hours, 22 mornings of 12 wet ones.
  CHECK(season.wet_hours() == std::pair(264, 524));

  const auto review = season.run({"review", "--season"});
  INFO(review.out << review.err);
  CHECK(review.status == 0);
  CHECK(holds(review.out, "LEAF SENSOR"));
  // The last hour has not closed yet.
  CHECK(holds(review.out, "The sensor told 523 hours since sowing, 264 of them wet"));
  CHECK(holds(review.out,
              "humidity (set for this field): right in 259 of 523 hours (50 %); missed 264 wet "
              "hours, took 0 dry ones for wet"));
  CHECK(holds(review.out, "a leaf's energy balance: right in"));

  const auto replay = season.run({"replay", "--lines"});
  CHECK(holds(replay.out, "\"what\":\"humid_day\""));
  std::istringstream stream(replay.out);
  int favourable = 0;
  for (std::string line; std::getline(stream, line);) {
    const auto row = nlohmann::json::parse(line);
    if (row["what"] == "humid_day" && !row["infection"].is_null() && row["infection"] >= 1) {
      ++favourable;
      CHECK(row["water"] == false);
    }
  }
  CHECK(favourable >= 15);
}

TEST_CASE("a sensor whose minutes are missing does not call the hour dry") {
  // One of four values comes and it is dry: 15 minutes tell nothing of the other 45.
  int row = 0;
  const Season gappy("humidity", [&row](int) { return row++ % 4 == 0 ? "0" : ""; });
  CHECK_FALSE(holds(gappy.run({"review", "--season"}).out, "LEAF SENSOR"));
  const Season silent("humidity", [](int) { return ""; });
  CHECK(gappy.wet_hours() == silent.wet_hours());
}

TEST_CASE("the rule of the settings decides where no sensor tells, and letters say so") {
  const Season by_dew_point("dew_point", [](int) { return ""; });
  const Season by_humidity("humidity", [](int) { return ""; });
  const Season by_energy("energy", [](int) { return ""; });
  // Nights end 3 °C from the dew point, near 83 %: dry by humidity and by dew point.
  CHECK(by_humidity.wet_hours().first == 0);
  CHECK(by_dew_point.wet_hours().first == 0);
  CHECK(by_energy.wet_hours().first <= by_energy.wet_hours().second / 4);
  const auto check = by_energy.run({"check"});
  CHECK(holds(check.out, "leaf wetness: by a leaf's energy balance"));
  CHECK(holds(check.out + check.err, "wants wind and solar"));
}
