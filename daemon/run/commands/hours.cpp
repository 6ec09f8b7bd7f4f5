// antherd hours FIELD: every hour that is known, measured, derived and judged.
#include <algorithm>
#include <iostream>
#include <nlohmann/json.hpp>

#include "core/season/fold.hpp"
#include "run/commands/common.hpp"
#include "run/commands/tables.hpp"
#include "run/settings/quantities.hpp"

namespace antherd::commands {
namespace {

using nlohmann::ordered_json;

template <class Value>
ordered_json number(const std::optional<Value>& value, int decimals = 4) {
  return value ? ordered_json(rounded(value->value, decimals)) : ordered_json(nullptr);
}

std::string verdict_of(const weather::Hour& hour) {
  std::string text;
  for (const weather::Flag& flag : hour.flags) {
    if (!text.empty()) text += "; ";
    text += std::string(weather::name_of(flag.element)) + " " + weather::name_of(flag.verdict) +
            ": " + weather::describe(flag) + " (" + std::to_string(flag.count) + ", first " +
            ordered_json(rounded(flag.value, 4)).dump() + " at " + utc_text(flag.at) + ")";
  }
  return text.empty() ? "good" : text;
}

void add_measured(ordered_json& row, const season::Air& air) {
  const weather::Hour* hour = air.measured;
  row["hour"] = utc_text(air.start);
  row["n"] = hour ? hour->n : 0;
  row["coverage"] = hour ? rounded(hour->coverage, 4) : 0.0;
  row["temperature_c"] = number(air.temperature);
  std::optional<Celsius> high, low;
  if (hour && air.temperature && hour->temperature) {
    const CelsiusDifference offset = *air.temperature - *hour->temperature;
    if (hour->temperature_max) high = *hour->temperature_max + offset;
    if (hour->temperature_min) low = *hour->temperature_min + offset;
  }
  row["temperature_max_c"] = number(high);
  row["temperature_min_c"] = number(low);
  row["humidity_pct"] = number(air.humidity);
  row["dew_point_c"] = number(air.dew_point);
  row["vpd_kpa"] = number(air.vpd);
  row["rain_mm"] = number(air.rain);
  row["wind_ms"] = number(air.wind);
  row["solar_wm2"] = air.solar ? ordered_json(rounded(*air.solar, 4)) : ordered_json(nullptr);
}

ordered_json row_of(const season::Air& air, const season::HourRecord* record) {
  ordered_json row;
  add_measured(row, air);
  const bool valid = record != nullptr && air.valid();
  row["eto_mm"] = record ? number(record->eto) : ordered_json(nullptr);
  row["wet"] = valid ? ordered_json(record->wet.wet) : ordered_json(nullptr);
  row["thermal_time_cd"] =
      record ? ordered_json(rounded(record->time.value, 4)) : ordered_json(nullptr);
  const bool known = record != nullptr && record->known;
  row["p_flower"] = known ? ordered_json(rounded(record->p_flower, 6)) : ordered_json(nullptr);
  row["in_window"] =
      record ? ordered_json(record->part == season::Part::window) : ordered_json(nullptr);
  row["stage"] = known ? ordered_json(rounded(record->stage, 4)) : ordered_json(nullptr);
  row["verdict"] = air.measured ? verdict_of(*air.measured) : "no data";
  row["depletion_mm"] = record ? number(record->missing) : ordered_json(nullptr);
  row["ks"] = record && record->ks ? ordered_json(rounded(*record->ks, 4)) : ordered_json(nullptr);
  return row;
}

struct Window {
  HourStart from, to;
};

Result<Window> window_of(const settings::Settings& settings, const Invocation& call,
                         const Past& past) {
  Window window{HourStart::max(), HourStart::min()};
  for (const auto& [name, hours] : past.hours) {
    if (hours.empty()) continue;
    window.from = std::min(window.from, hours.front().start);
    window.to = std::max(window.to, hours.back().start + std::chrono::hours{1});
  }
  if (!call.from.empty()) {
    const auto day = settings::parse_day(call.from);
    if (!day) return day.failure();
    window.from = hour_of(settings.calendar.start_of(*day));
  }
  if (!call.to.empty()) {
    const auto day = settings::parse_day(call.to);
    if (!day) return day.failure();
    window.to = hour_of(settings.calendar.start_of(*day + std::chrono::days{1}));
  }
  return window;
}

void print_for_people(const ordered_json& row, const Calendar& calendar, const season::Air& air) {
  const auto cell = [&](const char* key, int width) {
    const std::string text = row[key].is_null() ? "-" : row[key].dump();
    const std::string cut =
        text.substr(0, static_cast<std::size_t>(width) - 1);  // cells never touch
    return std::string(static_cast<std::size_t>(width) - cut.size(), ' ') + cut;
  };
  std::cout << farm_text(calendar, air.start) << cell("temperature_c", 7) << cell("humidity_pct", 7)
            << cell("rain_mm", 6) << cell("wet", 7) << cell("stage", 6) << cell("in_window", 7)
            << "  " << row["verdict"].get<std::string>() << "\n";
}

}  // namespace

Exit hours(const Invocation& call) {
  const SettingsPointer settings = read_settings(call);
  if (!settings) return Exit::usage;
  const settings::FieldPlan* wanted = read_field(*settings, call);
  if (!wanted) return Exit::usage;
  const auto past = read_past(settings, call);
  if (!past) return say(past.failure());
  const auto window = window_of(*settings, call, *past);
  if (!window) {
    say(window.failure());
    return Exit::usage;
  }
  if (!past->settings->field(wanted->field.name)) return Exit::failed;
  const service::Lookout lookout = lookout_over(*past);
  const std::string name = wanted->field.name;
  const season::Plan& plan = lookout.plan(name);
  Table table(call);
  const auto put = [&](const season::Air& air, const season::HourRecord* record) {
    if (air.start < window->from || air.start >= window->to) return;
    const ordered_json row = row_of(air, record);
    if (!table.write(row)) print_for_people(row, plan.calendar, air);
  };
  if (!table.machine()) {
    std::cout << "farm time          °C      %  rain    wet stage window  verdict\n";
  }
  season::HourPicker picker(lookout.hours_of(name));
  for (HourStart h = window->from; h < std::min(window->to, plan.first_hour());
       h += std::chrono::hours{1}) {
    const auto picked = picker.pick(h);
    put(season::air_at_field(plan, h, picked.hour, picked.station), nullptr);
  }
  season::fold(
      plan, lookout.diary(name), lookout.hours_of(name), window->to, nullptr,
      [&](const season::State&, const season::Step& step) { put(step.hour.air, &step.hour); });
  return Exit::done;
}

}  // namespace antherd::commands
