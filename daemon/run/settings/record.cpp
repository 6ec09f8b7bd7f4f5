// How a station's records are written: the values of [station.drop] and [station.http].
#include <algorithm>

#include "run/settings/parts.hpp"
#include "run/settings/quantities.hpp"
#include "run/settings/time_form.hpp"

namespace antherd::settings {
namespace {

constexpr std::size_t longest_place = 200;  // a column's name or a pointer

struct Value {
  const char* key;
  std::vector<std::string> units;
  std::optional<station::ValueForm> station::RecordForm::*into;
  const char* example;  // of a unit and what else the table may hold
};

const std::vector<Value>& values() {
  using Form = station::RecordForm;
  static const std::vector<Value> all{
      {"temperature", {"degC", "degF", "K"}, &Form::temperature, "unit = \"degF\" }"},
      {"humidity", {"%", "1"}, &Form::humidity, "unit = \"%\" }"},
      {"dew_point", {"degC", "degF", "K"}, &Form::dew_point, "unit = \"degF\" }"},
      {"rain", {"mm", "in"}, &Form::rain, "unit = \"mm\", meaning = \"since_last\" }"},
      {"wind", {"m/s", "mph", "km/h", "kn"}, &Form::wind, "unit = \"m/s\", height = \"2 m\" }"},
      {"solar", {"W/m2"}, &Form::solar, "unit = \"W/m2\" }"},
      {"wetness", {"min", "h", "1"}, &Form::wetness, "unit = \"min\", interval = \"15 min\" }"}};
  return all;
}

/// 'temperature = { column = "temperature", unit = "degF" }', or with a pointer.
std::string example_of(const Value& value, const std::string& at) {
  const std::string place = at == "at" ? "/" + std::string(value.key) : value.key;
  return std::string(value.key) + " = { " + at + " = \"" + place + "\", " + value.example;
}

/// What is wrong with a JSON pointer (RFC 6901): nothing when it is fine.
std::optional<std::string> fault_of_pointer(const std::string& pointer) {
  if (!pointer.starts_with('/')) return "a pointer begins with \"/\"";
  for (std::size_t i = 0; i < pointer.size(); ++i) {
    if (pointer[i] != '~') continue;
    const char next = i + 1 < pointer.size() ? pointer[i + 1] : '\0';
    if (next != '0' && next != '1') return "\"~\" is written \"~0\" in a pointer";
  }
  return {};
}

/// A column's name, or a pointer where `at` says so.
std::optional<std::string> place_of(const Table& table, const std::string& at,
                                    const std::string& example) {
  const bool pointer = at == "at";
  const Wanted wanted{pointer ? "a JSON pointer (RFC 6901) to the value"
                              : "the column's name as the file's header has it",
                      example};
  const auto place = table.name(at, longest_place, wanted, true);
  if (!place || !pointer) return place;
  const auto fault = fault_of_pointer(*place);
  if (!fault) return place;
  table.refuse(at, {wanted.allowed + " (" + *fault + ")", example});
  return {};
}

/// The zone of the file's clock readings; farm time where nothing is said or it is refused.
Calendar read_zone(const Table& time, const Calendar& farm_zone) {
  const Wanted wanted{"utc, farm, an offset such as \"-08:00\", or an IANA name",
                      "zone = \"farm\""};
  const auto name = time.text("zone", wanted);
  if (!name) return farm_zone;
  const Result<Calendar> zone = zone_of(*name, farm_zone);
  if (zone) return *zone;
  const Failure& why = zone.failure();
  time.refuse("zone", {wanted.allowed + " (" + why.why + "; " + why.what_next + ")", ""});
  return farm_zone;
}

void read_columns(const Table& time, station::TimeForm& form) {
  const Wanted wanted{"the names of the columns that make up the time",
                      "time = { columns = [\"date\", \"time\"], form = \"%Y-%m-%d %H:%M\" }"};
  if (time.has("column") && time.has("columns")) {
    time.object("columns", "both column and columns", "keep one of them", wanted.example);
    return;
  }
  if (!time.has("columns")) {
    const auto column =
        place_of(time, "column", "time = { column = \"time\", form = \"%Y-%m-%d %H:%M\" }");
    if (column) form.at = {*column};
    return;
  }
  const auto columns = time.texts("columns", wanted);
  if (!columns) return;
  bool fine = !columns->empty() && columns->size() <= 6;
  for (const std::string& column : *columns) fine = fine && !fault_of_name(column, longest_place);
  if (fine) {
    form.at = *columns;
  } else {
    time.refuse("columns", wanted);
  }
}

void read_time(const Table& table, const std::string& at, const Calendar& farm_zone,
               station::TimeForm& form) {
  const bool pointer = at == "at";
  form.zone = farm_zone;
  const Node* const node = table.find("time");
  if (pointer && node != nullptr && node->kind == Node::Kind::text && node->text == "arrival") {
    form.arrival = true;
    return;
  }
  const Wanted wanted =
      pointer ? Wanted{"where the time stands and how it is written, or \"arrival\" where the "
                       "station sends none",
                       "time = { at = \"/obs/time\", form = \"unix\" }"}
              : Wanted{"the column that holds the time and how it is written",
                       "time = { column = \"time\", form = \"%Y-%m-%d %H:%M\" }"};
  const auto time = table.table(
      "time", std::string("[station.") + (pointer ? "http" : "drop") + "] time", wanted, true);
  if (!time) return;
  if (!pointer) {
    read_columns(*time, form);
  } else if (const auto place = place_of(*time, at, wanted.example)) {
    form.at = {*place};
  }
  const Wanted form_wanted{
      "how the time is written: %Y %m %d %H %M %S and their kin, iso, unix or "
      "unix_ms",
      "form = \"%Y-%m-%d %H:%M\""};
  if (const auto written = time->name("form", longest_place, form_wanted, true)) {
    if (const auto fault = fault_of_time_form(*written)) {
      time->refuse("form", {form_wanted.allowed + " (" + *fault + ")", form_wanted.example});
    }
    form.form = *written;
  }
  form.zone = read_zone(*time, farm_zone);
}

std::optional<station::WetWhen> wet_when_from(std::string_view text) {
  for (const char* comparison : {">=", "<=", ">", "<"}) {
    if (!text.starts_with(comparison)) continue;
    std::string_view rest = text.substr(std::string_view(comparison).size());
    while (rest.starts_with(' ')) rest.remove_prefix(1);
    const Result<double> threshold = parse_number(rest);
    if (threshold) return station::WetWhen{comparison, *threshold};
    return {};
  }
  return {};
}

void read_wetness(const Table& table, Seconds interval, station::RecordForm& record) {
  record.wetness_interval =
      table
          .quantity("interval", parse_duration, Seconds{60}, one_hour,
                    {"a duration from 1 min to 60 min, with its unit", "interval = \"15 min\""})
          .value_or(std::clamp(interval, Seconds{60}, one_hour));
  const Wanted wanted{"a comparison with a number: >=, >, <= or <", "wet_when = \">= 7\""};
  const auto written = table.text("wet_when", wanted);
  if (!written) return;
  record.wet_when = wet_when_from(*written);
  if (!record.wet_when) table.refuse("wet_when", wanted);
}

void read_extras(const Table& table, const Value& value, weather::Station& station,
                 station::RecordForm& record) {
  const std::string_view key = value.key;
  if (key == "rain") {
    const Words<weather::RainMeaning> meanings{{"since_last", weather::RainMeaning::since_last},
                                               {"day_total", weather::RainMeaning::day_total},
                                               {"counter", weather::RainMeaning::counter}};
    station.rain_meaning = table.choice("meaning", meanings, "meaning = \"since_last\"", true)
                               .value_or(weather::RainMeaning::since_last);
  } else if (key == "wind") {
    station.wind_height =
        table
            .quantity(
                "height", parse_length, Metre(0.5), Metre(100),
                {"the instrument's height from 0.5 m to 100 m, with its unit", "height = \"2 m\""})
            .value_or(Metre(2));
  } else if (key == "wetness") {
    read_wetness(table, station.interval, record);
    station.wetness_interval = record.wetness_interval;
  }
}

void read_value(const Table& table, const Value& value, const std::string& at,
                weather::Station& station, station::RecordForm& record) {
  const std::string example = example_of(value, at);
  const std::string kind = std::string("[station.") + (at == "at" ? "http" : "drop") + "] ";
  const auto own =
      table.table(value.key, kind + value.key, {"a table with the place and the unit", example});
  if (!own) return;
  station::ValueForm form;
  form.at = place_of(*own, at, example).value_or("");
  const bool counts = std::string_view(value.key) == "wetness" && own->has("wet_when");
  if (counts && own->has("unit")) {
    own->object("unit", "both unit and wet_when", "raw counts have no unit; keep one of them");
  }
  Words<std::string> units;
  for (const std::string& unit : value.units) units.emplace_back(unit, unit);
  form.unit = own->choice("unit", units, example, !counts).value_or(counts ? "1" : "");
  read_extras(*own, value, station, record);
  record.*(value.into) = form;
}

void read_where(const Table& table, station::RecordForm& record) {
  const Wanted wanted{"the column to look at and what it must hold",
                      "where = { column = \"origin\", equals = \"EWR\" }"};
  const auto where = table.table("where", "[station.drop] where", wanted);
  if (!where) return;
  const auto column = where->name("column", longest_place, wanted, true);
  const auto equals = where->name("equals", longest_place, wanted, true);
  if (column && equals) record.where = {*column, *equals};
}

/// Two values out of one place are a slip of the pen.
void refuse_shared_places(const Table& table, const station::RecordForm& record) {
  std::vector<std::pair<std::string, std::string>> seen;  // place, key
  for (const Value& value : values()) {
    const auto& form = record.*(value.into);
    if (!form || form->at.empty()) continue;
    for (const auto& [place, key] : seen) {
      if (place != form->at) continue;
      table.object(value.key, in_quotes(place), key + " is read from there already");
    }
    seen.emplace_back(form->at, value.key);
  }
}

}  // namespace

void read_record(const Table& table, const std::string& at, const Calendar& farm_zone,
                 weather::Station& station, station::RecordForm& record) {
  read_time(table, at, farm_zone, record.time);
  for (const Value& value : values()) read_value(table, value, at, station, record);
  if (at == "column") read_where(table, record);
  const Wanted wanted{"a list of the texts that mean \"no value\"",
                      "missing = [\"\", \"NA\", \"-9999\"]"};
  if (const auto missing = table.texts("missing", wanted)) record.missing = *missing;
  if (!table.has("temperature")) {
    table.miss("temperature",
               {"the air temperature's place and unit", example_of(values()[0], at)});
  }
  if (!table.has("humidity") && !table.has("dew_point")) {
    table.miss("humidity", {"the humidity's place and unit, or dew_point instead",
                            example_of(values()[1], at)});
  }
  refuse_shared_places(table, record);
  station.rain_zone = record.time.zone;
  station.measures_rain = record.rain.has_value();
  station.measures_wind = record.wind.has_value();
  station.measures_solar = record.solar.has_value();
  station.measures_wetness = record.wetness.has_value();
}

}  // namespace antherd::settings
