// How far the measurements behind a letter can be trusted, in words.
#include <algorithm>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

std::string reason_words(weather::Reason reason) {
  switch (reason) {
    case weather::Reason::none:
      return "in doubt";
    case weather::Reason::out_of_range:
      return "out of range";
    case weather::Reason::above_saturation:
      return "above 102 %";
    case weather::Reason::spike:
      return "a spike";
    case weather::Reason::unconfirmed:
      return "a jump not yet confirmed";
    case weather::Reason::stuck:
      return "stuck";
    case weather::Reason::dew_above_temperature:
      return "dew point above the temperature";
    case weather::Reason::rain_in_dry_air:
      return "rain in dry air";
    case weather::Reason::not_air_temperature:
      return "cannot be air temperature";
    case weather::Reason::fahrenheit_as_celsius:
      return "looks like °F read as °C";
    case weather::Reason::celsius_as_fahrenheit:
      return "looks like °C read as °F";
    case weather::Reason::columns_swapped:
      return "temperature and humidity look swapped";
    case weather::Reason::clock_off:
      return "clock or zone off";
    case weather::Reason::humidity_low_top:
      return "never near saturation";
    case weather::Reason::humidity_high_top:
      return "at saturation in the sun";
  }
  return "in doubt";
}

/// Faults that are named whole, without the element before them.
bool names_itself(weather::Reason reason) {
  return reason == weather::Reason::dew_above_temperature ||
         reason == weather::Reason::rain_in_dry_air || reason == weather::Reason::columns_swapped ||
         reason == weather::Reason::clock_off;
}

std::string hours_off(double late) {
  const int hours = static_cast<int>(late < 0 ? -late + 0.5 : late + 0.5);
  return "stamps about " + std::to_string(hours) + glue + "h " + (late < 0 ? "early" : "late");
}

}  // namespace

std::string element_words(weather::Element element) {
  switch (element) {
    case weather::Element::temperature:
      return "temperature";
    case weather::Element::humidity:
      return "humidity";
    case weather::Element::dew_point:
      return "dew point";
    case weather::Element::rain:
      return "rain";
    case weather::Element::wind:
      return "wind";
    case weather::Element::solar:
      return "sun";
    case weather::Element::wetness:
      return "leaf wetness";
  }
  return "a value";
}

std::string flags_named(const std::vector<weather::Flag>& flags) {
  constexpr std::size_t most = 4;
  std::vector<std::string> named;
  for (const weather::Flag& flag : flags) {
    if (flag.verdict == weather::Verdict::good || named.size() == most) continue;
    const std::string words = flag_words(flag);
    if (std::find(named.begin(), named.end(), words) == named.end()) named.push_back(words);
  }
  return list(named);
}

std::string doubts_of(const StationStory& station) {
  std::vector<std::string> named;
  for (const weather::Flag& flag : station.flags_24) {
    if (flag.verdict == weather::Verdict::good) continue;
    const std::string words = fault_words(flag);
    const bool known = std::find(named.begin(), named.end(), words) != named.end();
    if (!known && named.size() < 3) named.push_back(words);
  }
  return unglued(list(named));
}

std::string fault_words(const weather::Flag& flag) {
  if (flag.reason == weather::Reason::clock_off) {
    return reason_words(flag.reason) + ", " + hours_off(flag.value);
  }
  return names_itself(flag.reason) ? reason_words(flag.reason)
                                   : element_words(flag.element) + " " + reason_words(flag.reason);
}

std::string what_to_mend(const weather::Flag& flag) {
  switch (flag.reason) {
    case weather::Reason::not_air_temperature:
    case weather::Reason::fahrenheit_as_celsius:
      return "Look at the temperature's column and unit in the settings: these are not °C"
             " of air, they look like °F. While they are left out no heat is seen, and no heat "
             "warning can come.";
    case weather::Reason::celsius_as_fahrenheit:
      return "Look at the temperature's unit in the settings: it looks like °C read as °F."
             " While the values are left out no heat is seen, and no heat warning can come.";
    case weather::Reason::columns_swapped:
      return "Look at the columns in the settings: temperature and humidity look exchanged. Both "
             "are left out, and neither heat nor wet leaves are seen.";
    case weather::Reason::clock_off:
      return "Look at the station's clock, at zone and longitude in the settings: " +
             hours_off(flag.value) +
             ", by the sun. Heat is seen, but days and nights of wet leaves are cut at the wrong "
             "hours.";
    case weather::Reason::humidity_low_top:
      return "In 30 nights with dew or rain the humidity never passed " + number(flag.value, 0) +
             glue +
             "%: the sensor reads low at its top, and wet leaves are seen too seldom. Clean "
             "it, compare it, or exchange it.";
    case weather::Reason::humidity_high_top:
      return "The humidity stays at 100" + std::string(1, glue) +
             "% while the sun warms the air: the sensor reads high at its top, and leaves seem wet "
             "too long. Clean it, compare it, or exchange it.";
    default:
      return "";
  }
}

