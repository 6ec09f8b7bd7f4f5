// check --sample: guesses from a file's look, and the block that the real reader takes.
#include "run/commands/sample.hpp"

#include <algorithm>

#include "program.hpp"
#include "service/ground.hpp"
#include "support/catch.hpp"

using namespace ground;
using namespace antherd::commands;

namespace {

SampleGuess guess(const std::string& text) { return guess_form(split_sample(text)); }

bool holds(const std::vector<std::string>& lines, const std::string& line) {
  return std::find(lines.begin(), lines.end(), line) != lines.end();
}

}  // namespace

TEST_CASE("a file in trade units is guessed by its headers") {
  const SampleGuess seen = guess(
      "time,temp_f,rh_pct,rain_in,wind_mph,wind_dir\n"
      "2026-07-14 13:00,91.2,31,0.00,4.1,270\n"
      "2026-07-14 13:05,91.6,30,0.00,3.9,265\n");
  CHECK(holds(seen.lines,
              "time = { column = \"time\", form = \"%Y-%m-%d %H:%M\", zone = \"farm\" }"));
  CHECK(holds(seen.lines, "temperature = { column = \"temp_f\", unit = \"degF\" }"));
  CHECK(holds(seen.lines, "humidity = { column = \"rh_pct\", unit = \"%\" }"));
  CHECK(holds(seen.lines,
              "rain = { column = \"rain_in\", unit = \"in\", meaning = \"since_last\" }"));
  CHECK(holds(seen.lines, "wind = { column = \"wind_mph\", unit = \"mph\", height = \"2 m\" }"));
  CHECK(seen.missing.empty());
  CHECK(seen.doubts.size() == 3);  // zone, rain's meaning, wind's height
}

TEST_CASE("units without a name are guessed by the values, separators and commas are seen") {
  const SampleGuess seen =
      guess("Datum;Zeit;Temperatur;RH\n14.07.2026;13:00;31,4;0,31\n14.07.2026;13:10;31,9;0,30\n");
  CHECK(holds(seen.lines,
              "time = { columns = [\"Datum\", \"Zeit\"], form = \"%d.%m.%Y %H:%M\", "
              "zone = \"farm\" }"));
  CHECK(holds(seen.lines, "temperature = { column = \"Temperatur\", unit = \"degC\" }"));
  CHECK(holds(seen.lines, "humidity = { column = \"RH\", unit = \"1\" }"));
  const SampleGuess hot = guess("t,air\n1752498000,88.0\n1752498300,89.0\n");
  CHECK(holds(hot.lines, "temperature = { column = \"air\", unit = \"degF\" }"));
  CHECK(holds(hot.lines, "time = { column = \"t\", form = \"unix\" }"));
  CHECK(holds(hot.missing, "dew_point"));
}

TEST_CASE("times are read in the ways that loggers and exports write them") {
  const auto time_of = [](const std::string& header, const std::string& first,
                          const std::string& second) {
    const SampleGuess seen =
        guess(header + ";temp_c;rh\n" + first + ";21.5;50\n" + second + ";21.4;51\n");
    return seen.lines.empty() ? "" : seen.lines.front();
  };
  CHECK(time_of("time", "1995 03 17 23:45 UTC", "1995 03 18 00:45 UTC") ==
        "time = { column = \"time\", form = \"%Y %m %d %H:%M UTC\", zone = \"utc\" }");
  CHECK(time_of("observed", "202607141300", "202607141400") ==
        "time = { column = \"observed\", form = \"%Y%m%d%H%M\", zone = \"farm\" }");
  CHECK(time_of("Date", "7/14/2026 1:05 PM", "7/14/2026 1:10 PM") ==
        "time = { column = \"Date\", form = \"%m/%d/%Y %I:%M %p\", zone = \"farm\" }");
  // A day above 12 settles which number is the day, wherever it stands in the file.
  CHECK(time_of("Date", "07/12/2026 13:05", "14/12/2026 13:10") ==
        "time = { column = \"Date\", form = \"%d/%m/%Y %H:%M\", zone = \"farm\" }");
  CHECK(time_of("Time (UTC)", "2026-07-14 13:05:00", "2026-07-14 13:10:00") ==
        "time = { column = \"Time (UTC)\", form = \"%Y-%m-%d %H:%M:%S\", zone = \"utc\" }");
  // An ISO text says its zone or does not.
  CHECK(time_of("t", "2026-07-14T13:05:00Z", "2026-07-14T13:10:00Z") ==
        "time = { column = \"t\", form = \"iso\" }");
  CHECK(time_of("t", "2026-07-14T13:05", "2026-07-14T13:10") ==
        "time = { column = \"t\", form = \"iso\", zone = \"farm\" }");
  CHECK(time_of("t", "2026-07-14 13:05 -0700", "2026-07-14 13:10 -0700") ==
        "time = { column = \"t\", form = \"%Y-%m-%d %H:%M %z\" }");
  CHECK(time_of("t", "soon", "later") == "temperature = { column = \"temp_c\", unit = \"degC\" }");
}

