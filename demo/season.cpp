// Writes an invented season of the Larkspur Bench farm into a folder: the files of two stations,
// the diary and the settings. The same seed gives the same season.
#include <charconv>
#include <cmath>
#include <cstdio>
#include <filesystem>
#include <fstream>
#include <iostream>
#include <map>
#include <string>
#include <string_view>

#include "season_settings.hpp"
#include "season_weather.hpp"

namespace {

using namespace demo;

void write_file(const std::filesystem::path& path, const std::string& text) {
  std::ofstream file(path, std::ios::binary);
  file << text;
  file.close();
  if (!file) throw std::filesystem::filesystem_error("cannot write", path, std::error_code());
}

/// One row of the bench: farm clock and the units of the trade. Rain comes in tips of 0.01 in; what
/// does not fill a tip stays in `tipping`.
std::string bench_row(const Weather& w, double& tipping) {
  tipping += w.rain_mm / 25.4;
  const double tips = std::floor(tipping / 0.01 + 1e-9);
  tipping -= tips * 0.01;
  char row[120];
  std::snprintf(row, sizeof row, "%s,%.1f,%.0f,%.2f,%.1f,%.0f\n", farm_clock(w.time).c_str(),
                w.temperature * 1.8 + 32.0, w.humidity, tips * 0.01, w.wind_ms / 0.44704,
                w.solar_wm2);
  return row;
}

void write_bench(const std::filesystem::path& folder, const std::vector<Weather>& readings) {
  std::map<std::string, std::string> months;  // a logger that begins a new file every month
  double tipping = 0.0;
  for (const Weather& w : readings) {
    std::string& text = months[farm_clock(w.time).substr(0, 7)];
    if (text.empty()) text = "time,temp_f,rh_pct,rain_in,wind_mph,solar\n";
    text += bench_row(w, tipping);
  }
  for (const auto& [month, text] : months) write_file(folder / ("bench-" + month + ".csv"), text);
}

void write_creek(const std::filesystem::path& folder, const std::vector<Weather>& readings) {
  std::string text = "utc,t_degC,rh,rain_mm,wind_ms\n";
  for (const Weather& w : readings) {
    char row[120];
    std::snprintf(row, sizeof row, "%s,%.2f,%.1f,%.2f,%.1f\n", utc_stamp(w.time).c_str(),
                  w.temperature, w.humidity, w.rain_mm, w.wind_ms);
    text += row;
  }
  write_file(folder / "creek-2026.csv", text);
}

std::string day_text(Day day) { return farm_clock(start_of(day)).substr(0, 10); }

void tell(std::uint64_t seed, const std::string& folder, const std::vector<Weather>& bench) {
  double hottest = -99.0;
  for (const Weather& w : bench) hottest = std::max(hottest, w.temperature);
  std::printf("seed %llu\n", static_cast<unsigned long long>(seed));
  std::printf("season %s to %s in %s\n", day_text(sown).c_str(), day_text(last_day).c_str(),
              folder.c_str());
  std::printf("north bench: 700 degC.d since sowing on %s, 970 on %s; hottest reading %.1f degC\n",
              day_text(day_of_thermal_time(bench, 700, 288)).c_str(),
              day_text(day_of_thermal_time(bench, 970, 288)).c_str(), hottest);
}

void make_season(const std::filesystem::path& folder, std::uint64_t seed) {
  std::filesystem::create_directories(folder / "drop");
  std::filesystem::create_directories(folder / "diary");
  std::vector<Weather> bench = bench_weather(plan_days(seed), seed);
  std::vector<Weather> creek = creek_weather(bench);
  tell(seed, folder.string(), bench);
  plant_bench_troubles(bench);
  plant_creek_troubles(creek);
  write_bench(folder / "drop", bench);
  write_creek(folder / "drop", creek);
  write_file(folder / "diary" / "irrigation.csv", irrigation_csv());
  write_file(folder / "diary" / "scouting.csv", scouting_csv());
  write_file(folder / "demo.toml", replay_settings());
  write_file(folder / "live.toml.in", live_settings());
}

}  // namespace

int main(int argc, char** argv) {
  const char* const help =
      "demo_season FOLDER [--seed N]\n"
      "Writes an invented season into FOLDER: drop/, diary/, demo.toml, live.toml.in.\n"
      "Example: demo_season /tmp/season --seed 7\n";
  std::string folder;
  std::uint64_t seed = 5;
  for (int i = 1; i < argc; ++i) {
    const std::string_view word = argv[i];
    if (word == "--help") return std::fputs(help, stdout), 0;
    if (word == "--seed" && i + 1 < argc) {
      const std::string_view text = argv[++i];
      const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), seed);
      if (error == std::errc() && end == text.data() + text.size()) continue;
    } else if (folder.empty() && !word.starts_with("--")) {
      folder = word;
      continue;
    }
    std::fprintf(stderr, "demo_season: cannot use '%s'\n%s", argv[i], help);
    return 2;
  }
  if (folder.empty()) return std::fputs(help, stderr), 2;
  try {
    make_season(folder, seed);
  } catch (const std::exception& trouble) {
    std::fprintf(stderr, "demo_season: %s\n", trouble.what());
    return 1;
  }
  return 0;
}
