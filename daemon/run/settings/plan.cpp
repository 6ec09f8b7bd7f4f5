// See plan.hpp.
#include "run/settings/plan.hpp"

#include <array>
#include <cmath>
#include <cstdio>
#include <utility>

#include "run/settings/table.hpp"

namespace antherd::settings {
namespace {

using letters::Units;

template <class... Numbers>
std::string formatted(const char* form, Numbers... numbers) {
  std::array<char, 120> text{};
  std::snprintf(text.data(), text.size(), form, numbers...);
  return text.data();
}

std::string height_text(Metre height, Units units) {
  return units == Units::us ? formatted("%.0f ft", height.value / 0.3048)
                            : formatted("%.0f m", height.value);
}

std::string place_text(Degree north, Degree east, Metre elevation, Units units) {
  return formatted("%.4f° %c, %.4f° %c, ", std::fabs(north.value), north.value < 0 ? 'S' : 'N',
                   std::fabs(east.value), east.value < 0 ? 'W' : 'E') +
         height_text(elevation, units);
}

std::string day_text(CivilDay day) {
  const CivilDate date{day};
  return formatted("%04d-%02u-%02u", int(date.year()), unsigned(date.month()),
                   unsigned(date.day()));
}

std::string joined(const std::vector<std::string>& words) {
  std::string text;
  for (const std::string& word : words) text += (text.empty() ? "" : ", ") + word;
  return text;
}

std::string mail_text(const Settings& settings) {
  if (!settings.mail) return "  mail: none; warnings go to the log only\n";
  const Mail& mail = *settings.mail;
  std::string text = "  mail: from " + mail.from + ", ";
  if (mail.server) {
    text += "through " + mail.server->url;
    if (mail.server->url.starts_with("smtps")) {
      text += " (encrypted)";
    } else {
      text += mail.server->plain ? " (this computer, not encrypted)" : " (STARTTLS required)";
    }
    if (!mail.server->user.empty()) text += ", login " + mail.server->user;
  } else {
    text += "as files in " + mail.folder;
  }
  static constexpr const char* days[] = {"Monday", "Tuesday",  "Wednesday", "Thursday",
                                         "Friday", "Saturday", "Sunday"};
  text += "\n    weekly review on " + std::string(days[(mail.weekly.weekday + 6) % 7]) + " at " +
          clock_text(mail.weekly.minute) + "; daily line in flower at " +
          clock_text(mail.daily_minute) + "\n    at most " + std::to_string(mail.at_most_per_day) +
          " letters a day for each recipient\n";
  return text;
}

std::string watch_text(const Settings& settings) {
  if (!settings.watch) return "";
  const std::string& url = settings.watch->heartbeat_url;
  const std::size_t host = url.find("://") + 3;
  return "  sign of life: to " + url.substr(0, url.find_first_of("/?#", host)) + " every " +
         duration_text(settings.watch->every) + "\n";
}

std::string recipient_text(const letters::Recipient& recipient) {
  std::string text = "  told: " + recipient.address + ": ";
  text += recipient.fields.empty() ? "all fields" : "fields " + joined(recipient.fields);
  if (recipient.brief) text += ", in 160 characters";
  if (recipient.quiet) {
    text += ", quiet from " + clock_text(recipient.quiet->first) + " to " +
            clock_text(recipient.quiet->second) + " except at Extreme";
  }
  return text + "\n";
}

std::string alerts_text(const alerts::Policy& policy) {
  return std::string("  heat and humid spells are told from ") + risk::name_of(policy.min_level) +
         " on; reminders every " + duration_text(policy.remind_after) + "\n";
}

const char* name_of(weather::Stamp stamp) {
  return stamp == weather::Stamp::instant ? "the moment of measuring"
         : stamp == weather::Stamp::start ? "the start of the averaging interval"
                                          : "the end of the averaging interval";
}

const char* name_of(weather::Shield shield) {
  return shield == weather::Shield::fanned  ? "fanned shield"
         : shield == weather::Shield::plain ? "plain shield"
                                            : "shield unknown";
}

const char* name_of(weather::RainMeaning meaning) {
  return meaning == weather::RainMeaning::since_last  ? "since the last reading"
         : meaning == weather::RainMeaning::day_total ? "total of the day"
                                                      : "counter";
}

std::string time_text(const station::TimeForm& form) {
  if (form.arrival) return "the moment of arrival";
  const bool counted = form.form.starts_with("unix");
  return joined(form.at) + " as " + form.form + (counted ? "" : ", zone " + form.zone.name());
}

/// "temp_f (degF)", one for each value that the station gives.
std::vector<std::string> values_of(const station::RecordForm& record,
                                   const weather::Station& station) {
  std::vector<std::string> values;
  const auto add = [&](const char* what, const std::optional<station::ValueForm>& form,
                       const std::string& extra = "") {
    if (!form) return;
    const std::string unit = form->unit == "1" ? "as a part of 1" : form->unit;
    values.push_back(std::string(what) + ": " + form->at + " (" + unit + extra + ")");
  };
  add("temperature", record.temperature);
  add("humidity", record.humidity);
  add("dew point", record.dew_point);
  add("rain", record.rain, std::string(", ") + name_of(station.rain_meaning));
  add("wind", record.wind, formatted(", %.1f m above ground", station.wind_height.value));
  add("solar", record.solar);
  if (record.wet_when && record.wetness) {
    values.push_back("leaf wetness: " + record.wetness->at + " (wet when " +
                     record.wet_when->comparison + formatted(" %g)", record.wet_when->threshold));
  } else {
    add("leaf wetness", record.wetness, ", every " + duration_text(record.wetness_interval));
  }
  return values;
}

std::string missing_text(const weather::Station& station) {
  std::vector<std::string> missing;
  if (!station.measures_rain) missing.push_back("rain (counted as none)");
  if (!station.measures_wind) missing.push_back("wind (taken as 2 m/s)");
  if (!station.measures_solar) missing.push_back("solar (estimated from the temperature range)");
  return missing.empty() ? "" : "    not measured: " + joined(missing) + "\n";
}

std::string thresholds_text(const FieldPlan& plan, Units units) {
  const risk::HeatRules& heat = plan.rules.heat;
  const auto degrees = [&](Celsius point) {
    return units == Units::us ? formatted("%.1f °F", point.value * 1.8 + 32)
                              : formatted("%.1f °C", point.value);
  };
  return "    heat counts from " + degrees(heat.sustained) + ", severe from " +
         degrees(heat.severe) + ", extreme from " + degrees(heat.extreme) + "\n";
}

std::string wetness_text(risk::Film film) {
  const char* by = film == risk::Film::humidity    ? "humidity"
                   : film == risk::Film::dew_point ? "the dew point"
                                                   : "a leaf's energy balance";
  return std::string("    leaf wetness: by ") + by + " wherever no sensor tells\n";
}

}  // namespace

std::string clock_text(int minute) { return formatted("%02d:%02d", minute / 60, minute % 60); }

std::string duration_text(Seconds duration) {
  std::string text;
  auto left = duration.count();
  static constexpr std::pair<long long, const char*> units[] = {
      {86400, "d"}, {3600, "h"}, {60, "min"}, {1, "s"}};
  if (left >= 86400 && left < 10 * 86400 && left % 3600 == 0) {  // days only where they are many
    return std::to_string(left / 3600) + " h";
  }
  for (const auto& [size, name] : units) {
    if (left < size) continue;
    text += (text.empty() ? "" : " ") + std::to_string(left / size) + " " + name;
    left %= size;
  }
  return text.empty() ? "0 s" : text;
}

std::string describe(const Station& entry, Units units) {
  const weather::Station& station = entry.station;
  std::string text =
      "station " + station.name + ": " +
      place_text(station.place.latitude, station.place.longitude, station.place.elevation, units) +
      (station.near_coast() ? ", near a coast" : "") + ", " + name_of(station.shield) + "\n";
  text += "    " + entry.source() +
          (entry.http ? ", asked every " + duration_text(entry.http->every) : "") + "\n";
  text += "    a reading every " + duration_text(station.interval);
  if (station.arrives_every > station.interval) {
    text += ", coming every " + duration_text(station.arrives_every);
  }
  text += "; silent after " + duration_text(station.silent_after) + "\n";
  const station::RecordForm& record = entry.drop ? entry.drop->record : entry.http->record;
  text += "    time: " + time_text(record.time) + "; it says " + name_of(station.stamp) + "\n";
  if (record.where) {
    text += "    only rows whose " + record.where->first + " is " + record.where->second + "\n";
  }
  for (const std::string& value : values_of(record, station)) text += "    " + value + "\n";
  return text + missing_text(station);
}

std::string describe(const FieldPlan& plan, Units units) {
  const field::Field& field = plan.field;
  std::string text = "field " + field.name + ": " +
                     place_text(field.latitude, field.longitude, field.elevation, units) +
                     ", watched by " + joined(field.stations) + "\n";
  text +=
      "    sown " + day_text(field.sown) + ", crop type " + field.crop_type +
      formatted(" (first anthers at %.0f °C·d from sowing)", plan.traits.needs.first_anthers.value);
  if (field.harvested) text += ", harvested " + day_text(*field.harvested);
  text += field.photoperiod ? ", day length counts\n" : "\n";
  text += std::string("    irrigation: ") + field::name_of(field.irrigation);
  if (field.irrigation != field::Method::none && field.sets > 1) {
    text += " in " + std::to_string(field.sets) + " sets";
  }
  text += "; soil: " + (field.soil.empty() ? "not said" : field.soil);
  const auto& water = field.soil_water_at_sowing;
  text += std::string("; soil water at sowing: ") +
          (!water          ? "unknown"
           : *water > 0.75 ? "full"
                           : "half") +
          "\n";
  if (field.offset) {
    text += formatted("    against the station: %+.1f °C by day, %+.1f °C by night (measured)\n",
                      field.offset->day.value, field.offset->night.value);
  }
  return text + wetness_text(plan.rules.humid.film) + thresholds_text(plan, units);
}

std::string describe(const Settings& settings) {
  std::string text = "farm " + settings.farm + (settings.exercise ? " (exercise)" : "") +
                     ": farm time " + settings.calendar.name() + ", letters in " +
                     (settings.units == Units::us ? "US units" : "metric units") + "\n";
  text += "  store: " + settings.store_folder + ", samples kept " +
          duration_text(settings.keep_samples) + "\n";
  text +=
      "  log: " + (settings.log.file.empty() ? "journal or standard error" : settings.log.file) +
      ", level " + settings.log.level + "\n";
  text += mail_text(settings);
  text += watch_text(settings);
  for (const auto& recipient : settings.recipients) text += recipient_text(recipient);
  text += alerts_text(settings.policy);
  text += "  diary: " +
          (settings.diary_folder.empty() ? "entered by command only" : settings.diary_folder) +
          "\n";
  if (settings.page) {
    text += "  page: http://" + settings.page->address + ":" + std::to_string(settings.page->port) +
            "/, read only\n";
  }
  for (const Station& station : settings.stations) text += describe(station, settings.units);
  for (const FieldPlan& plan : settings.fields) text += describe(plan, settings.units);
  return text;
}

}  // namespace antherd::settings
