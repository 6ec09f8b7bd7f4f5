// The diary folder's irrigation.csv and scouting.csv; see intake.hpp.
#include <sys/stat.h>

#include <algorithm>
#include <cmath>
#include <fstream>
#include <functional>
#include <istream>
#include <map>
#include <sstream>

#include "edge/station/text.hpp"
#include "run/service/intake.hpp"
#include "run/settings/quantities.hpp"

namespace antherd::service {
namespace {

constexpr std::streamsize largest_diary = 4 * 1024 * 1024;  // a season has a few hundred lines
constexpr Seconds longest_irrigation{96 * 3600};

using Row = std::map<std::string, std::string>;  // by column name
using Names = std::vector<std::string>;

/// The columns that a diary file may have; the first ones it must have.
struct Columns {
  Names needed, others;
};

/// Cells of one CSV line (RFC 4180; no line ends inside cells here).
std::vector<std::string> cells_of(const std::string& line) {
  std::vector<std::string> cells(1);
  bool quoted = false;
  for (std::size_t i = 0; i < line.size(); ++i) {
    const char c = line[i];
    if (quoted && c == '"' && i + 1 < line.size() && line[i + 1] == '"') {
      cells.back() += '"';
      ++i;
    } else if (c == '"') {
      quoted = !quoted;
    } else if (c == ',' && !quoted) {
      cells.emplace_back();
    } else {
      cells.back() += c;
    }
  }
  for (std::string& text : cells) text = std::string(station::trim(text));
  return cells;
}

Result<field::Method> method_from(const std::string& text, field::Method usual) {
  if (text.empty()) return usual;
  for (const auto method : {field::Method::overhead, field::Method::drip, field::Method::furrow}) {
    if (text == field::name_of(method)) return method;
  }
  return Failure{"", "", "method '" + text + "' is none of overhead, drip, furrow", ""};
}

Result<std::optional<Millimetre>> depth_from(const Row& row) {
  for (const auto& [column, unit] : {std::pair{"depth_mm", "mm"}, {"depth_in", "in"}}) {
    const auto cell = row.find(column);
    if (cell == row.end() || cell->second.empty()) continue;
    auto depth = settings::parse_depth(cell->second + " " + unit);
    if (!depth) return Failure{"", "", std::string(column) + ": " + depth.failure().why, ""};
    return std::optional(*depth);
  }
  const auto cell = row.find("depth");
  if (cell == row.end() || cell->second.empty() || cell->second == "unknown") {
    return std::optional<Millimetre>{};
  }
  if (settings::parse_number(cell->second)) {
    return Failure{
        "", "",
        "depth '" + cell->second +
            "' has no unit; write \"6 mm\" or \"0.5 in\", or name the column depth_mm or "
            "depth_in",
        ""};
  }
  auto depth = settings::parse_depth(cell->second);
  if (!depth) return Failure{"", "", "depth: " + depth.failure().why, ""};
  return std::optional(*depth);
}

std::string at_or_empty(const Row& row, const char* column) {
  const auto cell = row.find(column);
  return cell == row.end() ? std::string{} : cell->second;
}

Result<Instant> instant_from(const settings::Settings& settings, const Row& row,
                             const char* column) {
  const std::string text = at_or_empty(row, column);
  auto reading = settings::parse_civil_time(text);
  if (!reading) return Failure{"", "", std::string(column) + ": " + reading.failure().why, ""};
  auto instant = farm_instant(settings, *reading);
  if (instant) return instant;
  return Failure{"", "", std::string(column) + " '" + text + "': " + instant.failure().why, ""};
}

Result<std::string> field_from(const settings::Settings& settings, const Row& row) {
  const std::string name = at_or_empty(row, "field");
  if (name.empty()) return Failure{"", "", "field: no field is named", ""};
  const auto field = settings.field_by_beginning(name);
  if (field) return (*field)->field.name;
  const Failure& failure = field.failure();
  return Failure{"", "", "field '" + name + "': " + failure.why + "; " + failure.what_next, ""};
}

Result<field::Irrigation> irrigation_from(const settings::Settings& settings, const Row& row) {
  field::Irrigation irrigation;
  auto name = field_from(settings, row);
  if (!name) return name.failure();
  irrigation.field = *name;
  auto start = instant_from(settings, row, "start");
  if (!start) return start.failure();
  auto end = instant_from(settings, row, "end");
  if (!end) return end.failure();
  if (*end <= *start) return Failure{"", "", "end is not after start", ""};
  if (*end - *start > longest_irrigation) {
    return Failure{"", "", "end is more than 96 h after start", ""};
  }
  irrigation.start = *start;
  irrigation.end = *end;
  auto method =
      method_from(at_or_empty(row, "method"), settings.field(irrigation.field)->field.irrigation);
  if (!method) return method.failure();
  irrigation.method = *method;
  auto depth = depth_from(row);
  if (!depth) return depth.failure();
  irrigation.depth = *depth;
  const std::string set = at_or_empty(row, "set");
  if (!set.empty()) {
    auto number = settings::parse_number(set);
    if (!number || *number < 0 || *number > 999 || *number != static_cast<int>(*number)) {
      return Failure{"", "", "set '" + set + "' is no whole number from 0 to 999", ""};
    }
    irrigation.set = static_cast<int>(*number);
  }
  return irrigation;
}

Result<std::optional<bool>> yes_or_no(const Row& row, const char* column) {
  const std::string text = at_or_empty(row, column);
  if (text.empty()) return std::optional<bool>{};
  if (text == "yes") return std::optional(true);
  if (text == "no") return std::optional(false);
  return Failure{"", "", std::string(column) + " '" + text + "' is neither yes nor no", ""};
}

Result<field::Scouting> scouting_from(const settings::Settings& settings, const Row& row) {
  field::Scouting note;
  auto name = field_from(settings, row);
  if (!name) return name.failure();
  note.field = *name;
  auto date = settings::parse_day(at_or_empty(row, "date"));
  if (!date) return Failure{"", "", "date: " + date.failure().why, ""};
  note.date = *date;
  const std::string stage = at_or_empty(row, "stage");
  if (!stage.empty()) {
    note.stage = field::stage_from_word(stage);
    if (!note.stage) return Failure{"", "", "stage '" + stage + "' is unknown", ""};
  }
  auto began = yes_or_no(row, "began");
  if (!began) return began.failure();
  note.began = began->value_or(false) || note.stage == field::stage::first_anthers;
  auto disease = yes_or_no(row, "disease");
  if (!disease) return disease.failure();
  note.disease = *disease;
  const std::string seeds = at_or_empty(row, "seed_set");
  if (!seeds.empty()) {
    const auto slash = seeds.find('/');
    const auto held = settings::parse_number(seeds.substr(0, slash));
    const auto looked =
        slash == std::string::npos ? held : settings::parse_number(seeds.substr(slash + 1));
    const bool fits = slash != std::string::npos && held && looked && *held >= 0 &&
                      *looked >= *held && *looked >= 1 && *looked <= 1000 &&
                      *held == std::floor(*held) && *looked == std::floor(*looked);
    if (!fits) return Failure{"", "", "seed_set '" + seeds + "' is not like 14/20", ""};
    note.seed_set = static_cast<int>(*held);
    note.seed_looked = static_cast<int>(*looked);
  }
  note.note = at_or_empty(row, "note");
  if (!note.stage && !note.disease && !note.seed_set && note.note.empty()) {
    return Failure{"", "", "the note says nothing: no stage, disease, seed_set or note", ""};
  }
  return note;
}

using TakeRow = std::function<Outcome(const Row&)>;

bool has(const Names& names, const std::string& name) {
  return std::find(names.begin(), names.end(), name) != names.end();
}

/// What is wrong with a header: a needed column that is missing, a column that nobody reads.
Outcome fits(const Names& header, const Columns& columns) {
  std::string all, why;
  for (const Names* names : {&columns.needed, &columns.others}) {
    for (const std::string& name : *names) all += (all.empty() ? "" : ", ") + name;
  }
  for (const std::string& name : columns.needed) {
    if (!has(header, name)) why += (why.empty() ? "" : ", ") + ("column " + name + " is missing");
  }
  for (const std::string& name : header) {
    if (has(columns.needed, name) || has(columns.others, name)) continue;
    why += (why.empty() ? "" : ", ") + ("column '" + station::visible(name) + "' is unknown");
  }
  if (why.empty()) return Done{};
  return Failure{"", "", "the first line: " + why + "; the columns are " + all, ""};
}

bool has_control_character(const std::string& line) {
  return std::any_of(line.begin(), line.end(), [](char c) {
    const auto code = static_cast<unsigned char>(c);
    return (code < 0x20 && c != '\t' && c != '\r') || code == 0x7f;
  });
}

/// Lines of an open diary file.
void read_lines(std::istream& file, const std::string& path, DiaryFiles& result,
                const Columns& columns, const TakeRow& take) {
  std::string line;
  Names header;
  for (std::int64_t number = 1; std::getline(file, line); ++number) {
    if (number == 1 && line.rfind("\xEF\xBB\xBF", 0) == 0) line.erase(0, 3);
    if (file.eof()) {  // somebody may be writing it just now
      result.troubles.push_back(Failure{"read the diary", path + ":" + std::to_string(number),
                                        "the last line has no line end",
                                        "it waits until it has one; the rest is used"});
      return;
    }
    if (station::trim(line).empty()) continue;
    const auto refuse = [&](const std::string& why) {
      result.refused.push_back({path, number, why, station::visible(line)});
    };
    const Names cells = cells_of(line);
    if (header.empty()) {
      header = cells;
      if (const Outcome outcome = fits(header, columns); !outcome)
        return refuse(outcome.failure().why);
      continue;
    }
    if (has_control_character(line)) {
      refuse("a control character is in it");
      continue;
    }
    if (cells.size() > header.size()) {
      refuse("it has " + std::to_string(cells.size()) + " cells, the first line " +
             std::to_string(header.size()) + "; a text with a comma needs quotes");
      continue;
    }
    Row row;
    for (std::size_t i = 0; i < cells.size(); ++i) row[header[i]] = cells[i];
    if (const Outcome outcome = take(row); !outcome) refuse(outcome.failure().why);
  }
}

void read_file(const std::string& path, DiaryFiles& result, const Columns& columns,
               const TakeRow& take) {
  struct stat status {};
  if (stat(path.c_str(), &status) != 0) return;  // there need not be one
  // A FIFO must not be opened: that would wait for somebody who writes.
  const bool usable = S_ISREG(status.st_mode) && status.st_size <= largest_diary;
  std::ifstream file;
  if (usable) file.open(path, std::ios::binary);
  if (!usable || !file) {
    result.troubles.push_back(Failure{"read the diary", path,
                                      "it is no readable file of at most 4 MiB",
                                      "the diary is used as it was"});
    return;
  }
  read_lines(file, path, result, columns, take);
}

}  // namespace

Result<Instant> farm_instant(const settings::Settings& settings, CivilTime reading) {
  const auto meaning = settings.calendar.meaning_of(reading);
  if (!meaning.first) {
    return Failure{"", "", "this time does not exist: the clock is put forward over it", ""};
  }
  if (meaning.second) {
    return Failure{"", "",
                   "this time exists twice: the clock is put back over it; give a time "
                   "before or after the change",
                   ""};
  }
  return *meaning.first;
}

DiaryFiles read_diary_files(const settings::Settings& settings) {
  DiaryFiles result;
  if (settings.diary_folder.empty()) return result;
  const Columns irrigation_columns{{"field", "start", "end"},
                                   {"method", "depth", "depth_mm", "depth_in", "set"}};
  const Columns scouting_columns{{"field", "date"},
                                 {"stage", "began", "disease", "seed_set", "note"}};
  read_file(settings.diary_folder + "/irrigation.csv", result, irrigation_columns,
            [&](const Row& row) -> Outcome {
              auto irrigation = irrigation_from(settings, row);
              if (!irrigation) return irrigation.failure();
              result.diary.irrigations.push_back(std::move(*irrigation));
              return Done{};
            });
  read_file(settings.diary_folder + "/scouting.csv", result, scouting_columns,
            [&](const Row& row) -> Outcome {
              auto note = scouting_from(settings, row);
              if (!note) return note.failure();
              result.diary.notes.push_back(std::move(*note));
              return Done{};
            });
  return result;
}

std::string diary_files_version(const settings::Settings& settings) {
  std::ostringstream version;
  for (const char* name : {"/irrigation.csv", "/scouting.csv"}) {
    struct stat status {};
    if (stat((settings.diary_folder + name).c_str(), &status) != 0) continue;
    version << name << status.st_size << '@' << status.st_mtim.tv_sec << '.'
            << status.st_mtim.tv_nsec;
  }
  return version.str();
}

}  // namespace antherd::service
