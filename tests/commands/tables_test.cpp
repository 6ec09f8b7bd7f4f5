// hours and replay for other programs: exactly the keys of the contract, in their order.
#include <algorithm>
#include <map>
#include <nlohmann/json.hpp>
#include <sstream>

#include "program.hpp"
#include "service/ground.hpp"
#include "support/catch.hpp"

using namespace ground;
using nlohmann::ordered_json;
using program::run;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant until = farm_time("2026-07-16 20:00");

/// A farm whose service has never run: a file of its station and a diary.
struct Past {
  Folder folder;
  Past() {
    settings_in(folder);
    folder.write("season.csv", header + rows_of(readings(Weather{}, sown, until)));
    folder.write("diary/irrigation.csv",
                 "field,start,end,method,depth,set\n"
                 "north bench,2026-07-08 20:00,2026-07-08 23:00,overhead,6 mm,1\n");
  }
  program::Ended run(std::vector<std::string> arguments) const {
    arguments.insert(arguments.end(), {"--settings", folder / "antherd.toml", "--station",
                                       "bench=" + folder / "season.csv"});
    return program::run(arguments);
  }
};

std::vector<ordered_json> lines_of(const std::string& text) {
  std::vector<ordered_json> lines;
  std::istringstream stream(text);
  for (std::string line; std::getline(stream, line);) lines.push_back(ordered_json::parse(line));
  return lines;
}

std::vector<std::string> keys_of(const ordered_json& line) {
  std::vector<std::string> keys;
  for (const auto& [key, value] : line.items()) keys.push_back(key);
  return keys;
}

using Keys = std::vector<std::string>;
const Keys hour_keys{"hour",
                     "n",
                     "coverage",
                     "temperature_c",
                     "temperature_max_c",
                     "temperature_min_c",
                     "humidity_pct",
                     "dew_point_c",
                     "vpd_kpa",
                     "rain_mm",
                     "wind_ms",
                     "solar_wm2",
                     "eto_mm",
                     "wet",
                     "thermal_time_cd",
                     "p_flower",
                     "in_window",
                     "stage",
                     "verdict",
                     "depletion_mm",
                     "ks"};

}  // namespace

TEST_CASE("hours --lines: the contract's keys in order, an hour a line, values as measured") {
  const Past past;
  const auto ended = past.run({"hours", "north", "--lines"});
  INFO(ended.err);
  REQUIRE(ended.status == 0);
  const auto lines = lines_of(ended.out);
  CHECK(lines.size() >= static_cast<std::size_t>((until - sown) / one_hour));
  std::string last;
  for (const auto& line : lines) {
    CHECK(keys_of(line) == hour_keys);
    CHECK(line["hour"].get<std::string>() > last);
    last = line["hour"].get<std::string>();
  }
  // One hour by hand: the mean of its four readings.
  const Instant at = farm_time("2026-07-13 15:00");
  double sum = 0;
  for (int i = 0; i < 4; ++i) sum += reading_at(Weather{}, at + minutes{15} * i).temperature->value;
  const auto hour = std::find_if(lines.begin(), lines.end(), [](const auto& line) {
    return line["hour"] == "2026-07-13T22:00:00Z";
  });
  REQUIRE(hour != lines.end());
  CHECK((*hour)["n"] == 4);
  CHECK((*hour)["coverage"] == 1.0);
  CHECK((*hour)["temperature_c"].get<double>() == Approx(sum / 4).margin(1e-4));
  CHECK((*hour)["wind_ms"].is_null());
  CHECK((*hour)["solar_wm2"].is_null());
  CHECK((*hour)["in_window"] == true);
  CHECK((*hour)["verdict"] == "good");
}

TEST_CASE("hours --csv is the same table, and --from --to cut out whole farm days") {
  const Past past;
  const auto csv =
      past.run({"hours", "north", "--csv", "--from", "2026-07-12", "--to", "2026-07-12"});
  REQUIRE(csv.status == 0);
  std::string expected;
  for (const auto& key : hour_keys) expected += (expected.empty() ? "" : ",") + key;
  CHECK(csv.out.substr(0, csv.out.find("\r\n")) == expected);
  CHECK(std::count(csv.out.begin(), csv.out.end(), '\n') == 25);
  const auto lines =
      past.run({"hours", "north", "--lines", "--from", "2026-07-12", "--to", "2026-07-12"});
  CHECK(lines_of(lines.out).size() == 24);
  CHECK(lines_of(lines.out).front()["hour"] == "2026-07-12T07:00:00Z");
  const auto people = past.run({"hours", "north", "--from", "2026-07-12", "--to", "2026-07-12"});
  CHECK(people.status == 0);
  CHECK(people.out.find("2026-07-12 00:00") != std::string::npos);

  for (const char* wrong : {"2026-02-30", "yesterday", ""}) {
    if (*wrong == '\0') continue;
    const auto ended = past.run({"hours", "north", "--from", wrong});
    INFO(wrong << ": " << ended.err);
    CHECK(ended.status == 2);
    CHECK(ended.err.find(wrong) != std::string::npos);
  }
}

