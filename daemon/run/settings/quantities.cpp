// See quantities.hpp. Locale-free throughout.
#include "run/settings/quantities.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <optional>
#include <span>
#include <string>
#include <utility>

#include "run/settings/document.hpp"

namespace antherd::settings {
namespace {

constexpr double absolute_zero = -273.15;
constexpr double longest_seconds = 200.0 * 366 * 86400;  // two centuries: beyond any use here

std::string_view trimmed(std::string_view text) {
  while (!text.empty() && (text.front() == ' ' || text.front() == '\t')) text.remove_prefix(1);
  while (!text.empty() && (text.back() == ' ' || text.back() == '\t')) text.remove_suffix(1);
  return text;
}

Failure failure(const char* what, std::string_view text, std::string why, std::string next) {
  return Failure{std::string("read the ") + what, visible(text, 60), std::move(why),
                 std::move(next)};
}

/// A number at the beginning of `text`, which is shortened by it. A sign is allowed.
std::optional<double> take_number(std::string_view& text) {
  std::string_view digits = text;
  if (digits.starts_with('+')) digits.remove_prefix(1);
  const std::string_view unsigned_part = digits.substr(digits.starts_with('-') ? 1 : 0);
  const char first = unsigned_part.empty() ? '\0' : unsigned_part.front();
  if (text.starts_with('+') && digits.starts_with('-')) return {};
  if (first != '.' && (first < '0' || first > '9')) return {};  // no "inf", no "nan"
  double value = 0;
  const char* const end = digits.data() + digits.size();
  const auto read = std::from_chars(digits.data(), end, value);
  if (read.ec != std::errc{} || !std::isfinite(value)) return {};
  text = std::string_view(read.ptr, static_cast<std::size_t>(end - read.ptr));
  return value;
}

struct Unit {
  std::string_view name;
  double factor;
  double shift = 0;  // value × factor + shift
};

constexpr Unit temperature_units[] = {{"degC", 1},
                                      {"°C", 1},
                                      {"K", 1, absolute_zero},
                                      {"degF", 5.0 / 9, -160.0 / 9},
                                      {"°F", 5.0 / 9, -160.0 / 9}};
constexpr Unit difference_units[] = {
    {"degC", 1}, {"°C", 1}, {"K", 1}, {"degF", 5.0 / 9}, {"°F", 5.0 / 9}};
constexpr Unit length_units[] = {{"m", 1}, {"ft", 0.3048}, {"km", 1000}};
constexpr Unit depth_units[] = {{"mm", 1}, {"cm", 10}, {"in", 25.4}};
constexpr Unit duration_units[] = {{"d", 86400}, {"h", 3600}, {"min", 60}, {"s", 1}};
constexpr Unit humidity_units[] = {{"%", 1}};
constexpr Unit thermal_time_units[] = {
    {"degC d", 1}, {"°C d", 1}, {"degF d", 5.0 / 9}, {"°F d", 5.0 / 9}};

struct Parsed {
  double value;
  std::string_view unit;
};

/// One number and one unit, the whole text.
Result<Parsed> parse_one(std::string_view whole, std::span<const Unit> units, const char* what,
                         const char* form) {
  std::string_view rest = trimmed(whole);
  const auto number = take_number(rest);
  if (!number) return failure(what, whole, "it does not begin with a number", form);
  if (rest.starts_with(',')) {
    return failure(what, whole, "numbers are written with a decimal point", form);
  }
  const std::string_view unit = trimmed(rest);
  if (unit.empty()) return failure(what, whole, "it has no unit", form);
  for (const Unit& known : units) {
    if (known.name == unit) return Parsed{*number * known.factor + known.shift, unit};
  }
  return failure(what, whole, "the unit \"" + visible(unit, 20) + "\" is not known", form);
}

/// Exactly `digits` digits at the beginning of `text`, which is shortened by them.
std::optional<int> take_digits(std::string_view& text, std::size_t digits) {
  if (text.size() < digits) return {};
  int value = 0;
  for (std::size_t i = 0; i < digits; ++i) {
    if (text[i] < '0' || text[i] > '9') return {};
    value = value * 10 + (text[i] - '0');
  }
  text.remove_prefix(digits);
  return value;
}

bool take(std::string_view& text, char wanted) {
  if (!text.starts_with(wanted)) return false;
  text.remove_prefix(1);
  return true;
}

std::optional<CivilDay> take_day(std::string_view& text) {
  const auto year = take_digits(text, 4);
  if (!year || !take(text, '-')) return {};
  const auto month = take_digits(text, 2);
  if (!month || !take(text, '-')) return {};
  const auto day = take_digits(text, 2);
  if (!day || *year < 1970 || *year > 2106) return {};
  const CivilDate date{std::chrono::year{*year}, std::chrono::month{unsigned(*month)},
                       std::chrono::day{unsigned(*day)}};
  if (!date.ok()) return {};
  return CivilDay(date);
}

std::optional<int> take_clock(std::string_view& text) {
  const auto hours = take_digits(text, 2);
  if (!hours || !take(text, ':')) return {};
  const auto minutes = take_digits(text, 2);
  if (!minutes || *hours > 23 || *minutes > 59) return {};
  return *hours * 60 + *minutes;
}

}  // namespace

Result<Celsius> parse_temperature(std::string_view text) {
  constexpr const char* form = "write it like \"35 degC\" or \"95 degF\"";
  const auto parsed = parse_one(text, temperature_units, "temperature", form);
  if (!parsed) return parsed.failure();
  const bool fahrenheit = parsed->unit.ends_with('F');
  const double degrees = fahrenheit ? std::round(parsed->value * 10) / 10 : parsed->value;
  if (degrees < absolute_zero) {
    return failure("temperature", text, "it is below absolute zero", form);
  }
  return Celsius(degrees);
}

Result<CelsiusDifference> parse_difference(std::string_view text) {
  const auto parsed = parse_one(text, difference_units, "temperature difference",
                                "write it like \"+0.8 degC\" or \"-1.5 degF\"");
  if (!parsed) return parsed.failure();
  return CelsiusDifference(parsed->value);
}

Result<Metre> parse_length(std::string_view text) {
  const auto parsed =
      parse_one(text, length_units, "length", "write it like \"780 m\" or \"2560 ft\"");
  if (!parsed) return parsed.failure();
  return Metre(parsed->value);
}

Result<Millimetre> parse_depth(std::string_view text) {
  constexpr const char* form = "write it like \"6 mm\" or \"0.5 in\"";
  const auto parsed = parse_one(text, depth_units, "depth of water", form);
  if (!parsed) return parsed.failure();
  if (parsed->value < 0) return failure("depth of water", text, "it is negative", form);
  return Millimetre(parsed->value);
}

Result<Percent> parse_humidity(std::string_view text) {
  constexpr const char* form = "write it like \"90 %\"";
  const auto parsed = parse_one(text, humidity_units, "humidity", form);
  if (!parsed) return parsed.failure();
  if (parsed->value < 0 || parsed->value > 100) {
    return failure("humidity", text, "it is not between 0 % and 100 %", form);
  }
  return Percent(parsed->value);
}

Result<ThermalTime> parse_thermal_time(std::string_view text) {
  const auto parsed = parse_one(text, thermal_time_units, "thermal time",
                                "write it like \"700 degC d\" or \"1260 degF d\"");
  if (!parsed) return parsed.failure();
  return ThermalTime(parsed->value);
}

Result<Seconds> parse_duration(std::string_view whole) {
  constexpr const char* form = "write it like \"5 min\", \"24 h\" or \"1 h 30 min\"";
  std::string_view rest = trimmed(whole);
  std::span<const Unit> units = duration_units;  // from large to small, each at most once
  double seconds = 0;
  do {
    const auto number = take_number(rest);
    if (!number) return failure("duration", whole, "it does not begin with a number", form);
    if (*number < 0) return failure("duration", whole, "it is negative", form);
    rest = trimmed(rest);
    const std::size_t length = std::min(rest.find_first_of(" \t0123456789+-."), rest.size());
    const std::string_view unit = rest.substr(0, length);
    if (unit.empty()) return failure("duration", whole, "it has no unit", form);
    std::size_t found = 0;
    while (found < units.size() && units[found].name != unit) ++found;
    if (found == units.size()) {
      return failure(
          "duration", whole,
          "the unit \"" + visible(unit, 20) + "\" is not known, or comes after a smaller one",
          form);
    }
    seconds += *number * units[found].factor;
    units = units.subspan(found + 1);
    rest = trimmed(rest.substr(length));
  } while (!rest.empty());
  if (seconds > longest_seconds) return failure("duration", whole, "it is too long", form);
  if (seconds != std::floor(seconds)) {
    return failure("duration", whole, "it is not a whole number of seconds", form);
  }
  return Seconds(static_cast<Seconds::rep>(seconds));
}

Result<int> parse_clock(std::string_view text) {
  std::string_view rest = trimmed(text);
  const auto minutes = take_clock(rest);
  if (minutes && rest.empty()) return *minutes;
  return failure("clock time", text, "it is no clock time of 24 hours",
                 "write it like \"06:00\" or \"19:30\"");
}

Result<CivilTime> parse_civil_time(std::string_view text) {
  const auto refused = [&](const char* why) {
    return failure("time", text, why, "write it like \"2026-07-14 20:00\"");
  };
  std::string_view rest = trimmed(text);
  const auto day = take_day(rest);
  if (!day) return refused("it does not begin with a date of the years 1970 to 2106");
  if (!take(rest, ' ') && !take(rest, 'T')) return refused("no clock time follows the date");
  const auto minutes = take_clock(rest);
  if (!minutes) return refused("its clock time is not one from 00:00 to 23:59");
  int seconds = 0;
  if (take(rest, ':')) {
    const auto read = take_digits(rest, 2);
    if (!read || *read > 59) return refused("its seconds are not 00 to 59");
    seconds = *read;
  }
  if (!rest.empty()) return refused("something follows the clock time");
  return CivilTime(*day) + Seconds{*minutes * 60 + seconds};
}

Result<CivilDay> parse_day(std::string_view text) {
  std::string_view rest = trimmed(text);
  const auto day = take_day(rest);
  if (day && rest.empty()) return *day;
  return failure("date", text, "it is not a date of the years 1970 to 2106",
                 "write it like 2026-07-14");
}

Result<double> parse_number(std::string_view text) {
  std::string_view rest = text;
  const auto number = take_number(rest);
  if (number && rest.empty()) return *number;
  if (number && rest.starts_with(',')) {
    return failure("number", text, "numbers are written with a decimal point", "");
  }
  return failure("number", text, "it is not a plain number", "");
}

}  // namespace antherd::settings
