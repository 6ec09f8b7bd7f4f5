// antherd check --stations: what each station's hours were worth, week by week.
#include <algorithm>
#include <iomanip>
#include <iostream>
#include <nlohmann/json.hpp>

#include "core/weather/verdict_count.hpp"
#include "run/commands/common.hpp"
#include "run/commands/tables.hpp"
#include "run/service/review.hpp"

namespace antherd::commands {
namespace {

using nlohmann::ordered_json;
using std::chrono::days;

std::string reasons_text(const weather::VerdictCount& count) {
  std::string text;
  for (const auto& [reason, hours] : count.reasons) {
    text += (text.empty() ? "" : "; ") + reason + " " + std::to_string(hours);
  }
  return text;
}

ordered_json row_of(const std::string& station, CivilDay monday,
                    const weather::VerdictCount& count) {
  ordered_json row;
  row["station"] = station;
  row["week"] = service::week_name(monday);
  row["hours"] = count.expected;
  row["seen"] = count.seen();
  row["good"] = count.good;
  row["suspect"] = count.suspect;
  row["wrong"] = count.wrong;
  row["reasons"] = reasons_text(count);
  return row;
}

CivilDay monday_of(CivilDay day) {
  const std::chrono::sys_days sys{day.time_since_epoch()};
  return day - days{std::chrono::weekday{sys}.iso_encoding() - 1};
}

void print_station(const service::Lookout& lookout, const std::string& name, Table& table) {
  const Calendar& calendar = lookout.settings().calendar;
  const auto& hours = lookout.judged_hours(name);
  if (!table.machine()) {
    std::cout << "Station " << name << (hours.empty() ? ": no hour yet\n" : "\n");
    if (!hours.empty()) std::cout << "  week      hours   seen   good suspect  wrong  why\n";
  }
  if (hours.empty()) return;
  const HourStart first = hours.front().start;
  const HourStart end = hours.back().start + std::chrono::hours{1};
  for (CivilDay monday = monday_of(calendar.day_of(first));; monday += days{7}) {
    const HourStart from = std::max(first, hour_of(calendar.start_of(monday)));
    const HourStart to = std::min(end, hour_of(calendar.start_of(monday + days{7})));
    if (from >= end) return;
    const weather::VerdictCount count = weather::count_verdicts(hours, from, to);
    const ordered_json row = row_of(name, monday, count);
    if (table.write(row)) continue;
    std::cout << "  " << row["week"].get<std::string>();
    for (const char* key : {"hours", "seen", "good", "suspect", "wrong"}) {
      std::cout << std::setw(key == std::string("suspect") ? 8 : 7) << row[key].get<int>();
    }
    std::cout << "  " << row["reasons"].get<std::string>() << "\n";
  }
}

}  // namespace

Exit check_stations(const Invocation& call) {
  const SettingsPointer settings = read_settings(call);
  if (!settings) return Exit::usage;
  const auto past = read_past(settings, call);
  if (!past) return say(past.failure());
  const service::Lookout lookout = lookout_over(*past);
  Table table(call);
  for (const auto& station : past->settings->stations) {
    print_station(lookout, station.station.name, table);
  }
  return Exit::done;
}

}  // namespace antherd::commands
