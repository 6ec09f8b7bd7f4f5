// antherd check: every fault of the settings, or the plan that was understood.
#include <algorithm>
#include <cmath>
#include <iostream>

#include "core/season/fold.hpp"
#include "edge/clock/clock.hpp"
#include "run/commands/common.hpp"
#include "run/service/review.hpp"
#include "run/settings/plan.hpp"

namespace antherd::commands {
namespace {

std::string temperature_text(Celsius t, letters::Units units) {
  const bool us = units == letters::Units::us;
  const double shown = us ? t.value * 1.8 + 32.0 : t.value;
  return std::to_string(static_cast<long>(std::lround(shown))) + (us ? " °F" : " °C");
}

/// The last whole day's coolest and warmest hour: a clock or unit mistake shows at once.
std::string day_shape(const std::vector<weather::Hour>& hours, const Calendar& calendar,
                      letters::Units units) {
  if (hours.empty()) return "no hours yet";
  const CivilDay last = calendar.day_of(hours.back().start);
  for (CivilDay day = last; day > last - std::chrono::days{3}; day -= std::chrono::days{1}) {
    const weather::Hour* coolest = nullptr;
    const weather::Hour* warmest = nullptr;
    int seen = 0;
    for (const weather::Hour& hour : hours) {
      if (calendar.day_of(hour.start) != day || !hour.has_temperature()) continue;
      ++seen;
      if (!coolest || *hour.temperature < *coolest->temperature) coolest = &hour;
      if (!warmest || *hour.temperature > *warmest->temperature) warmest = &hour;
    }
    if (seen < 20) continue;
    return "on " + day_text(day) + " coolest " + temperature_text(*coolest->temperature, units) +
           " in the hour from " + farm_text(calendar, coolest->start).substr(11) + ", warmest " +
           temperature_text(*warmest->temperature, units) + " in the hour from " +
           farm_text(calendar, warmest->start).substr(11) +
           " (if that is not when your days are coolest and warmest, look at zone and unit)";
  }
  return "no whole day yet";
}

std::string date_text(const std::optional<CivilDay>& day) { return day ? day_text(*day) : "?"; }

void print_windows(const service::Lookout& lookout, const settings::FieldPlan& field,
                   HourStart until) {
  std::vector<crop::Traits> types{field.traits};
  for (const char* name : {"early", "coastal", "highland"}) {
    if (field.traits.name != name) types.push_back(*crop::traits_of(name));
  }
  for (const crop::Traits& traits : types) {
    season::Plan plan = lookout.plan(field.field.name);
    plan.traits = traits;
    const season::DiaryView& diary = lookout.diary(field.field.name);
    const auto state = season::fold(plan, diary, lookout.hours_of(field.field.name), until);
    std::cout << "    " << (&traits == types.data() ? "" : "were it ") << traits.name << ": ";
    const auto flower = season::status(state, plan, diary).flower;
    if (state.last && !flower.known) {
      std::cout << "flowering not known: too many hours since sowing were not seen; note a stage "
                   "with antherd scout\n";
    } else if (!flower.window_first) {
      std::cout << "flowering window not yet known; first anthers need about "
                << std::lround(traits.needs.first_anthers.value) << " °C·d from sowing, "
                << std::lround(flower.thermal_time) << " so far\n";
    } else {
      std::cout << "flowering window " << date_text(flower.window_first) << " to "
                << date_text(flower.window_last) << ", first anthers about "
                << date_text(flower.flower_first) << " ± " << std::lround(flower.flower_first_days)
                << " days" << (flower.scouted ? " (scouted)" : " (not scouted)") << "\n";
    }
    if (flower.implausible) {
      std::cout
          << "      that is before day 40 or after day 100 from sowing: check the sowing date "
             "or the station\n";
    }
  }
}

/// The newest reading, the day's shape, and what is doubtful in its newest day.
void print_station(const service::Lookout& lookout, const std::string& name) {
  const settings::Settings& settings = lookout.settings();
  const auto last = lookout.last_sample(name);
  std::cout << "  Station " << name << ": "
            << (last ? "newest reading " + farm_text(settings.calendar, *last)
                     : std::string("no reading yet"))
            << (lookout.last_of_any(name) > last ? " (newer ones carry no temperature)" : "")
            << "; " << day_shape(lookout.station_hours(name), settings.calendar, settings.units)
            << "\n";
  if (!last) return;
  const letters::Desk desk = lookout.desk(*last);
  const letters::StationStory& story = desk.stations.at(name);
  const std::string doubts = letters::doubts_of(story);
  if (!doubts.empty()) std::cout << "    doubtful in its last 24 h: " << doubts << "\n";
  const auto& hours = lookout.judged_hours(name);
  if (!hours.empty() && hours.back().whole_degrees) {
    std::cout << "    sends whole degrees: Severe heat waits for a reading above the threshold\n";
  }
}

}  // namespace

Exit check(const Invocation& call) {
  if (!call.sample.empty()) return check_sample(call);
  if (call.stations) return check_stations(call);
  if (call.lines || call.csv || !call.station_files.empty()) {
    std::cerr << "antherd: --lines, --csv and --station of check belong to --stations; nothing was "
                 "done\n";
    return Exit::usage;
  }
  const std::string file = settings::choose_file(call.settings);
  const settings::Reading reading = settings::read_file(file);
  for (const auto& complaint : reading.complaints) std::cout << complaint.sentence() << "\n";
  if (!reading.settings) {
    std::cout << reading.complaints.size()
              << (reading.complaints.size() == 1 ? " fault" : " faults")
              << ". Until they are mended nothing is watched with this file.\n";
    return Exit::usage;
  }
  const auto settings = std::make_shared<const settings::Settings>(*reading.settings);
  std::cout << settings::describe(*settings);
  for (const std::string& remark : reading.remarks) std::cout << "Remark: " << remark << "\n";

  const Instant now = clock::wall_now();
  const auto store = open_to_read(*settings);
  std::optional<Past> past;
  if (store) {
    if (auto stored = past_from_store(settings, *store, now)) past = std::move(*stored);
  }
  std::cout << "\nWhat is known now"
            << (past ? ":" : " (from the drop folders; the service has not run yet):") << "\n";
  if (!past) past = past_from_folders(settings, now);
  const service::Lookout lookout = lookout_over(*past);
  for (const auto& station : settings->stations) print_station(lookout, station.station.name);
  for (const auto& drift : service::drifts_of(lookout, past->last().value_or(now))) {
    std::cout << "  " << letters::drift_sentence(drift, lookout.desk(now)) << "\n";
  }
  const auto newest = past->last();
  const HourStart until = newest ? hour_of(*newest) : hour_of(now);
  for (const auto& field : settings->fields) {
    std::cout << "  Field " << field.field.name << ":\n";
    print_windows(lookout, field, until);
  }
  return Exit::done;
}

}  // namespace antherd::commands
