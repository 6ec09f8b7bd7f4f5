// See zone_rule.hpp.
#include "edge/clock/zone_rule.hpp"

#include <algorithm>
#include <charconv>

namespace antherd::clock {
namespace {

/// A place in the text; every step takes what it can or nothing.
class Cursor {
 public:
  explicit Cursor(std::string_view text) : rest_(text) {}
  bool done() const { return rest_.empty(); }
  char next() const { return rest_.empty() ? '\0' : rest_.front(); }

  bool take(char wanted) {
    if (next() != wanted) return false;
    rest_.remove_prefix(1);
    return true;
  }

  /// A name of three letters or more, or anything in angle brackets.
  bool take_name() {
    if (take('<')) {
      const std::size_t close = rest_.find('>');
      if (close == std::string_view::npos) return false;
      rest_.remove_prefix(close + 1);
      return close > 0;
    }
    std::size_t length = 0;
    while (length < rest_.size() && ((rest_[length] >= 'A' && rest_[length] <= 'Z') ||
                                     (rest_[length] >= 'a' && rest_[length] <= 'z'))) {
      ++length;
    }
    rest_.remove_prefix(length);
    return length >= 3;
  }

  std::optional<int> take_number(int lowest, int highest) {
    int number = 0;
    const char* const end = rest_.data() + rest_.size();
    if (next() < '0' || next() > '9') return {};
    const auto read = std::from_chars(rest_.data(), end, number);
    if (read.ec != std::errc{} || number < lowest || number > highest) return {};
    rest_.remove_prefix(static_cast<std::size_t>(read.ptr - rest_.data()));
    return number;
  }

  /// [+|-]hh[:mm[:ss]]; RFC 8536 allows hours to 167.
  std::optional<Seconds> take_time() {
    const bool negative = take('-');
    if (!negative) take('+');
    const auto hours = take_number(0, 167);
    if (!hours) return {};
    int minutes = 0, seconds = 0;
    if (take(':')) {
      const auto read = take_number(0, 59);
      if (!read) return {};
      minutes = *read;
      if (take(':')) {
        const auto more = take_number(0, 59);
        if (!more) return {};
        seconds = *more;
      }
    }
    const Seconds time{*hours * 3600 + minutes * 60 + seconds};
    return negative ? -time : time;
  }

 private:
  std::string_view rest_;
};

/// A day of each year and a time of that day (which may lie beyond it).
struct YearDay {
  enum class By { month_week, julian_without_leap_day, day_of_year } by = By::month_week;
  int month = 1, week = 1, weekday = 0;  // of M
  int day = 0;                           // of J and n
  Seconds time{7200};

  CivilTime in(int number) const {
    using namespace std::chrono;
    const year y{number};
    const auto january = local_days(y / January / 1);
    local_days date = january + days{day};
    if (by == By::julian_without_leap_day) {
      date = january + days{day - 1 + (y.is_leap() && day >= 60 ? 1 : 0)};
    } else if (by == By::month_week) {
      const std::chrono::month m{static_cast<unsigned>(month)};
      const std::chrono::weekday w{static_cast<unsigned>(weekday)};
      date = week == 5 ? local_days(y / m / w[last])
                       : local_days(y / m / w[static_cast<unsigned>(week)]);
    }
    return CivilTime(date) + time;
  }
};

std::optional<YearDay> take_year_day(Cursor& text) {
  YearDay day;
  if (text.take('M')) {
    const auto month = text.take_number(1, 12);
    if (!month || !text.take('.')) return {};
    const auto week = text.take_number(1, 5);
    if (!week || !text.take('.')) return {};
    const auto weekday = text.take_number(0, 6);
    if (!weekday) return {};
    day.month = *month, day.week = *week, day.weekday = *weekday;
  } else {
    const bool julian = text.take('J');
    const auto number = text.take_number(julian ? 1 : 0, 365);
    if (!number) return {};
    day.by = julian ? YearDay::By::julian_without_leap_day : YearDay::By::day_of_year;
    day.day = *number;
  }
  if (text.take('/')) {
    const auto time = text.take_time();
    if (!time) return {};
    day.time = *time;
  }
  return day;
}

Instant instant_of(CivilTime reading, Seconds offset) {
  return Instant(reading.time_since_epoch()) - offset;
}

}  // namespace

std::optional<std::vector<Calendar::Change>> changes_by_rule(std::string_view rule, int first_year,
                                                             int last_year) {
  Cursor text(rule);
  if (!text.take_name()) return {};
  const auto west = text.take_time();  // POSIX counts west of Greenwich as positive
  if (!west) return {};
  const Seconds standard = -*west;
  std::vector<Calendar::Change> changes;
  if (text.done()) {
    const auto start = std::chrono::sys_days(std::chrono::year{first_year} / 1 / 1);
    return changes = {Calendar::Change{start, standard}};
  }
  if (!text.take_name()) return {};
  Seconds summer = standard + one_hour;
  if (text.next() != ',') {
    const auto own = text.take_time();
    if (!own) return {};
    summer = -*own;
  }
  if (!text.take(',')) return {};
  const auto begins = take_year_day(text);
  if (!begins || !text.take(',')) return {};
  const auto ends = take_year_day(text);
  if (!ends || !text.done()) return {};
  for (int year = first_year; year <= last_year; ++year) {
    changes.push_back({instant_of(begins->in(year), standard), summer});
    changes.push_back({instant_of(ends->in(year), summer), standard});
  }
  std::stable_sort(changes.begin(), changes.end(),
                   [](const auto& a, const auto& b) { return a.from < b.from; });
  return changes;
}

}  // namespace antherd::clock
