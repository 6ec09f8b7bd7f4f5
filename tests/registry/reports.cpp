// See reports.hpp.
#include "registry/reports.hpp"

#include <cmath>
#include <cstdio>
#include <filesystem>
#include <fstream>
#include <map>
#include <memory>
#include <stdexcept>
#include <string_view>

#include "run/settings/settings.hpp"
#include "support/paths.hpp"

namespace registry {
namespace {

using antherd::Instant;

constexpr std::size_t stations_a_file = 16;

std::string output_of(const std::string& command) {
  const std::unique_ptr<FILE, int (*)(FILE*)> pipe(popen(command.c_str(), "r"), pclose);
  std::string text;
  char piece[65536];
  std::size_t count = 0;
  while (pipe && (count = std::fread(piece, 1, sizeof piece, pipe.get())) > 0) {
    text.append(piece, count);
  }
  if (text.empty()) throw std::runtime_error("nothing came from: " + command);
  return text;
}

/// The values of a variable in ncdump's text: " T = 15, 24,\n  9.4 ;", texts in quotes.
std::vector<std::string> column(std::string_view text, const std::string& name) {
  const std::string start = "\n " + name + " =";
  const std::size_t data = text.find("\ndata:\n");
  std::size_t at = text.find(start, data);
  if (data == std::string_view::npos || at == std::string_view::npos) {
    throw std::runtime_error("ncdump printed no " + name);
  }
  std::vector<std::string> cells(1);
  bool quoted = false;
  for (at += start.size(); at < text.size() && (quoted || text[at] != ';'); ++at) {
    const char c = text[at];
    if (c == '"') {
      quoted = !quoted;
    } else if (c == ',' && !quoted) {
      cells.emplace_back();
    } else if (quoted || (c != ' ' && c != '\n')) {
      cells.back() += c;
    }
  }
  return cells;
}

/// "report = UNLIMITED ; // (2084 currently)" in a file's header
std::size_t length_by_header(std::string_view text) {
  const std::string_view before = "report = UNLIMITED ; // (";
  const std::size_t at = text.find(before);
  if (at == std::string_view::npos) throw std::runtime_error("ncdump printed no length");
  return std::stoul(std::string(text.substr(at + before.size(), 12)));
}

void read_file(int file, std::vector<Report>& reports) {
  char name[80];
  std::snprintf(name, sizeof name, "/usr/share/ncarg/data/cdf/950318%02d_sao.cdf", file);
  const std::string text = output_of("ncdump -v id,time,T,TD,lat,lon,elev " + std::string(name));
  const auto stations = column(text, "id"), times = column(text, "time");
  const auto temperatures = column(text, "T"), dew_points = column(text, "TD");
  const std::size_t length = length_by_header(text);
  const auto latitudes = column(text, "lat"), longitudes = column(text, "lon");
  const auto elevations = column(text, "elev");
  for (const auto* cells :
       {&stations, &times, &temperatures, &dew_points, &latitudes, &longitudes, &elevations}) {
    if (cells->size() != length) throw std::runtime_error(std::string(name) + " is cut short");
  }
  for (std::size_t i = 0; i < length; ++i) {
    reports.push_back({file, stations[i], times[i], temperatures[i], dew_points[i], latitudes[i],
                       longitudes[i], elevations[i]});
  }
}

/// The rows of one station and where it stands: latitude, longitude, elevation.
struct Rows {
  std::string text;
  std::vector<std::string> place{std::begin(nowhere), std::end(nowhere)};
};

std::string number_cell(const std::string& cell) { return cell == "_" ? "-9999" : cell; }

std::string time_cell(const std::string& cell, bool as_reported) {
  if (as_reported) return cell;
  return std::to_string(std::stoi(cell.substr(0, 4)) + years_moved) + cell.substr(4);
}

std::string replaced(std::string text, const std::map<std::string, std::string>& by) {
  for (const auto& [word, value] : by) {
    for (std::size_t at = 0; (at = text.find(word, at)) != std::string::npos;) {
      text.replace(at, word.size(), value);
      at += value.size();
    }
  }
  return text;
}

constexpr const char* farm_text = R"([farm]
name = "Larkspur Bench"
time_zone = "UTC"
[store]
folder = "store"
[[field]]
name = "north bench"
station = "NAME"
sown = 2023-03-01
crop_type = "coastal"
irrigation = "none"
)";
constexpr const char* station_text = R"([[station]]
name = "NAME"
latitude = LATITUDE
longitude = LONGITUDE
elevation = "ELEVATION m"
interval = "60 min"
[station.drop]
folder = "FOLDER"
files = "FILE"
time = { column = "time", form = "%Y %m %d %H:%M UTC", zone = "utc" }
where = { column = "station", equals = "NAME" }
missing = ["-9999"]
temperature = { column = "T", unit = "degC" }
dew_point = { column = "TD", unit = "degC" }
)";