TEST_CASE(
    "replay --lines: every kind of line with the contract's keys, in time order, whole days") {
  const Past past;
  const auto ended = past.run({"replay", "--lines"});
  INFO(ended.err);
  REQUIRE(ended.status == 0);
  const std::map<std::string, Keys> begins{
      {"season", {"what", "field", "sown"}},
      {"stage", {"what", "field", "stage", "date"}},
      {"day",
       {"what", "date", "field", "tmax_c", "hours_32", "hours_35", "hours_38", "degree_hours",
        "heat_level", "in_window", "flower_share", "ks"}},
      {"humid_day",
       {"what", "date", "field", "infection", "water", "dry_out", "score", "r", "level"}},
      {"alert",
       {"what", "at", "field", "kind", "phase", "severity", "certainty", "episode", "figure"}},
      {"sum", {"what"}}};
  std::map<std::string, int> seen;
  const auto lines = lines_of(ended.out);
  std::string last_day, last_alert;
  for (const auto& line : lines) {
    const auto what = line["what"].get<std::string>();
    ++seen[what];
    const auto keys = keys_of(line);
    INFO(line.dump());
    REQUIRE(begins.contains(what));
    const Keys& wanted = begins.at(what);
    if (what == "season" || what == "sum") {
      CHECK(std::equal(wanted.begin(), wanted.end(), keys.begin()));
    } else {
      CHECK(keys == wanted);
    }
    if (what == "day") {
      CHECK(line["date"].get<std::string>() > last_day);
      last_day = line["date"].get<std::string>();
    }
    if (what == "alert") {
      CHECK(line["at"].get<std::string>() >= last_alert);
      last_alert = line["at"].get<std::string>();
    }
    if (what == "sum") {
      CHECK(Keys(keys.end() - 3, keys.end()) ==
            Keys{"exposed_share", "affected_low", "affected_high"});
    }
  }
  CHECK(lines.front()["what"] == "season");
  CHECK(lines.back()["what"] == "sum");
  // 25 June to 15 July is 21 complete days; the 16th is not complete.
  CHECK(seen["day"] == 21);
  CHECK(last_day == "2026-07-15");
  CHECK(seen["humid_day"] >= 20);
  CHECK(seen["stage"] >= 2);
  CHECK(seen["alert"] >= 2);
}

TEST_CASE("replay for people writes nothing and sends nothing") {
  const Past past;
  const auto before = past.folder.names("");
  const auto ended = past.run({"replay"});
  INFO(ended.out << ended.err);
  CHECK(ended.status == 0);
  CHECK(ended.out.find("Nothing was sent") != std::string::npos);
  CHECK(ended.out.find("eat") != std::string::npos);
  CHECK(past.folder.names("") == before);
  const auto full = past.run({"replay", "--full"});
  CHECK(full.out.size() > ended.out.size());
}

TEST_CASE("replay tells of a thermometer that dies while other values still come") {
  const Past past;
  const Instant dies = farm_time("2026-07-10 09:00");
  std::string rows = header + rows_of(readings(Weather{}, sown, dies));
  for (Instant at = dies; at < dies + hours{6}; at += minutes{15}) {
    rows += utc_clock(at) + ",NA,45.5,0\n";
  }
  past.folder.write("season.csv", rows);
  const auto people = past.run({"replay"});
  INFO(people.out << people.err);
  CHECK(people.out.find("bench no temperature 1 h since 8:45 am") != std::string::npos);
  const auto lines = past.run({"replay", "--lines"});
  CHECK(lines.out.find("\"kind\":\"no_data\",\"phase\":\"opened\"") != std::string::npos);
}

TEST_CASE("check --stations counts each week's hours by their verdicts") {
  const Past past;
  const auto csv = past.run({"check", "--stations", "--csv"});
  INFO(csv.out << csv.err);
  REQUIRE(csv.status == 0);
  CHECK(csv.out.find("station,week,hours,seen,good,suspect,wrong,reasons\r\n") == 0);
  // Thursday 25 June to Thursday 16 July: four weeks of the calendar, the middle two whole.
  CHECK(std::count(csv.out.begin(), csv.out.end(), '\n') == 5);
  CHECK(csv.out.find("bench,2026-W27,168,168,168,0,0,\r\n") != std::string::npos);
  const auto lines = lines_of(past.run({"check", "--stations", "--lines"}).out);
  REQUIRE(lines.size() == 4);
  CHECK(keys_of(lines[1]) ==
        Keys{"station", "week", "hours", "seen", "good", "suspect", "wrong", "reasons"});
  int hours = 0;
  for (const auto& line : lines) hours += line["hours"].get<int>();
  CHECK(hours == (until - sown) / one_hour);
  const auto people = past.run({"check", "--stations"});
  CHECK(people.status == 0);
  CHECK(people.out.find("2026-W28") != std::string::npos);
  // Where no table is asked for these options would be silently without effect.
  CHECK(past.run({"check"}).status == 2);
  CHECK(run({"check", "--csv", "--settings", past.folder / "antherd.toml"}).status == 2);
}

TEST_CASE("check --stations names a temperature in the wrong unit") {
  const Past past;
  auto samples = readings(Weather{}, sown, until);
  for (auto& sample : samples) {
    sample.temperature = Celsius((sample.temperature->value - 8.0) * 1.8 + 32.0);
  }
  past.folder.write("season.csv", header + rows_of(samples));
  const auto csv = past.run({"check", "--stations", "--csv"});
  REQUIRE(csv.status == 0);
  CHECK(csv.out.find("temperature fahrenheit as celsius 168") != std::string::npos);
}

TEST_CASE("a station's file that cannot be used is named, and the status is not 0") {
  const Past past;
  const auto with = [&](const std::string& pair) {
    return run({"replay", "--settings", past.folder / "antherd.toml", "--station", pair});
  };
  for (const std::string& pair :
       {std::string("moon=season.csv"), std::string("bench"),
        "bench=" + past.folder / "missing.csv", "bench=" + past.folder / "antherd.toml"}) {
    const auto ended = with(pair);
    INFO(pair << ": " << ended.err);
    CHECK(ended.status != 0);
    CHECK(ended.err.find(pair.substr(pair.find('=') + 1)) != std::string::npos);
  }
}
