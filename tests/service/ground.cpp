// See ground.hpp.
#include "ground.hpp"

#include <stdlib.h>

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <fstream>
#include <iterator>
#include <sstream>
#include <stdexcept>

#include "run/service/log.hpp"
#include "support/catch.hpp"
#include "support/weather_generator.hpp"

namespace ground {
namespace fs = std::filesystem;

namespace {

std::string clock_text(std::chrono::seconds since_epoch) {
  const auto day = std::chrono::floor<days>(since_epoch);
  const std::chrono::year_month_day date{std::chrono::sys_days{day}};
  const std::chrono::hh_mm_ss time{since_epoch - day};
  char text[80];
  std::snprintf(text, sizeof text, "%04d-%02u-%02u %02d:%02d", static_cast<int>(date.year()),
                static_cast<unsigned>(date.month()), static_cast<unsigned>(date.day()),
                static_cast<int>(time.hours().count()), static_cast<int>(time.minutes().count()));
  return text;
}

/// The zone of the tests' farm, as the settings read it.
const Calendar& farm_calendar() {
  static const Calendar calendar = [] {
    const auto reading = settings::read_text(text_of(Farm{}), "/nowhere/antherd.toml", false);
    if (!reading.settings) throw std::runtime_error(reading.complaints.front().sentence());
    return reading.settings->calendar;
  }();
  return calendar;
}

}  // namespace

Folder::Folder() {
  std::string pattern = (fs::temp_directory_path() / "antherd-service-XXXXXX").string();
  if (mkdtemp(pattern.data()) == nullptr) throw std::runtime_error("no temporary folder");
  path_ = pattern;
}
Folder::~Folder() {
  std::error_code error;
  fs::remove_all(path_, error);
}
void Folder::write(const std::string& name, const std::string& text) const {
  const fs::path path = path_ + "/" + name;
  fs::create_directories(path.parent_path());
  std::ofstream(path, std::ios::binary) << text;
}
void Folder::append(const std::string& name, const std::string& text) const {
  std::ofstream(path_ + "/" + name, std::ios::binary | std::ios::app) << text;
}
std::string Folder::read(const std::string& name) const {
  std::ifstream file(path_ + "/" + name, std::ios::binary);
  return {std::istreambuf_iterator<char>(file), {}};
}
std::vector<std::string> Folder::names(const std::string& folder) const {
  std::vector<std::string> found;
  if (!fs::exists(path_ + "/" + folder)) return found;
  for (const auto& entry : fs::directory_iterator(path_ + "/" + folder)) {
    found.push_back(entry.path().filename().string());
  }
  std::sort(found.begin(), found.end());
  return found;
}

Instant farm_time(const std::string& text) {
  int year = 0, month = 0, day = 0, hour = 0, minute = 0;
  if (std::sscanf(text.c_str(), "%d-%d-%d %d:%d", &year, &month, &day, &hour, &minute) != 5) {
    throw std::runtime_error("no time: " + text);
  }
  const std::chrono::local_days date{std::chrono::year(year) / month / day};
  return farm_calendar().at(CivilTime(date) + hours{hour} + minutes{minute});
}
std::string farm_clock(Instant at) {
  return clock_text(farm_calendar().civil(at).time_since_epoch());
}
std::string utc_clock(Instant at) { return clock_text(at.time_since_epoch()); }
std::string clock_of(const Calendar& calendar, Instant at) {
  return clock_text(calendar.civil(at).time_since_epoch());
}
void keep_in_memory() {
  if (fs::exists("/dev/shm")) setenv("TMPDIR", "/dev/shm", 1);
}

std::string text_of(const Farm& farm) {
  std::string text = "[farm]\nname = \"Larkspur Bench\"\ntime_zone = \"" + farm.zone + "\"\n" +
                     farm.extra_farm + "\n[store]\nfolder = \"store\"\n\n";
  if (!farm.log.empty()) text += "[log]\n" + farm.log + "\n";
  if (!farm.mail.empty()) {
    text += "[mail]\nfrom = \"alerts@larkspur.example\"\n" + farm.mail + "\n" + farm.recipients;
  }
  if (!farm.alerts.empty()) text += "[alerts]\n" + farm.alerts + "\n";
  text += "[[station]]\nname = \"bench\"\nlatitude = " + std::to_string(farm.latitude) +
          "\nlongitude = " + std::to_string(farm.longitude) + "\n";
  text += R"(elevation = "780 m"
interval = "15 min"
[station.drop]
folder = "drop"
files = "bench*.csv"
time = { column = "time", form = "%Y-%m-%d %H:%M", zone = ")" +
          farm.stamps + R"(" }
temperature = { column = "temp_c", unit = "degC" }
humidity = { column = "rh_pct", unit = "%" }
rain = { column = "rain_mm", unit = "mm", meaning = "since_last" }
)";
  text += farm.values + R"(
[crop.quick]
emerged = "20 degC d"
buds = "80 degC d"
first_anthers = "180 degC d"
full_flower = "260 degC d"
flowers_done = "420 degC d"
ripe = "800 degC d"

[diary]
folder = "diary"

[[field]]
name = "north bench"
stations = ["bench"]
crop_type = "quick"
irrigation = "overhead"
)";
  return text + "sown = " + farm.sown + "\n" + farm.of_field + farm.more;
}

