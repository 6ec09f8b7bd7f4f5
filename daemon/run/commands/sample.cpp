// See sample.hpp. Guesses are shown, never used by themselves: a person puts them into the
// settings.
#include "run/commands/sample.hpp"

#include <algorithm>
#include <cctype>
#include <cmath>
#include <optional>

#include "edge/station/text.hpp"
#include "run/settings/quantities.hpp"

namespace antherd::commands {
namespace {

constexpr std::size_t rows_looked_at = 400;

std::string lower(std::string text) {
  std::transform(text.begin(), text.end(), text.begin(),
                 [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
  return text;
}

bool has(const std::string& text, std::initializer_list<const char*> words) {
  return std::any_of(words.begin(), words.end(),
                     [&](const char* word) { return text.find(word) != std::string::npos; });
}

std::vector<std::string> cells_of(const std::string& line, char separator) {
  std::vector<std::string> cells(1);
  bool quoted = false;
  for (const char c : line) {
    if (c == '"') {
      quoted = !quoted;
    } else if (c == separator && !quoted) {
      cells.emplace_back();
    } else {
      cells.back() += c;
    }
  }
  for (std::string& cell : cells) cell = std::string(station::trim(cell));
  return cells;
}

/// Numbers of one column; a decimal comma is read where the separator leaves room for it.
std::vector<double> numbers_of(const SampleText& sample, std::size_t column) {
  std::vector<double> numbers;
  for (const auto& row : sample.rows) {
    if (column >= row.size()) continue;
    std::string cell = row[column];
    if (sample.separator != ',') std::replace(cell.begin(), cell.end(), ',', '.');
    if (const auto number = settings::parse_number(cell); number && std::abs(*number) < 9000) {
      numbers.push_back(*number);
    }
  }
  std::sort(numbers.begin(), numbers.end());
  return numbers;
}

double at_share(const std::vector<double>& sorted, double share) {
  if (sorted.empty()) return 0;
  return sorted[static_cast<std::size_t>(share * static_cast<double>(sorted.size() - 1))];
}

std::string quoted(const std::string& text) {
  std::string result = "\"";
  for (const char c : text) result += c == '"' || c == '\\' ? std::string{'\\', c} : std::string{c};
  return result + '"';
}

std::optional<std::size_t> column_with(const SampleText& sample,
                                       std::initializer_list<const char*> words,
                                       std::initializer_list<const char*> but) {
  for (std::size_t i = 0; i < sample.header.size(); ++i) {
    const std::string name = lower(sample.header[i]);
    if (has(name, words) && !has(name, but) && !numbers_of(sample, i).empty()) return i;
  }
  return std::nullopt;
}

/// The pattern that a clock reading is written in, or nothing.
std::optional<std::string> pattern_of(const std::string& cell) {
  std::string shape;
  for (const char c : cell) shape += std::isdigit(static_cast<unsigned char>(c)) ? '9' : c;
  const auto starts = [&](const char* prefix) { return shape.rfind(prefix, 0) == 0; };
  if (shape == "9999999999") return "unix";
  if (shape == "9999999999999") return "unix_ms";
  if (starts("9999-99-99T99:99")) return "iso";
  std::string date;
  std::size_t used = 0;
  if (starts("9999-99-99")) {
    date = "%Y-%m-%d", used = 10;
  } else if (starts("9999/99/99")) {
    date = "%Y/%m/%d", used = 10;
  } else if (starts("99.99.9999")) {
    date = "%d.%m.%Y", used = 10;
  } else if (starts("99/99/9999")) {
    date = "%m/%d/%Y", used = 10;
  }
  const std::string rest = shape.substr(used);
  if (rest.empty()) return date.empty() ? std::nullopt : std::optional(date);
  const std::string glue = used > 0 ? " " : "";
  for (const auto& [form, pattern] :
       {std::pair{"99:99:99", "%H:%M:%S"}, {"99:99", "%H:%M"}, {"9:99", "%H:%M"}}) {
    if (rest == glue + form) return date + glue + pattern;
    for (const char* zone : {" +9999", " -9999", "+9999", "-9999", "+99:99", "-99:99"}) {
      if (rest != glue + form + zone) continue;
      return date + glue + pattern + (zone[0] == ' ' ? " %z" : "%z");
    }
  }
  return std::nullopt;
}

void guess_time(const SampleText& sample, SampleGuess& guess) {
  const std::vector<std::string>& first = sample.rows.front();
  std::vector<std::string> columns;
  std::string form;
  for (std::size_t i = 0; i < sample.header.size() && i < first.size(); ++i) {
    const auto pattern = pattern_of(first[i]);
    if (!pattern) continue;
    const bool date = pattern->find("%Y") != std::string::npos;
    const bool clock = pattern->find("%H") != std::string::npos;
    if (!date && !clock) {  // unix, unix_ms, iso stand alone
      columns = {sample.header[i]}, form = *pattern;
      break;
    }
    if (date && clock) {
      columns = {sample.header[i]}, form = *pattern;
      break;
    }
    if (columns.size() == 2) continue;
    columns.push_back(sample.header[i]);
    form += (form.empty() ? "" : " ") + *pattern;
  }
  if (columns.empty()) {
    guess.missing.emplace_back("time");
    return;
  }
  std::string line = "time = { ";
  line += columns.size() == 1
              ? "column = " + quoted(columns[0])
              : "columns = [" + quoted(columns[0]) + ", " + quoted(columns[1]) + "]";
  line += ", form = " + quoted(form);
  const bool zoned = form.find("%z") != std::string::npos || form.rfind("unix", 0) == 0 ||
                     (form == "iso" && first.size() > 0);
  if (!zoned) {
    line += ", zone = \"farm\"";
    guess.doubts.emplace_back(
        "zone: \"farm\" keeps your clock changes; a logger that never "
        "changes its clock wants \"-08:00\" or \"utc\"");
  }
  guess.lines.push_back(line + " }");
  if (form.find("%m/%d") != std::string::npos) {
    guess.doubts.emplace_back(
        "time: month before day is a guess; if the day comes first write "
        "%d/%m/%Y");
  }
}

void guess_value(SampleGuess& guess, const SampleText& sample, const char* key,
                 std::optional<std::size_t> column, const std::string& unit,
                 const std::string& more = "") {
  if (!column) {
    guess.missing.emplace_back(key);
    return;
  }
  guess.lines.push_back(std::string(key) + " = { column = " + quoted(sample.header[*column]) +
                        ", unit = " + quoted(unit) + more + " }");
}

std::string temperature_unit(const SampleText& sample, std::size_t column) {
  const std::string name = lower(sample.header[column]);
  if (has(name, {"degf", "°f", "_f", "(f", "fahr"})) return "degF";
  if (has(name, {"degc", "°c", "_c", "(c", "cels"})) return "degC";
  return at_share(numbers_of(sample, column), 0.75) > 45 ? "degF" : "degC";
}

std::string wind_unit(const std::string& name) {
  if (has(name, {"mph"})) return "mph";
  if (has(name, {"km"})) return "km/h";
  if (has(name, {"kn", "kt"})) return "kn";
  return "m/s";
}

}  // namespace

SampleText split_sample(const std::string& text) {
  SampleText sample;
  std::string body = text.rfind("\xEF\xBB\xBF", 0) == 0 ? text.substr(3) : text;
  std::size_t at = 0;
  while (at < body.size() && sample.rows.size() < rows_looked_at) {
    std::size_t end = body.find('\n', at);
    if (end == std::string::npos) end = body.size();
    const std::string line(station::trim(body.substr(at, end - at)));
    at = end + 1;
    if (line.empty()) continue;
    if (sample.header.empty()) {
      const auto count = [&](char c) { return std::count(line.begin(), line.end(), c); };
      if (count('\t') > count(',') && count('\t') >= count(';')) sample.separator = '\t';
      if (count(';') > count(',') && count(';') > count('\t')) sample.separator = ';';
      sample.header = cells_of(line, sample.separator);
    } else {
      sample.rows.push_back(cells_of(line, sample.separator));
    }
  }
  return sample;
}

SampleGuess guess_form(const SampleText& sample) {
  SampleGuess guess;
  if (sample.rows.empty()) {
    guess.missing.emplace_back("every value: there is no row below the header");
    return guess;
  }
  guess_time(sample, guess);
  const auto temperature = column_with(sample, {"temp", "t_", "air"},
                                       {"dew", "soil", "wind", "max", "min", "fuel", "type"});
  guess_value(guess, sample, "temperature", temperature,
              temperature ? temperature_unit(sample, *temperature) : "degC");
  const auto humidity = column_with(sample, {"humid", "rh"}, {"soil"});
  if (humidity) {
    const bool fraction = at_share(numbers_of(sample, *humidity), 1.0) <= 1.0;
    guess_value(guess, sample, "humidity", humidity, fraction ? "1" : "%");
  } else {
    const auto dew = column_with(sample, {"dew"}, {});
    guess_value(guess, sample, "dew_point", dew, dew ? temperature_unit(sample, *dew) : "degC");
  }
  if (const auto rain = column_with(sample, {"rain", "precip", "prcp"}, {"rate", "cum"})) {
    const std::string name = lower(sample.header[*rain]);
    const bool inches = has(name, {"_in", "inch", "(in"});
    guess_value(guess, sample, "rain", rain, inches ? "in" : "mm", ", meaning = \"since_last\"");
    guess.doubts.emplace_back(
        "rain: since_last, day_total or counter? Look whether the column "
        "falls back to 0 each time, at midnight, or never");
  }
  if (const auto wind = column_with(sample, {"wind", "wspd"}, {"dir", "gust", "max", "chill"})) {
    guess_value(guess, sample, "wind", wind, wind_unit(lower(sample.header[*wind])),
                ", height = \"2 m\"");
    guess.doubts.emplace_back("wind: how high does the sensor stand?");
  }
  if (const auto solar = column_with(sample, {"solar", "radiation"}, {"max"})) {
    guess_value(guess, sample, "solar", solar, "W/m2");
  }
  return guess;
}

}  // namespace antherd::commands