TEST_CASE("the air outdoors is taken, never a room's, and each unit by its own name") {
  const SampleGuess seen = guess(
      "Date,Indoor Temperature (°F),Outdoor Temperature (°F),Feels Like (°F),Indoor Humidity (%),"
      "Outdoor Humidity (%)\n2026-07-14 13:00,70,91,95,40,31\n2026-07-14 13:05,70,92,96,40,30\n");
  CHECK(holds(seen.lines,
              "temperature = { column = \"Outdoor Temperature (°F)\", unit = \"degF\" }"));
  CHECK(holds(seen.lines, "humidity = { column = \"Outdoor Humidity (%)\", unit = \"%\" }"));
  const SampleGuess room = guess("time,indoor_temp,indoor_humidity\n2026-07-14 13:00,21,40\n");
  CHECK(holds(room.missing, "temperature"));
  // Two units in one file: air in °F, dew point in °C.
  const SampleGuess mixed =
      guess("valid,tmpf,dwpc\n2026-07-14 13:00,58,2.2\n2026-07-14 14:00,51,1.7\n");
  CHECK(holds(mixed.lines, "temperature = { column = \"tmpf\", unit = \"degF\" }"));
  CHECK(holds(mixed.lines, "dew_point = { column = \"dwpc\", unit = \"degC\" }"));
  // A unit in a row below the header.
  const SampleGuess row = guess("timestamp,AirT,RH\nTS,Deg F,%\n2026-07-14 13:00:00,31.4,31\n");
  CHECK(holds(row.lines, "temperature = { column = \"AirT\", unit = \"degF\" }"));
}

TEST_CASE("a unit that nothing names is a doubt with the values it was guessed from") {
  // Winter in °F cannot be told from °C: the dew point takes the air's unit, and both are said.
  const SampleGuess cold =
      guess("time,temperature,dewpoint\n2026-01-14 13:00,28,20\n2026-01-14 14:00,30,21\n");
  CHECK(holds(cold.doubts,
              "temperature: no unit is named; its values run from 28 to 30 and are taken as degC"));
  const SampleGuess hot =
      guess("time,temperature,dewpoint\n2026-07-14 13:00,88,40\n2026-07-14 14:00,90,41\n");
  CHECK(holds(hot.lines, "dew_point = { column = \"dewpoint\", unit = \"degF\" }"));
  CHECK(holds(hot.doubts,
              "dew_point: no unit is named; its values run from 40 to 41 and are taken as degF"));
}

TEST_CASE("wind and rain without a unit say which one was taken") {
  const SampleGuess seen =
      guess("time,temp_f,rh,wind_speed,precip\n2026-07-14 13:00,91,31,10.4,0\n");
  CHECK(holds(seen.doubts,
              "wind: no unit is named and m/s is taken; how high does the sensor stand?"));
  const SampleGuess row =
      guess("time,temp,rh,wind,rain\nTS,Deg C,%,Km/h,mm\n2026-07-14 13:00,31,31,10.4,0\n");
  CHECK(holds(row.lines, "wind = { column = \"wind\", unit = \"km/h\", height = \"2 m\" }"));
  CHECK(holds(row.doubts, "wind: how high does the sensor stand?"));
}

TEST_CASE("marks for missing values and several stations in one file are seen") {
  const SampleGuess seen = guess(
      "station,time,T,TD\nNUQ,2026-03-17 23:45,15,10\nBIS,2026-03-17 23:50,-9999,M\n"
      "NUQ,2026-03-18 00:45,14,9\nBIS,2026-03-18 00:50,-3,-9999\n");
  CHECK(holds(seen.lines, "where = { column = \"station\", equals = \"NUQ\" }"));
  CHECK(
      holds(seen.lines, "missing = [\"\", \"NA\", \"NaN\", \"nan\", \"null\", \"-9999\", \"M\"]"));
  CHECK(holds(seen.lines, "temperature = { column = \"T\", unit = \"degC\" }"));
  CHECK(holds(seen.doubts, "where: the file holds 2 or more stations (NUQ, BIS); name yours"));
  // A number for each row names no station.
  const SampleGuess rows =
      guess("id,time,T,RH\n1,2026-03-17 23:45,15,50\n2,2026-03-17 23:50,15,50\n");
  for (const std::string& line : rows.lines) CHECK(line.find("where") == std::string::npos);
}