std::shared_ptr<const settings::Settings> settings_in(const Folder& folder, const Farm& farm) {
  folder.write("antherd.toml", text_of(farm));
  fs::create_directories(folder / "drop");
  fs::create_directories(folder / "diary");
  settings::Reading reading = settings::read_file(folder / "antherd.toml");
  for (const auto& complaint : reading.complaints) UNSCOPED_INFO(complaint.sentence());
  REQUIRE(reading.settings);
  return std::make_shared<const settings::Settings>(std::move(*reading.settings));
}

weather::Sample reading_at(const Weather& weather, Instant at) {
  const double solar = synthetic::solar_hours(at, Degree(-117.18));
  // Days change at solar midnight, 07:49 UTC, so that a hot day is whole.
  const CivilDay day =
      std::chrono::floor<days>(CivilTime((at - Seconds{28123}).time_since_epoch()));
  const bool hot = day >= weather.hot_first && day <= weather.hot_last;
  const double low = hot ? 21 : 13, high = hot ? 39 : 27;
  // A small ripple, so that no value stands still and the sensor checks have nothing to say.
  const double ripple = 0.15 * std::sin(static_cast<double>(at.time_since_epoch().count()) / 1300);
  const double t = low + (high - low) * synthetic::course(solar) + ripple;
  weather::Sample sample;
  sample.time = at;
  sample.temperature = Celsius(std::round(t * 100) / 100);
  sample.humidity = Percent(std::round(synthetic::humidity_of(t, low - 3) * 10) / 10);
  sample.rain = Millimetre(0);
  return sample;
}

std::vector<weather::Sample> readings(const Weather& weather, Instant from, Instant to) {
  std::vector<weather::Sample> samples;
  for (Instant at = std::chrono::ceil<minutes>(from); at < to; at += minutes{15}) {
    samples.push_back(reading_at(weather, at));
  }
  return samples;
}

std::string row_of(const weather::Sample& sample) {
  char text[80];
  std::snprintf(text, sizeof text, ",%.2f,%.1f,0\n", sample.temperature->value,
                sample.humidity->value);
  return utc_clock(sample.time) + text;
}
std::string rows_of(const std::vector<weather::Sample>& samples) {
  std::string text;
  for (const auto& sample : samples) text += row_of(sample);
  return text;
}

Bench::Bench(const Farm& farm) : settings(settings_in(folder, farm)) {
  REQUIRE(service::open_log(settings->log));
}

void Bench::open(Instant now) {
  auto opened = service::DeskWork::open(settings, now);
  if (!opened) UNSCOPED_INFO(opened.failure().sentence());
  REQUIRE(opened);
  desk = std::move(*opened);
}
void Bench::close(Instant now) {
  desk->finish(now);
  desk.reset();
}
void Bench::turn(Instant now) {
  desk->look_soon();
  for (int i = 0; i < 500 && desk->turn(now, true) <= now; ++i) {
  }
}
void Bench::live(const Weather& weather, Instant from, Instant to, Seconds step) {
  if (folder.names("drop").empty()) folder.write("drop/bench.csv", header);
  Instant written = from;
  for (Instant now = from; now <= to; now += step) {
    folder.append("drop/bench.csv", rows_of(readings(weather, written, now + Seconds{1})));
    const auto quarter = std::chrono::floor<minutes>(now);
    while (written <= quarter) written += minutes{15};
    turn(now);
  }
}
void Bench::drop(const std::string& name, const std::vector<weather::Sample>& samples) const {
  folder.write("drop/" + name, header + rows_of(samples));
}

std::vector<outbox::Item> Bench::letters() const {
  auto items = desk->store().letters_since(Instant{});
  REQUIRE(items);
  return *items;
}
std::vector<std::string> Bench::letter_ids() const {
  std::vector<std::string> ids;
  for (const auto& item : letters()) ids.push_back(item.letter.id + " " + item.letter.recipient);
  std::sort(ids.begin(), ids.end());
  return ids;
}
std::vector<outbox::Item> Bench::letters_of(const std::string& kind) const {
  auto items = letters();
  std::erase_if(items, [&](const auto& item) { return item.letter.kind != kind; });
  return items;
}
std::ptrdiff_t Bench::said_of(alerts::Kind kind) const {
  const auto said = desk->store().said(Instant{});
  REQUIRE(said);
  return std::count_if(said->begin(), said->end(), [&](const auto& s) { return s.kind == kind; });
}
std::string Bench::fingerprint() const {
  const auto print = desk->store().fingerprint();
  REQUIRE(print);
  return *print;
}
std::vector<weather::Hour> Bench::stored_hours() const {
  const auto stored = desk->store().hours("bench", HourStart::min(), HourStart::max());
  REQUIRE(stored);
  return *stored;
}

std::string told(const std::vector<alerts::Episode>& episodes) {
  std::ostringstream text;
  for (const auto& episode : episodes) {
    text << alerts::name_of(episode.kind) << " of " << episode.subject << " from "
         << farm_clock(episode.start)
         << (episode.closed ? " to " + farm_clock(*episode.closed) : "") << "\n";
    for (const auto& change : episode.changes) {
      text << "  " << farm_clock(change.at) << " " << alerts::name_of(change.phase) << " "
           << static_cast<int>(change.level) << " " << change.figure.value_or(-1) << " "
           << change.detail << "\n";
    }
  }
  return text.str();
}

}  // namespace ground
