// See sample.hpp. Guesses are shown, never used by themselves: a person puts them into the
// settings.
#include "run/commands/sample.hpp"

#include <algorithm>
#include <cctype>
#include <cstdio>
#include <optional>

#include "edge/station/form.hpp"
#include "edge/station/text.hpp"
#include "run/commands/sample_columns.hpp"
#include "run/commands/sample_time.hpp"

namespace antherd::commands {
namespace {

constexpr std::size_t first_rows = 200;
constexpr std::size_t rows_in_all = 2000;

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

std::string quoted(const std::string& text) {
  std::string result = "\"";
  for (const char c : station::visible(text))
    result += c == '"' || c == '\\' ? std::string{'\\', c} : std::string{c};
  return result + '"';
}

std::string short_text(double number) {
  char text[40];
  std::snprintf(text, sizeof text, "%.4g", number + 0.0);  // no -0
  return text;
}

std::vector<std::string> column_of(const SampleText& sample, std::size_t column) {
  std::vector<std::string> cells;
  for (const auto& row : sample.rows) {
    if (column < row.size()) cells.push_back(row[column]);
  }
  return cells;
}

/// The columns that make up the time, one or a day and a clock; none where there is no such.
std::vector<std::size_t> find_time(const SampleText& sample, TimeGuess& whole) {
  std::vector<std::size_t> columns;
  std::vector<TimeGuess> parts;
  for (std::size_t i = 0; i < sample.header.size(); ++i) {
    const auto part = guess_time_form(column_of(sample, i));
    if (!part) continue;
    if (part->date && part->clock) {
      whole = *part;
      return {i};
    }
    const bool wanted = parts.empty() || (parts.size() == 1 && parts[0].date != part->date);
    if (!wanted) continue;
    columns.push_back(i);
    parts.push_back(*part);
  }
  if (columns.size() != 2) return {};
  whole = parts[0];
  whole.form += " " + parts[1].form;
  whole.zoned = parts[0].zoned || parts[1].zoned;
  whole.utc = parts[0].utc || parts[1].utc;
  whole.day_or_month = parts[0].day_or_month || parts[1].day_or_month;
  return columns;
}

void guess_time(const SampleText& sample, SampleGuess& guess) {
  TimeGuess time;
  const std::vector<std::size_t> columns = find_time(sample, time);
  if (columns.empty()) {
    guess.missing.emplace_back("time");
    return;
  }
  std::string names, line = "time = { ";
  for (const std::size_t column : columns) {
    names += (names.empty() ? "" : ", ") + quoted(sample.header[column]);
  }
  line += columns.size() == 1 ? "column = " + names : "columns = [" + names + "]";
  line += ", form = " + quoted(time.form);
  const std::string header = small_letters(names);
  if (time.utc || (!time.zoned && has_word(header, {"utc", "gmt", "zulu"}))) {
    line += ", zone = \"utc\"";
  } else if (!time.zoned) {
    line += ", zone = \"farm\"";
    guess.doubts.emplace_back(
        "zone: \"farm\" keeps your clock changes; a logger that never "
        "changes its clock wants \"-08:00\" or \"utc\"");
  }
  guess.lines.push_back(line + " }");
  if (time.day_or_month) {
    guess.doubts.emplace_back(
        "time: month before day is a guess; if the day comes first write "
        "%d/%m/%Y");
  }
}

/// A file of several stations: which rows are whose.
void guess_where(const SampleText& sample, SampleGuess& guess) {
  for (std::size_t i = 0; i < sample.header.size(); ++i) {
    const auto parts = parts_of(sample, i);
    const bool named = std::any_of(parts.begin(), parts.end(), [](const std::string& part) {
      for (const char* word :
           {"station", "stationid", "site", "mote", "sensor", "device", "origin", "node", "id"}) {
        if (part == word) return true;
      }
      return false;
    });
    if (!named) continue;
    std::vector<std::string> names;
    for (const std::string& cell : column_of(sample, i)) {
      const bool known = std::find(names.begin(), names.end(), cell) != names.end();
      if (!cell.empty() && !known) names.push_back(cell);
    }
    // As many names as rows are numbers of the rows.
    if (names.size() < 2 || 10 * names.size() > 9 * sample.rows.size()) continue;
    guess.lines.push_back("where = { column = " + quoted(sample.header[i]) +
                          ", equals = " + quoted(names.front()) + " }");
    guess.doubts.push_back("where: the file holds " + std::to_string(names.size()) +
                           " or more stations (" + station::visible(names[0], 40) + ", " +
                           station::visible(names[1], 40) + (names.size() > 2 ? ", …" : "") +
                           "); name yours");
    return;
  }
}

/// Collects the lines of values and what marks their missing ones.
class Values {
 public:
  Values(const SampleText& sample, SampleGuess& guess) : sample_(sample), guess_(guess) {}

