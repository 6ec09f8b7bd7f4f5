#include "little_files.hpp"

#include <algorithm>
#include <cstdio>
#include <fstream>
#include <set>
#include <sstream>
#include <stdexcept>

namespace demo {

using namespace std::chrono;
namespace fs = std::filesystem;

namespace {

constexpr hours farm_behind_utc{7};

/// Reads "YYYY?MM?DD?hh?mm" at the beginning of a text, as it stands.
sys_seconds clock_in(const std::string& text) {
  int year_number = 0, month_number = 0, day_number = 0, hour = 0, minute = 0;
  const int found = std::sscanf(text.c_str(), "%4d-%2d-%2d%*1[ T]%2d:%2d", &year_number,
                                &month_number, &day_number, &hour, &minute);
  const year_month_day date{year(year_number), month(static_cast<unsigned>(month_number)),
                            day(static_cast<unsigned>(day_number))};
  if (found != 5 || !date.ok() || hour < 0 || hour > 23 || minute < 0 || minute > 59)
    throw std::runtime_error("'" + text + "' is no time like 2026-07-14 13:58");
  return sys_days(date) + hours(hour) + minutes(minute);
}

std::string read_text(const fs::path& path) {
  std::ifstream file(path, std::ios::binary);
  std::ostringstream text;
  text << file.rdbuf();
  if (!file) throw std::runtime_error("cannot read " + path.string());
  return text.str();
}

void write_text(const fs::path& path, const std::string& text) {
  std::ofstream file(path, std::ios::binary);
  file << text << std::flush;
  if (!file) throw std::runtime_error("cannot write " + path.string());
}

std::vector<std::string> lines_of(const std::string& text) {
  std::vector<std::string> lines;
  std::istringstream stream(text);
  for (std::string line; std::getline(stream, line);) lines.push_back(line);
  return lines;
}

std::vector<std::string> fields_of(const std::string& line) {
  std::vector<std::string> fields;
  std::istringstream stream(line);
  for (std::string field; std::getline(stream, field, ',');) fields.push_back(field);
  return fields;
}

/// The rows of a diary file whose `column` (a farm clock or a date) is not after `now`.
std::string known_rows(const std::string& text, std::size_t column, Instant now) {
  std::string known;
  const std::string clock = farm_clock(now);
  for (const std::string& line : lines_of(text)) {
    const std::vector<std::string> fields = fields_of(line);
    // both forms of time sort as text; the header stays
    if (known.empty() || (fields.size() > column && fields[column] <= clock)) known += line + "\n";
  }
  return known;
}

}  // namespace

Instant from_farm_clock(const std::string& text) { return clock_in(text) + farm_behind_utc; }

std::string farm_clock(Instant at) {
  const Instant local = at - farm_behind_utc;
  const auto today = floor<days>(local);
  const year_month_day date(today);
  const hh_mm_ss time(local - today);
  char text[40];
  std::snprintf(text, sizeof text, "%04d-%02u-%02u %02d:%02d", int(date.year()),
                unsigned(date.month()), unsigned(date.day()), int(time.hours().count()),
                int(time.minutes().count()));
  return text;
}

Season read_season(const fs::path& folder) {
  Season season;
  season.settings = read_text(folder / "live.toml.in");
  season.irrigation = read_text(folder / "diary" / "irrigation.csv");
  season.scouting = read_text(folder / "diary" / "scouting.csv");
  for (const std::string& line : lines_of(read_text(folder / "drop" / "creek-2026.csv"))) {
    const std::vector<std::string> fields = fields_of(line);
    if (fields.size() < 5 || fields[0] == "utc") continue;
    season.creek.push_back({clock_in(fields[0]), fields[1], fields[2], fields[4]});
  }
  std::set<fs::path> months;  // in order
  for (const auto& entry : fs::directory_iterator(folder / "drop"))
    if (entry.path().filename().string().starts_with("bench-")) months.insert(entry.path());
  for (const fs::path& path : months)
    for (const std::string& line : lines_of(read_text(path))) {
      if (line.starts_with("time"))
        season.bench_header = line;
      else
        season.bench.push_back({from_farm_clock(line), path.filename().string(), line});
    }
  if (season.bench.empty() || season.creek.empty())
    throw std::runtime_error("no readings in " + (folder / "drop").string());
  return season;
}

LiveFolder::LiveFolder(const Season& season, const fs::path& folder, Instant start, int port)
    : season_(season), drop_(folder / "drop") {
  fs::create_directories(drop_);
  fs::create_directories(folder / "diary");
  write_text(folder / "diary" / "irrigation.csv", known_rows(season.irrigation, 2, start));
  write_text(folder / "diary" / "scouting.csv", known_rows(season.scouting, 1, start));
  append_until(start);
  std::string settings = season.settings;
  const std::string place = "{port}";
  settings.replace(settings.find(place), place.size(), std::to_string(port));
  write_text(folder / "live.toml", settings);
}

int LiveFolder::append_until(Instant now) {
  int rows = 0;
  while (next_ < season_.bench.size() && season_.bench[next_].time <= now) {
    // as a logger does: append to the month's file, close it
    const std::string& name = season_.bench[next_].file;
    const bool begins = !fs::exists(drop_ / name);
    std::ofstream file(drop_ / name, std::ios::binary | std::ios::app);
    if (begins) file << season_.bench_header << "\n";
    for (; next_ < season_.bench.size() && season_.bench[next_].time <= now &&
           season_.bench[next_].file == name;
         ++next_, ++rows)
      file << season_.bench[next_].row << "\n";
    file.close();
    if (!file) throw std::runtime_error("cannot write " + (drop_ / name).string());
  }
  return rows;
}

const Creek* creek_at(const Season& season, Instant now) {
  const auto after =
      std::upper_bound(season.creek.begin(), season.creek.end(), now,
                       [](Instant time, const Creek& reading) { return time < reading.time; });
  return after == season.creek.begin() ? nullptr : &*(after - 1);
}

}  // namespace demo
