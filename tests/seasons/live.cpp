// See live.hpp.
#include "seasons/live.hpp"

#include <algorithm>
#include <cstdlib>
#include <filesystem>

#include "core/crop/development.hpp"
#include "run/service/log.hpp"
#include "service/ground.hpp"
#include "support/catch.hpp"

namespace antherd::seasons {
namespace {

using Samples = std::vector<weather::Sample>;
constexpr Seconds half_hour{1800};

/// Seasons ask nothing of the disk: memory serves, and a season takes a second.
struct InMemory {
  InMemory() {
    if (std::filesystem::exists("/dev/shm")) ::setenv("TMPDIR", "/dev/shm", 1);
  }
};

/// One station's file as it grows.
class GrowingFile {
 public:
  GrowingFile(const Source& source, const Samples& air, const ground::Folder& folder)
      : source_(source), folder_(folder), readings_(as_read(source, air)) {
    folder_.write(name(), csv_header);
  }
  void grow(Instant now) {
    std::string rows;
    for (; next_ < readings_.size() && readings_[next_].time <= now; ++next_) {
      const auto& reading = readings_[next_];
      const bool late = std::any_of(source_.late.begin(), source_.late.end(),
                                    [&](const auto& l) { return l.when.holds(reading.time); });
      if (!late) rows += csv_row(reading);
    }
    if (!rows.empty()) folder_.append(name(), rows);
    for (; late_ < source_.late.size() && source_.late[late_].arrives <= now; ++late_) {
      std::string text = csv_header;
      for (const auto& reading : readings_) {
        if (source_.late[late_].when.holds(reading.time)) text += csv_row(reading);
      }
      folder_.write(source_.station + "/late-" + std::to_string(late_) + ".csv", text);
    }
  }

 private:
  std::string name() const { return source_.station + "/readings.csv"; }

  const Source& source_;
  const ground::Folder& folder_;
  Samples readings_;
  std::size_t next_ = 0, late_ = 0;
};

std::shared_ptr<const settings::Settings> settings_in(const ground::Folder& folder,
                                                      const Scenario& scenario) {
  folder.write("antherd.toml", scenario.settings);
  settings::Reading reading = settings::read_file(folder / "antherd.toml");
  if (!reading.settings) throw std::runtime_error(reading.complaints.front().sentence());
  return std::make_shared<const settings::Settings>(std::move(*reading.settings));
}

/// Station episodes stay in sight for some days only: each is kept as it was last seen.
void keep(std::vector<alerts::Episode>& kept, const std::vector<alerts::Episode>& seen) {
  for (const alerts::Episode& episode : seen) {
    const bool of_station =
        episode.kind == alerts::Kind::no_data || episode.kind == alerts::Kind::doubtful_sensor;
    if (!of_station) continue;
    const auto same = std::find_if(kept.begin(), kept.end(), [&](const alerts::Episode& k) {
      return k.kind == episode.kind && k.subject == episode.subject && k.start == episode.start;
    });
    if (same == kept.end()) {
      kept.push_back(episode);
    } else {
      *same = episode;
    }
  }
}

/// The moments at which the desk is turned, see live.hpp.
std::vector<Instant> moments_of(const Scenario& scenario) {
  constexpr auto ahead = std::chrono::days{1}, after = std::chrono::days{4};
  std::vector<Instant> moments;
  const Calendar& calendar = scenario.calendar;
  for (CivilDay day = calendar.day_of(scenario.installed); calendar.start_of(day) < scenario.until;
       day += std::chrono::days{1}) {
    const Instant begins = calendar.start_of(day);
    const bool busy =
        std::any_of(scenario.busy.begin(), scenario.busy.end(), [&](const Stretch& stretch) {
          return begins + ahead + ahead > stretch.from && begins < stretch.to + after;
        });
    if (busy) {
      const Instant ends = calendar.start_of(day + std::chrono::days{1});
      for (Instant at = begins; at < ends; at += scenario.looks_every) moments.push_back(at);
    } else {
      const std::chrono::weekday weekday{std::chrono::sys_days{day.time_since_epoch()}};
      const auto at = [&](Seconds clock) {
        moments.push_back(calendar.at(CivilTime(day) + clock));
      };
      if (weekday == std::chrono::Monday) at(one_hour * 6);  // the review
      at(one_hour * 7);                                      // stages
      if (scenario.looks_every == half_hour) at(one_hour * 7 + half_hour);
      at(one_hour * 19);  // the line
    }
  }
  std::erase_if(moments, [&](Instant at) { return at <= scenario.installed; });
  moments.insert(moments.begin(), scenario.installed);
  moments.push_back(scenario.until);
  return moments;
}

FieldSeason season_of(const service::Lookout& lookout, const std::string& name, Instant until) {
  FieldSeason season{lookout.plan(name), {}, {}};
  const auto hours = lookout.hours_of(name);
  HourStart end = season.plan.first_hour();
  for (const auto& station : hours) {
    if (!station.empty()) end = std::max(end, station.back().start + std::chrono::hours{1});
  }
  end = std::min(end, hour_of(until));
  season.state = season::fold(season.plan, lookout.diary(name), hours, end, &season.chronicle);
  return season;
}

}  // namespace

std::optional<CivilDay> FieldSeason::stage_day(int stage) const {
  const auto& told = season::told_stages;
  const auto place = std::find(told.begin(), told.end(), stage);
  if (place == told.end()) throw std::runtime_error("no such stage is told");
  const auto reached = state.crop.reached[static_cast<std::size_t>(place - told.begin())];
  if (!reached) return std::nullopt;
  const double needed = crop::requirement(stage, plan.traits.needs).value * state.crop.belief.mean;
  return season::crossed_on(state.crop, needed).value_or(*reached);
}

Lived live_through(const Scenario& scenario) {
  static const InMemory in_memory;
  const ground::Folder folder;
  const auto settings = settings_in(folder, scenario);
  REQUIRE(service::open_log(settings->log));
  std::vector<GrowingFile> files;
  const int days = static_cast<int>((scenario.until - scenario.weather_from) / (one_hour * 24)) + 2;
  for (const Source& source : scenario.sources) {
    const Samples air = readings(scenario.sky, scenario.weather_from, days, source.every);
    files.emplace_back(source, air, folder);
  }
  auto opened = service::DeskWork::open(settings, scenario.installed);
  if (!opened) throw std::runtime_error(opened.failure().sentence());
  service::DeskWork& desk = **opened;
  Lived lived;
  std::size_t entry = 0;
  for (const Instant now : moments_of(scenario)) {
    for (; entry < scenario.entries.size() && scenario.entries[entry].at <= now; ++entry) {
      if (auto done = desk.keeper().take_diary(scenario.entries[entry].diary); !done) {
        throw std::runtime_error(done.failure().sentence());
      }
    }
    for (GrowingFile& file : files) file.grow(now);
    desk.look_soon();
    for (int i = 0; i < 500 && desk.turn(now, true) <= now; ++i) {
    }
    keep(lived.of_stations, desk.keeper().lookout().episodes());
  }
  const service::Lookout& lookout = desk.keeper().lookout();
  for (const auto& field : settings->fields) {
    lived.fields.emplace(field.field.name, season_of(lookout, field.field.name, scenario.until));
  }
  auto letters = desk.store().letters_since(Instant{});
  if (!letters) throw std::runtime_error(letters.failure().sentence());
  lived.letters = std::move(*letters);
  return lived;
}

}  // namespace antherd::seasons