  void put(const char* key, std::optional<std::size_t> column, const std::string& unit,
           const std::string& more = "") {
    if (!column) {
      guess_.missing.emplace_back(key);
      return;
    }
    guess_.lines.push_back(std::string(key) + " = { column = " + quoted(sample_.header[*column]) +
                           ", unit = " + quoted(unit) + more + " }");
    for (const std::string& mark : marks_of(sample_, *column)) {
      if (std::find(missing_.begin(), missing_.end(), mark) == missing_.end()) {
        missing_.push_back(mark);
        found_mark_ = true;
      }
    }
  }
  /// The unit by name; else that of the other temperature; else by the values, with a remark.
  std::string temperature_unit(const char* key, std::optional<std::size_t> column) {
    if (!column) return "degC";
    const auto numbers = numbers_of(sample_, *column);
    auto unit = named_temperature_unit(sample_, *column);
    if (!unit) {
      unit = last_unit_ ? *last_unit_ : at_share(numbers, 0.75) > 45 ? "degF" : "degC";
      guess_.doubts.push_back(std::string(key) + ": no unit is named; its values run from " +
                              short_text(numbers.front()) + " to " + short_text(numbers.back()) +
                              " and are taken as " + *unit);
    }
    last_unit_ = unit;
    return *unit;
  }
  void put_missing() {
    if (!found_mark_) return;
    std::string list;
    for (const std::string& mark : missing_) list += (list.empty() ? "" : ", ") + quoted(mark);
    guess_.lines.push_back("missing = [" + list + "]");
  }

 private:
  const SampleText& sample_;
  SampleGuess& guess_;
  std::vector<std::string> missing_ = station::RecordForm{}.missing;
  bool found_mark_ = false;
  std::optional<std::string> last_unit_;
};

/// A column's name and unit row in small letters.
std::string words_of(const SampleText& sample, std::size_t column) {
  std::string words = sample.header[column];
  if (column < sample.units.size()) words += " " + sample.units[column];
  return small_letters(words);
}

/// The unit that a name holds, else the first of the list, with a remark of what was taken.
std::string unit_or_first(const std::string& words,
                          std::initializer_list<std::pair<const char*, const char*>> known,
                          std::string& remark) {
  for (const auto& [part, unit] : known) {
    if (words.find(part) != std::string::npos) return unit;
  }
  const std::string first = known.begin()->second;
  remark = "no unit is named and " + first + " is taken; ";
  return first;
}

void guess_others(const SampleText& sample, Values& values, SampleGuess& guess) {
  if (const auto rain = column_with(sample, {"rain", "precip", "prcp"}, {"rate", "cum"})) {
    std::string remark;
    const std::string unit = unit_or_first(
        words_of(sample, *rain),
        {{"mm", "mm"}, {"inch", "in"}, {"_in", "in"}, {"(in", "in"}, {" in", "in"}}, remark);
    values.put("rain", rain, unit, ", meaning = \"since_last\"");
    guess.doubts.push_back("rain: " + remark +
                           "since_last, day_total or counter? Look whether the column "
                           "falls back to 0 each time, at midnight, or never");
  }
  if (const auto wind = column_with(sample, {"wind", "wspd"}, {"dir", "gust", "max", "chill"})) {
    std::string remark;
    const std::string unit = unit_or_first(words_of(sample, *wind),
                                           {{"m/s", "m/s"},
                                            {"mps", "m/s"},
                                            {"_ms", "m/s"},
                                            {"mph", "mph"},
                                            {"km", "km/h"},
                                            {"kph", "km/h"},
                                            {"kn", "kn"},
                                            {"kt", "kn"}},
                                           remark);
    values.put("wind", wind, unit, ", height = \"2 m\"");
    guess.doubts.push_back("wind: " + remark + "how high does the sensor stand?");
  }
  if (const auto solar = column_with(sample, {"solar", "radiation"}, {"max"})) {
    values.put("solar", solar, "W/m2");
  }
}

}  // namespace

SampleText split_sample(const std::string& text) {
  const std::string body = text.rfind("\xEF\xBB\xBF", 0) == 0 ? text.substr(3) : text;
  std::vector<std::string> lines;
  for (std::size_t at = 0; at < body.size();) {
    const std::size_t end = std::min(body.find('\n', at), body.size());
    std::string line(station::trim(std::string_view(body).substr(at, end - at)));
    if (!line.empty()) lines.push_back(std::move(line));
    at = end + 1;
  }
  SampleText sample;
  if (lines.empty()) return sample;
  const std::string& header = lines.front();
  const auto count = [&](char c) { return std::count(header.begin(), header.end(), c); };
  if (count('\t') > count(',') && count('\t') >= count(';')) sample.separator = '\t';
  if (count(';') > count(',') && count(';') > count('\t')) sample.separator = ';';
  sample.header = cells_of(header, sample.separator);
  std::size_t first = 1;
  const auto any_digit = [](const std::string& line) {
    return std::any_of(line.begin(), line.end(),
                       [](unsigned char c) { return std::isdigit(c) != 0; });
  };
  for (; first < lines.size() && first < 4 && !any_digit(lines[first]); ++first) {
    if (sample.units.empty()) sample.units = cells_of(lines[first], sample.separator);
  }
  const std::size_t step = std::max<std::size_t>(1, lines.size() / (rows_in_all - first_rows));
  for (std::size_t i = first; i < lines.size(); i += i < first_rows ? 1 : step) {
    sample.rows.push_back(cells_of(lines[i], sample.separator));
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
  guess_where(sample, guess);
  Values values(sample, guess);
  const auto temperature = temperature_column(sample);
  values.put("temperature", temperature, values.temperature_unit("temperature", temperature));
  if (const auto humidity = humidity_column(sample)) {
    const bool fraction = at_share(numbers_of(sample, *humidity), 1.0) <= 1.0;
    values.put("humidity", humidity, fraction ? "1" : "%");
  } else {
    const auto dew = dew_point_column(sample);
    values.put("dew_point", dew, values.temperature_unit("dew_point", dew));
  }
  guess_others(sample, values, guess);
  values.put_missing();
  return guess;
}

}  // namespace antherd::commands
