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
  const auto none = program::run({"check", "--sample", folder / "nothing.csv"});
  CHECK(none.status == 1);
  CHECK(none.err.find("cannot be read or is empty") != std::string::npos);
}
