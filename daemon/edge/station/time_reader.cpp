// See time_reader.hpp: from clock readings to instants. How texts are read: time_pattern.cpp.
#include "edge/station/time_reader.hpp"

#include <charconv>
#include <cstdint>
#include <cstdio>

#include "edge/station/text.hpp"

namespace antherd::station {
namespace {

std::string shown(CivilTime reading) {
  const auto day = std::chrono::floor<std::chrono::days>(reading);
  const std::chrono::year_month_day date{day};
  const std::chrono::hh_mm_ss time{reading - day};
  char text[40];
  std::snprintf(text, sizeof text, "%04d-%02u-%02u %02d:%02d", static_cast<int>(date.year()),
                static_cast<unsigned>(date.month()), static_cast<unsigned>(date.day()),
                static_cast<int>(time.hours().count()), static_cast<int>(time.minutes().count()));
  return text;
}

/// "3 d", "5 h", "12 min": enough to recognise a wrong zone or a wrong year.
std::string length_of(Seconds span) {
  const auto seconds = span.count();
  if (seconds >= 2 * 86400) return std::to_string(seconds / 86400) + " d";
  if (seconds >= 2 * 3600) return std::to_string(seconds / 3600) + " h";
  return std::to_string(seconds / 60) + " min";
}

constexpr Seconds two_days{2 * 86400};

}  // namespace

Result<TimeReader> TimeReader::make(const TimeForm& form, std::optional<Instant> now) {
  TimeReader reader;
  reader.zone_ = form.zone;
  if (now && *now >= limits::first_instant) reader.latest_ = *now + limits::ahead;
  if (auto failure = reader.compile(form)) return *failure;
  return reader;
}

std::optional<Instant> TimeReader::read(std::string_view text, std::string& reason) {
  std::optional<Instant> at;
  ahead_.reset();
  if (form_ == Form::unix_s || form_ == Form::unix_ms) {
    at = read_unix(text, reason);
  } else {
    Clock clock;
    const bool read =
        form_ == Form::iso ? read_iso(text, clock, reason) : read_pattern(text, clock, reason);
    if (read) at = from_clock(clock, reason);
  }
  if (at && !in_range(*at, reason)) return std::nullopt;
  return at;
}

std::optional<Instant> TimeReader::read_unix(std::string_view text, std::string& reason) const {
  const char* const end = text.data() + text.size();
  std::int64_t number = 0;
  auto [at, error] = std::from_chars(text.data(), end, number);
  bool good = error == std::errc{};
  if (good && at != end && *at == '.') {  // a fraction is cut off
    ++at;
    while (at != end && *at >= '0' && *at <= '9') ++at;
  }
  if (!good || at != end) {
    reason = quoted(text, 40) + " is no Unix time";
    return std::nullopt;
  }
  const std::int64_t seconds = form_ == Form::unix_ms ? number / 1000 : number;
  const auto century = [](std::int64_t value) {
    return value >= limits::first_instant.time_since_epoch().count() &&
           value < limits::end_instant.time_since_epoch().count();
  };
  if (!century(seconds)) {
    reason = quoted(text, 40) + " is outside the years 2000 to 2099";
    if (form_ == Form::unix_s && century(number / 1000))
      reason += " (in milliseconds: \"unix_ms\")";
    return std::nullopt;
  }
  return Instant{Seconds{seconds}};
}

bool TimeReader::find_day(Clock& clock, std::string& reason) {
  using namespace std::chrono;
  if (clock.year < limits::first_year || clock.year > limits::last_year) {
    reason = "year " + std::to_string(clock.year) + " is outside 2000 to 2099";
    return false;
  }
  if (clock.day_of_year > 0) {
    const year_month_day date{sys_days{year{clock.year} / 1 / 1} + days{clock.day_of_year - 1}};
    if (date.year() != year{clock.year}) {
      reason = "the year " + std::to_string(clock.year) + " has no day 366";
      return false;
    }
    clock.month = static_cast<int>(static_cast<unsigned>(date.month()));
    clock.day = static_cast<int>(static_cast<unsigned>(date.day()));
  }
  if (clock.day == day_.day && clock.month == day_.month && clock.year == day_.year) return true;
  const year_month_day date{year{clock.year}, month{static_cast<unsigned>(clock.month)},
                            day{static_cast<unsigned>(clock.day)}};
  if (!date.ok()) {
    reason = "there is no day " + std::to_string(clock.day) + " in month " +
             std::to_string(clock.month) + " of " + std::to_string(clock.year);
    return false;
  }
  const Instant start{sys_days{date}};
  day_ = Day{clock.year, clock.month, clock.day, start.time_since_epoch(), zone_.offset_at(start),
             true};
  for (const int hours : {-48, -24, -12, 12, 24, 48, 72}) {
    if (zone_.offset_at(start + std::chrono::hours{hours}) != day_.offset) day_.plain = false;
  }
  return true;
}

std::optional<Instant> TimeReader::from_clock(Clock& clock, std::string& reason) {
  if (!find_day(clock, reason)) return std::nullopt;
  if (clock.half >= 0) clock.hour = clock.hour % 12 + 12 * clock.half;
  const Seconds reading =
      day_.start + Seconds{clock.hour * 3600 + clock.minute * 60 + clock.second};
  if (clock.offset) return Instant{reading - *clock.offset};
  if (day_.plain) {
    memory_.reset();
    return Instant{reading - day_.offset};
  }
  return resolve(CivilTime{reading}, reason);
}

std::optional<Instant> TimeReader::resolve(CivilTime reading, std::string& reason) {
  const Calendar::Meaning meaning = zone_.meaning_of(reading);
  if (!meaning.first) {
    reason = shown(reading) + " does not exist in " + zone_.name() +
             ": the clocks were put forward over it";
    return std::nullopt;
  }
  memory_ = meaning.second ? choose(meaning) : *meaning.first;
  return memory_;
}

Instant TimeReader::choose(const Calendar::Meaning& meaning) const {
  const Instant first = *meaning.first;
  const Instant second = *meaning.second;
  if (near_) return *near_ - first < second - *near_ ? first : second;
  if (!memory_ || first > *memory_ || *memory_ - first > two_days) return first;
  if (zone_.offset_at(*memory_) == zone_.offset_at(first)) return second;  // it stepped back
  if (second > *memory_) return second;
  // Not later than a row of the second pass, or behind rows after it: a new start of the file.
  const bool inside = zone_.meaning_of(zone_.civil(*memory_)).second.has_value();
  return inside ? second : first;
}

bool TimeReader::in_range(Instant at, std::string& reason) {
  if (at < limits::first_instant || at >= limits::end_instant) {
    reason = "the time is outside the years 2000 to 2099";
    return false;
  }
  if (latest_ && at > *latest_) {
    ahead_ = at - (*latest_ - limits::ahead);
    reason = "the time is " + length_of(*ahead_) +
             " ahead of this computer's clock (wrong zone or station clock?)";
    return false;
  }
  return true;
}

}  // namespace antherd::station