TEST_CASE("a text without rows or without a time says what is missing") {
  CHECK(guess("time,temp\n").missing.size() == 1);
  CHECK(holds(guess("temp,rh\n21,50\n").missing, "time"));
  CHECK(guess("").missing.size() == 1);
}

TEST_CASE("check --sample prints a block and says what it reads") {
  const Folder folder;
  folder.write("season.csv", header + rows_of(readings(Weather{}, farm_time("2026-07-01 00:00"),
                                                       farm_time("2026-07-03 00:00"))));
  const auto good = program::run({"check", "--sample", folder / "season.csv"});
  INFO(good.out);
  CHECK(good.status == 0);
  CHECK(good.out.find("[station.drop]") != std::string::npos);
  CHECK(good.out.find("0 rows refused") != std::string::npos);
  CHECK(good.out.find("line end") == std::string::npos);
  // A file that is written anew each time and whose last line never ends: the service waits for it.
  folder.write("latest.csv", std::string(header) + "2026-07-01 00:00,21.5,50,0");
  const auto unended = program::run({"check", "--sample", folder / "latest.csv"});
  CHECK(unended.out.find("1 reading, 0 rows refused") != std::string::npos);
  CHECK(unended.out.find("its last line has no line end, and the service reads a line\n# once it "
                         "ends.") != std::string::npos);
  const auto none = program::run({"check", "--sample", folder / "nothing.csv"});
  CHECK(none.status == 1);
  CHECK(none.err.find("cannot be read or is empty") != std::string::npos);
}

TEST_CASE("check --sample reads the whole of a long file, its last day and its bad row too") {
  const Folder folder;
  // Some 20,000 rows of a minute each: the first hours alone would say nothing of the heat.
  std::string text = "time,temp,rh_pct\n";
  long minute = 0;
  for (; minute < 20'000; ++minute) {
    const Instant at = farm_time("2026-07-01 00:00") + minutes{minute};
    text += farm_clock(at) + (minute < 1'000 ? ",41.2,50\n" : ",91.2,30\n");
  }
  text += "yesterday,91,30\n";
  REQUIRE(text.size() > 500'000);
  folder.write("long.csv", text);
  const auto seen = program::run({"check", "--sample", folder / "long.csv"});
  INFO(seen.out);
  CHECK(seen.out.find("unit = \"degF\"") != std::string::npos);
  CHECK(seen.out.find("interval = \"1 min\"") != std::string::npos);
  CHECK(seen.out.find("20000 readings, 1 row refused; from 2026-07-01T00:00:00Z to "
                      "2026-07-14T21:19:00Z") != std::string::npos);
  CHECK(seen.out.find("The first refused row is line 20002: time: ") != std::string::npos);
}

TEST_CASE("check --sample says why no row could be read, and knows seconds") {
  const Folder folder;
  folder.write("old.csv", "time,temp_c,rh\n1995-07-01 00:00,21,50\n1995-07-01 01:00,22,50\n");
  const auto old = program::run({"check", "--sample", folder / "old.csv"});
  CHECK(old.out.find("line 2: time: year 1995 is outside 2000 to 2099") != std::string::npos);
  folder.write("fast.csv",
               "time,temp_c,rh\n2026-07-01 00:00:00,21,50\n2026-07-01 00:00:05,22,50\n");
  const auto fast = program::run({"check", "--sample", folder / "fast.csv"});
  CHECK(fast.out.find("interval = \"5 s\"") != std::string::npos);
}

TEST_CASE("check --sample names a file that is no text and lets none of its bytes through") {
  const Folder folder;
  folder.write("picture.csv", std::string("time,temp\x1b[31m,\0rh\n1,2,3\n", 25));
  const auto seen = program::run({"check", "--sample", folder / "picture.csv"});
  CHECK(seen.status == 1);
  CHECK(seen.err.find("its first line is no text: time,temp\\x1b[31m") != std::string::npos);
  // Strange bytes below a good header stay out of the block.
  folder.write("rows.csv",
               "station,time,temp_c,rh\nA\x1b[31m,2026-07-01 00:00,\x07,50\n"
               "B,2026-07-01 00:00,21,50\nA\x1b[31m,2026-07-01 01:00,22,50\n");
  const auto rows = program::run({"check", "--sample", folder / "rows.csv"});
  INFO(rows.out);
  CHECK(rows.out.find("[station.drop]") != std::string::npos);
  CHECK(rows.out.find('\x1b') == std::string::npos);
  CHECK(rows.out.find('\x07') == std::string::npos);
}