/// Settings of one file's stations, as a person would write them.
antherd::settings::Reading settings_of(const std::vector<std::pair<std::string, Rows>>& stations,
                                       const std::string& folder, const std::string& file) {
  std::string text = replaced(farm_text, {{"NAME", stations.front().first}});
  for (const auto& [name, rows] : stations) {
    text += replaced(station_text, {{"LATITUDE", rows.place[0]},
                                    {"LONGITUDE", rows.place[1]},
                                    {"ELEVATION", rows.place[2]},
                                    {"FOLDER", folder},
                                    {"FILE", file}});
    text = replaced(text, {{"NAME", name}});
  }
  return antherd::settings::read_text(text, "registry.toml", false);
}

/// All rows by station. A place is one on Earth: one station's file says 790.2° west.
std::map<std::string, Rows> rows_by_station(bool as_reported) {
  std::map<std::string, Rows> all;
  for (const Report& report : reports()) {
    Rows& rows = all[report.station];
    if (report.latitude != "_" && report.longitude != "_" && report.elevation != "_" &&
        (as_reported || std::abs(std::stod(report.longitude)) <= 180)) {
      rows.place = {report.latitude, report.longitude, report.elevation};
    }
    rows.text += report.station + ',' + time_cell(report.time, as_reported) + ',' +
                 number_cell(report.temperature) + ',' + number_cell(report.dew_point) + '\n';
  }
  return all;
}

std::vector<Intake> take_in_files(bool as_reported, std::size_t files) {
  const std::filesystem::path folder = std::filesystem::path(paths::build()) / "registry" / "drop";
  std::filesystem::remove_all(folder);
  std::filesystem::create_directories(folder);

  const std::map<std::string, Rows> rows = rows_by_station(as_reported);
  std::vector<Intake> all;
  const Instant now{std::chrono::sys_days{std::chrono::year{2023} / 4 / 1}};
  for (auto next = rows.begin(); next != rows.end() && files > 0; --files) {
    const std::string name = "reports-" + std::to_string(all.size()) + ".csv";
    std::ofstream file(folder / name, std::ios::binary);
    file << "station,time,T,TD\n";
    std::vector<std::pair<std::string, Rows>> stations;
    for (; next != rows.end() && stations.size() < stations_a_file; ++next) {
      file << next->second.text;
      if (!next->first.empty()) stations.push_back(*next);
    }
    file.close();
    const auto reading = settings_of(stations, folder, name);
    if (!reading.settings) throw std::runtime_error(reading.complaints.front().sentence());
    for (const auto& station : reading.settings->stations) {
      all.push_back({station.station, antherd::station::look_into(*station.drop, {}, now)});
    }
  }
  return all;
}

}  // namespace

const std::vector<Report>& reports() {
  static const std::vector<Report> all = [] {
    std::vector<Report> reports;
    for (int file = 0; file < 24; ++file) read_file(file, reports);
    return reports;
  }();
  return all;
}

std::vector<Intake> take_in() { return take_in_files(false, ~std::size_t{0}); }

std::vector<std::string> complaints_as_reported() {
  const std::map<std::string, Rows> rows = rows_by_station(true);
  std::vector<std::string> sentences;
  for (auto next = rows.upper_bound(""); next != rows.end();) {
    std::vector<std::pair<std::string, Rows>> stations;
    for (; next != rows.end() && stations.size() < stations_a_file; ++next) {
      stations.push_back(*next);
    }
    for (const auto& complaint : settings_of(stations, "drop", "*").complaints) {
      sentences.push_back(complaint.sentence());
    }
  }
  return sentences;
}

std::vector<Intake> take_in_unmoved() { return take_in_files(true, 1); }

}  // namespace registry
