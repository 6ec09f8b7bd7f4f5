// See time_reader.hpp: how texts of time are read, character by character, locale-free.
#include <algorithm>
#include <array>
#include <cstring>

#include "edge/station/text.hpp"
#include "edge/station/time_reader.hpp"

namespace antherd::station {
namespace {

bool digit(char c) { return c >= '0' && c <= '9'; }

/// Reads between `least` and `most` digits.
bool read_digits(const char*& at, const char* end, int least, int most, int& number) {
  int count = 0;
  int value = 0;
  while (at != end && count < most && digit(*at)) {
    value = value * 10 + (*at - '0');
    ++at;
    ++count;
  }
  number = value;
  return count >= least;
}

bool refuse(std::string& reason, const char* what, int value, const char* range) {
  reason = std::string(what) + " " + std::to_string(value) + " is not in " + range;
  return false;
}

bool missing_part(std::string& reason, const char* what) {
  reason = std::string("no ") + what + " where one should stand";
  return false;
}

/// One number with its range: what month 13 and hour 24 run into.
bool read_part(const char*& at, const char* end, int most_digits, int low, int high,
               const char* what, const char* range, int& number, std::string& reason) {
  if (!read_digits(at, end, 1, most_digits, number)) return missing_part(reason, what);
  if (number < low || number > high) return refuse(reason, what, number, range);
  return true;
}

bool read_month(const char*& at, const char* end, int& number, std::string& reason) {
  return read_part(at, end, 2, 1, 12, "month", "1 to 12", number, reason);
}
bool read_day(const char*& at, const char* end, int& number, std::string& reason) {
  return read_part(at, end, 2, 1, 31, "day", "1 to 31", number, reason);
}
bool read_hour(const char*& at, const char* end, int& number, std::string& reason) {
  return read_part(at, end, 2, 0, 23, "hour", "0 to 23", number, reason);
}
bool read_minute(const char*& at, const char* end, int& number, std::string& reason) {
  return read_part(at, end, 2, 0, 59, "minute", "0 to 59", number, reason);
}

/// Seconds; a fraction behind them is cut off.
bool read_second(const char*& at, const char* end, int& number, std::string& reason) {
  if (!read_part(at, end, 2, 0, 59, "second", "0 to 59", number, reason)) return false;
  if (end - at >= 2 && (*at == '.' || *at == ',') && digit(at[1])) {
    ++at;
    while (at != end && digit(*at)) ++at;
  }
  return true;
}

/// Z, ±HH, ±HHMM or ±HH:MM.
bool read_offset(const char*& at, const char* end, std::optional<Seconds>& offset,
                 std::string& reason) {
  if (at != end && (*at == 'Z' || *at == 'z')) {
    ++at;
    offset = Seconds{0};
    return true;
  }
  if (at == end || (*at != '+' && *at != '-')) return missing_part(reason, "offset from UTC");
  const int sign = *at++ == '-' ? -1 : 1;
  int hours = 0;
  int minutes = 0;
  if (!read_digits(at, end, 2, 2, hours)) return missing_part(reason, "offset from UTC");
  if (at != end && *at == ':') ++at;
  if (at != end && digit(*at) && !read_digits(at, end, 2, 2, minutes)) {
    return missing_part(reason, "whole offset from UTC");
  }
  const Seconds length{hours * 3600 + minutes * 60};
  if (minutes > 59 || length > limits::largest_offset) {
    reason = "no zone is that far from UTC";
    return false;
  }
  offset = sign * length;
  return true;
}

constexpr std::array<const char*, 12> month_names{"january",   "february", "march",    "april",
                                                  "may",       "june",     "july",     "august",
                                                  "september", "october",  "november", "december"};

/// English names, whole or their first three letters, any case.
bool read_month_name(const char*& at, const char* end, int& number, std::string& reason) {
  for (std::size_t month = 0; month < month_names.size(); ++month) {
    const std::string_view whole = month_names[month];
    for (const std::string_view name : {whole, whole.substr(0, 3)}) {
      const auto left = static_cast<std::size_t>(end - at);
      if (left < name.size() || !equal_fold(std::string_view(at, name.size()), name)) continue;
      at += name.size();
      number = static_cast<int>(month) + 1;
      return true;
    }
  }
  return missing_part(reason, "month name");
}

bool read_half(const char*& at, const char* end, int& half, std::string& reason) {
  if (end - at < 2) return missing_part(reason, "AM or PM");
  const std::string_view word(at, 2);
  if (!equal_fold(word, "am") && !equal_fold(word, "pm")) return missing_part(reason, "AM or PM");
  half = equal_fold(word, "pm") ? 1 : 0;
  at += 2;
  return true;
}

Failure bad_form(const std::string& form, const std::string& why) {
  return Failure{"understand the form of a station's time", form, why,
                 "a form looks like \"%Y-%m-%d %H:%M\", or is one of iso, unix, unix_ms"};
}

}  // namespace

bool TimeReader::has(Part part) const {
  return std::any_of(steps_.begin(), steps_.end(), [&](const Step& s) { return s.part == part; });
}

std::optional<Failure> TimeReader::compile(const TimeForm& form) {
  if (form.form == "iso") return form_ = Form::iso, std::nullopt;
  if (form.form == "unix") return form_ = Form::unix_s, std::nullopt;
  if (form.form == "unix_ms") return form_ = Form::unix_ms, std::nullopt;
  std::string spelled;  // %T, %F and %R in their long forms
  for (std::size_t i = 0; i < form.form.size(); ++i) {
    const std::string_view pair = std::string_view(form.form).substr(i, 2);
    const char* longer = pair == "%T"   ? "%H:%M:%S"
                         : pair == "%F" ? "%Y-%m-%d"
                         : pair == "%R" ? "%H:%M"
                                        : nullptr;
    spelled += longer ? std::string(longer) : form.form.substr(i, pair[0] == '%' ? 2 : 1);
    if (pair[0] == '%') ++i;
  }
  static constexpr std::pair<char, Part> known[] = {
      {'Y', Part::year},        {'y', Part::year2},      {'m', Part::month},
      {'d', Part::day},         {'e', Part::day},        {'H', Part::hour},
      {'I', Part::hour12},      {'M', Part::minute},     {'S', Part::second},
      {'j', Part::day_of_year}, {'p', Part::half_day},   {'b', Part::month_name},
      {'B', Part::month_name},  {'h', Part::month_name}, {'z', Part::offset}};
  for (std::size_t i = 0; i < spelled.size(); ++i) {
    if (spelled[i] == ' ') {
      if (steps_.empty() || steps_.back().part != Part::space) add(Part::space);
    } else if (spelled[i] != '%') {
      add(Part::literal, spelled[i]);
    } else {
      const char letter = ++i < spelled.size() ? spelled[i] : '\0';
      const auto* found = std::find_if(std::begin(known), std::end(known),
                                       [&](const auto& k) { return k.first == letter; });
      if (letter == '%') {
        add(Part::literal, '%');
      } else if (found == std::end(known)) {
        return bad_form(form.form, letter ? std::string("%") + letter + " is not known here"
                                          : "a lone % at its end");
      } else {
        add(found->second);
      }
    }
  }
  if (auto failure = complete()) return bad_form(form.form, failure->why);
  return std::nullopt;
}

std::optional<Failure> TimeReader::complete() const {
  const auto lacks = [](const char* what) { return Failure{"", "", what, ""}; };
  if (!has(Part::year) && !has(Part::year2)) return lacks("it gives no year (%Y)");
  const bool month = has(Part::month) || has(Part::month_name);
  if (!has(Part::day_of_year) && !(month && has(Part::day))) {
    return lacks("it gives no day (%m and %d, or %j)");
  }
  if (!has(Part::hour) && !has(Part::hour12)) return lacks("it gives no hour (%H)");
  if (has(Part::hour12) && !has(Part::half_day)) return lacks("%I needs AM or PM (%p)");
  if (has(Part::hour) && has(Part::hour12)) return lacks("it gives the hour twice (%H and %I)");
  return std::nullopt;
}

bool TimeReader::read_step(const Step& step, const char*& at, const char* end, Clock& clock,
                           std::string& reason) {
  switch (step.part) {
    case Part::literal:
      if (at == end || *at != step.literal) {
        reason = std::string("no '") + step.literal + "' where one should stand";
        return false;
      }
      ++at;
      return true;
    case Part::space:
      if (at == end || *at != ' ') return missing_part(reason, "space");
      while (at != end && *at == ' ') ++at;
      return true;
    case Part::year:
      return read_digits(at, end, 4, 4, clock.year) || missing_part(reason, "year of four digits");
    case Part::year2:
      if (!read_digits(at, end, 2, 2, clock.year)) {
        return missing_part(reason, "year of two digits");
      }
      clock.year += 2000;
      return true;
    case Part::month:
      return read_month(at, end, clock.month, reason);
    case Part::day:
      if (at != end && *at == ' ') ++at;  // %e is padded with a space
      return read_day(at, end, clock.day, reason);
    case Part::hour:
      return read_hour(at, end, clock.hour, reason);
    case Part::hour12:
      return read_part(at, end, 2, 1, 12, "hour", "1 to 12", clock.hour, reason);
    case Part::minute:
      return read_minute(at, end, clock.minute, reason);
    case Part::second:
      return read_second(at, end, clock.second, reason);
    case Part::day_of_year:
      return read_part(at, end, 3, 1, 366, "day of the year", "1 to 366", clock.day_of_year,
                       reason);
    case Part::half_day:
      return read_half(at, end, clock.half, reason);
    case Part::month_name:
      return read_month_name(at, end, clock.month, reason);
    case Part::offset:
      return read_offset(at, end, clock.offset, reason);
  }
  return false;
}

bool TimeReader::read_pattern(std::string_view text, Clock& clock, std::string& reason) const {
  const char* at = text.data();
  const char* const end = at + text.size();
  for (const Step& step : steps_) {
    if (!read_step(step, at, end, clock, reason)) return false;
  }
  if (end - at == 1 && (*at == 'Z' || *at == 'z') && !clock.offset) {
    clock.offset = Seconds{0};  // the text says UTC, whatever the zone of the form
    ++at;
  }
  if (at != end) {
    reason = quoted(std::string_view(at, static_cast<std::size_t>(end - at)), 20) + " is left over";
    return false;
  }
  return true;
}

bool TimeReader::read_iso(std::string_view text, Clock& clock, std::string& reason) {
  const char* at = text.data();
  const char* const end = at + text.size();
  const auto eat = [&](char c) { return at != end && *at == c ? (++at, true) : false; };
  if (!read_digits(at, end, 4, 4, clock.year)) return missing_part(reason, "year of four digits");
  const bool dashes = eat('-');
  if (!read_month(at, end, clock.month, reason)) return false;
  if (dashes && !eat('-')) return missing_part(reason, "'-'");
  if (!read_day(at, end, clock.day, reason)) return false;
  if (!eat('T') && !eat('t') && !eat(' ')) return missing_part(reason, "time of day");
  if (!read_hour(at, end, clock.hour, reason)) return false;
  const bool colons = eat(':');
  if (!read_minute(at, end, clock.minute, reason)) return false;
  if (colons ? eat(':') : at != end && digit(*at)) {
    if (!read_second(at, end, clock.second, reason)) return false;
  }
  if (end - at > 1 && *at == ' ') ++at;
  if (at != end && !read_offset(at, end, clock.offset, reason)) return false;
  if (at != end) reason = "something is left over behind the time";
  return at == end;
}

}  // namespace antherd::station