std::string flag_words(const weather::Flag& flag) {
  const std::string used =
      flag.verdict == weather::Verdict::wrong || flag.reason == weather::Reason::unconfirmed
          ? "left out"
          : "used";
  return fault_words(flag) + " (" + used + ")";
}

std::string unseen_since(const FieldStatus& status, const Words& words) {
  constexpr Seconds stale{2 * 3600};
  const auto& last = status.data.last_reading;
  if (!last) return "nothing seen yet";
  return words.desk().now - *last < stale ? "" : "nothing seen since " + words.closing(*last);
}

namespace {

/// Where leaf wetness comes from, unless it is the usual rule for want of a sensor.
std::string wetness_source(const season::HumidStatus& humid) {
  const std::string by = humid.film == risk::Film::energy      ? " from a leaf's energy balance"
                         : humid.film == risk::Film::dew_point ? " from the dew point"
                                                               : " from humidity";
  if (humid.sensor_hours_24 == 0) {
    return humid.film == risk::Film::humidity ? "" : "Leaf wetness is estimated" + by + ".";
  }
  if (humid.sensor_hours_24 >= 24) return "Leaf wetness: by sensor in the last 24 h.";
  return "Leaf wetness: by sensor in " + std::to_string(humid.sensor_hours_24) +
         " of the last 24 h, else estimated" + by + ".";
}

}  // namespace

/// A level that hangs on three per cent of humidity is said to.
std::string humidity_doubt(const FieldStatus& status) {
  const season::HumidStatus& humid = status.humid;
  if (!humid.last || !humid.if_drier || !humid.if_damper) return "";
  const Level level = humid.last->level, drier = *humid.if_drier, damper = *humid.if_damper;
  if (drier == level && damper == level) return "";
  const auto words = [](Level other) {
    return other == Level::none ? std::string("below Moderate") : level_word(other);
  };
  const std::string three = std::string("3") + glue + "%";
  std::string said;
  if (drier == damper) {
    said = words(drier) + " were it " + three + " lower or higher";
  } else {
    std::vector<std::string> cases;
    if (drier != level) cases.push_back(words(drier) + " were it " + three + " lower");
    if (damper != level) cases.push_back(words(damper) + " were it " + three + " higher");
    said = list(cases);
  }
  return "A hygrometer is good to about " + three + ": the mildew level would be " + said + ".";
}

std::string data_paragraph(const FieldStatus& status, const Words& words, bool heat) {
  const season::DataStatus& data = status.data;
  std::vector<std::string> said;
  const std::string station = plain(data.station);
  const std::string unseen = unseen_since(status, words);
  if (!unseen.empty()) said.push_back(capital(unseen) + ".");
  if (data.hours_missing_24 > 0) {
    said.push_back((station.empty() ? "" : "Station " + station + ", ") +
                   count(data.hours_missing_24, "hour") +
                   " of the last 24 missing: what happened then is not known.");
  } else if (!station.empty() && unseen.empty()) {
    said.push_back("Station " + station + ", the last 24 h complete.");
  }
  const std::string doubtful = flags_named(data.flags_24);
  if (!doubtful.empty()) said.push_back("Doubtful in the last 24 h: " + doubtful + ".");
  if (heat && data.shield_may_read_high) {
    said.push_back(
        "The thermometer has no fan and the hot hours were sunny and still: it may read "
        "high.");
  }
  if (heat && data.whole_degrees) {
    said.push_back("The station sends whole degrees: Severe waits for a reading above " +
                   words.threshold(words.heat_rules(status.field).severe) + ".");
  }
  if (!heat) {
    const std::string doubt = humidity_doubt(status);
    if (!doubt.empty()) said.push_back(doubt);
  }
  if (!heat && !data.rain_measured) {
    said.push_back("Rain is not measured here: rain that fell is not in this.");
  }
  if (!heat) said.push_back(wetness_source(status.humid));
  return join(said);
}

const FieldStatus* status_of(const Desk& desk, const std::string& field) {
  const auto found = desk.fields.find(field);
  return found == desk.fields.end() ? nullptr : &found->second;
}

std::string quoted(const std::string& name) {
  const std::string clean = plain(name);
  const auto harmless = [](char c) {
    const auto byte = static_cast<unsigned char>(c);
    return byte >= 0x80 || (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') ||
           (c >= '0' && c <= '9') || c == '-' || c == '_' || c == '.';
  };
  if (!clean.empty() && clean[0] != '-' && std::all_of(clean.begin(), clean.end(), harmless)) {
    return clean;
  }
  if (clean.find_first_of("\"$`\\!") == std::string::npos) return "\"" + clean + "\"";
  std::string single = "'";
  for (const char c : clean) single += c == '\'' ? std::string("'\\''") : std::string(1, c);
  return single + "'";
}

std::string scout_command(const std::string& field, const std::string& rest) {
  return "antherd scout " + quoted(field) + " " + rest;
}

std::string water_command(const std::string& field, const std::string& rest) {
  return "antherd water " + quoted(field) + " " + rest;
}

}  // namespace antherd::letters
