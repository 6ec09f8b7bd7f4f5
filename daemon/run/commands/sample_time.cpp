// See sample_time.hpp.
#include "run/commands/sample_time.hpp"

#include <algorithm>
#include <cctype>
#include <cstdlib>

namespace antherd::commands {
namespace {

bool digit(char c) { return std::isdigit(static_cast<unsigned char>(c)) != 0; }

/// Walks over one cell and spells what it finds.
class Walk {
 public:
  explicit Walk(const std::string& cell) : cell_(cell) {}

  bool done() const { return at_ == cell_.size(); }
  std::size_t digits() const {
    std::size_t count = 0;
    while (at_ + count < cell_.size() && digit(cell_[at_ + count])) ++count;
    return count;
  }
  char next(std::size_t ahead = 0) const {
    return at_ + ahead < cell_.size() ? cell_[at_ + ahead] : '\0';
  }
  int number(std::size_t length) {
    const int value = std::atoi(cell_.substr(at_, length).c_str());
    at_ += length;
    return value;
  }
  bool word(const std::string& text) {
    if (cell_.compare(at_, text.size(), text) != 0) return false;
    at_ += text.size();
    return true;
  }
  std::size_t at() const { return at_; }
  void back_to(std::size_t at) { at_ = at; }

 private:
  const std::string& cell_;
  std::size_t at_ = 0;
};

/// What one cell says; `first_above_12` tells a day that stands before its month.
struct Cell {
  TimeGuess guess;
  bool first_above_12 = false;
  bool second_above_12 = false;
};

bool read_date(Walk& walk, Cell& cell) {
  const std::size_t start = walk.at();
  const auto fails = [&] { return walk.back_to(start), false; };
  const std::size_t first = walk.digits();
  if (first != 4 && first != 1 && first != 2) return fails();
  const int a = walk.number(first);
  const char separator = walk.next();
  if (std::string("-/. ").find(separator) == std::string::npos || walk.done()) return fails();
  walk.number(1);
  const std::size_t second = walk.digits();
  if (second != 1 && second != 2) return fails();
  const int b = walk.number(second);
  if (walk.next() != separator) return fails();
  walk.number(1);
  const std::size_t third = walk.digits();
  const std::string glue(1, separator);
  if (first == 4) {
    if ((third != 1 && third != 2) || b > 12) return fails();
    walk.number(third);
    cell.guess.form = "%Y" + glue + "%m" + glue + "%d";
  } else {
    if (third != 4 || separator == ' ') return fails();
    walk.number(third);
    cell.first_above_12 = a > 12;
    cell.second_above_12 = b > 12;
    cell.guess.form = "%m" + glue + "%d" + glue + "%Y";
    if (separator == '.') cell.guess.form = "%d.%m.%Y";
    cell.guess.day_or_month = separator != '.';
  }
  cell.guess.date = true;
  return true;
}

bool read_clock(Walk& walk, Cell& cell) {
  const std::size_t start = walk.at();
  const auto fails = [&] { return walk.back_to(start), false; };
  const std::size_t hours = walk.digits();
  if (hours != 1 && hours != 2) return fails();
  walk.number(hours);
  if (!walk.word(":") || walk.digits() != 2) return fails();
  walk.number(2);
  std::string rest = ":%M";
  if (walk.next() == ':' && digit(walk.next(1))) {
    walk.number(1);
    if (walk.digits() != 2) return fails();
    walk.number(2);
    rest += ":%S";
    if (walk.next() == '.' && digit(walk.next(1))) {
      walk.number(1);
      walk.number(walk.digits());
    }
  }
  const std::size_t before_half = walk.at();
  const std::string space = walk.word(" ") ? " " : "";
  bool half = false;
  for (const char* word : {"AM", "PM", "am", "pm", "a.m.", "p.m."}) half = half || walk.word(word);
  if (half) {
    rest += space + "%p";
  } else {
    walk.back_to(before_half);
  }
  cell.guess.form += (half ? "%I" : "%H") + rest;
  cell.guess.clock = true;
  return true;
}

void read_zone(Walk& walk, Cell& cell) {
  const std::size_t start = walk.at();
  const std::string space = walk.word(" ") ? " " : "";
  for (const char* word : {"UTC", "GMT"}) {
    if (!walk.word(word)) continue;
    cell.guess.form += space + word;
    cell.guess.utc = true;
    return;
  }
  if (space.empty() && walk.word("Z")) {
    cell.guess.zoned = true;
    return;
  }
  if (walk.word("+") || walk.word("-")) {
    const std::size_t digits = walk.digits();
    walk.number(digits);
    const bool minutes = digits == 2 && walk.word(":") && walk.digits() == 2;
    if (minutes) walk.number(2);
    if (minutes || digits == 4) {
      cell.guess.form += space + "%z";
      cell.guess.zoned = true;
      return;
    }
  }
  walk.back_to(start);
}

/// Digits alone: seconds since 1970, or a date and clock without anything between.
std::optional<Cell> read_digits(const std::string& cell) {
  if (!std::all_of(cell.begin(), cell.end(), digit)) return std::nullopt;
  Cell seen;
  const int year = std::atoi(cell.substr(0, 4).c_str());
  const int month = cell.size() >= 8 ? std::atoi(cell.substr(4, 2).c_str()) : 0;
  const int day = cell.size() >= 8 ? std::atoi(cell.substr(6, 2).c_str()) : 0;
  const bool calendar =
      year >= 1900 && year < 2100 && month >= 1 && month <= 12 && day >= 1 && day <= 31;
  const char* const clocks[] = {"", "%H", "%H%M", "%H%M%S"};
  if (calendar && cell.size() % 2 == 0 && cell.size() >= 8 && cell.size() <= 14) {
    seen.guess.date = true;
    seen.guess.clock = cell.size() > 8;
    seen.guess.form = std::string("%Y%m%d") + clocks[(cell.size() - 8) / 2];
    return seen;
  }
  if (cell.size() != 10 && cell.size() != 13) return std::nullopt;
  seen.guess.form = cell.size() == 10 ? "unix" : "unix_ms";
  seen.guess.date = seen.guess.clock = seen.guess.zoned = true;
  return seen;
}

std::optional<Cell> read_cell(const std::string& cell) {
  if (cell.empty()) return std::nullopt;
  if (const auto digits = read_digits(cell)) return digits;
  Cell seen;
  Walk walk(cell);
  const bool date = read_date(walk, seen);
  if (date && walk.done()) return seen;
  const bool iso = date && seen.guess.form == "%Y-%m-%d" && walk.word("T");
  if (date && !iso) {
    if (!walk.word(" ")) return std::nullopt;
    seen.guess.form += " ";
  }
  if (!read_clock(walk, seen)) return std::nullopt;
  read_zone(walk, seen);
  if (!walk.done()) return std::nullopt;
  if (iso) seen.guess.form = "iso";
  return seen;
}

}  // namespace

std::optional<TimeGuess> guess_time_form(const std::vector<std::string>& cells) {
  std::optional<TimeGuess> guess;
  std::size_t read = 0;
  bool day_first = false, month_first = false;
  for (const std::string& text : cells) {
    const auto cell = read_cell(text);
    if (!cell) continue;
    ++read;
    if (guess && guess->form != cell->guess.form) return std::nullopt;
    guess = cell->guess;
    day_first = day_first || cell->first_above_12;
    month_first = month_first || cell->second_above_12;
  }
  if (!guess || 2 * read < cells.size()) return std::nullopt;
  if (day_first && month_first) return std::nullopt;
  if (guess->day_or_month && day_first) std::swap(guess->form[1], guess->form[4]);
  guess->day_or_month = guess->day_or_month && !day_first && !month_first;
  return guess;
}

}  // namespace antherd::commands
