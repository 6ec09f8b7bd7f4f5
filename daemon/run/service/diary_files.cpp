// The diary folder's irrigation.csv and scouting.csv; see intake.hpp.
#include <sys/stat.h>

#include <algorithm>
#include <fstream>
#include <functional>
#include <map>
#include <sstream>

#include "edge/station/text.hpp"
#include "run/service/intake.hpp"
#include "run/settings/quantities.hpp"

namespace antherd::service {
namespace {

constexpr std::streamsize largest_diary = 4 * 1024 * 1024;  // a season has a few hundred lines

using Row = std::map<std::string, std::string>;  // by column name

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
  auto reading = settings::parse_civil_time(at_or_empty(row, column));
  if (!reading) return Failure{"", "", std::string(column) + ": " + reading.failure().why, ""};
  return farm_instant(settings, *reading);
}

Result<std::string> field_from(const settings::Settings& settings, const Row& row) {
  const auto field = settings.field_by_beginning(at_or_empty(row, "field"));
  if (!field) return field.failure();
  return (*field)->field.name;
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
                      *looked >= *held && *looked >= 1 && *looked <= 1000;
    if (!fits) return Failure{"", "", "seed_set '" + seeds + "' is not like 14/20", ""};
    note.seed_set = static_cast<int>(*held);
    note.seed_looked = static_cast<int>(*looked);
  }
  note.note = at_or_empty(row, "note");
  return note;
}

using TakeRow = std::function<Outcome(const Row&)>;

void read_file(const std::string& path, DiaryFiles& result, const TakeRow& take) {
  struct stat status {};
  if (stat(path.c_str(), &status) != 0) return;  // there need not be one
  std::ifstream file(path, std::ios::binary);
  if (!file || !S_ISREG(status.st_mode) || status.st_size > largest_diary) {
    result.troubles.push_back(Failure{"read the diary", path,
                                      "it is no readable file of at most 4 MiB",
                                      "the diary is used as it was"});
    return;
  }
  std::string line;
  std::vector<std::string> header;
  for (std::int64_t number = 1; std::getline(file, line); ++number) {
    if (number == 1 && line.rfind("\xEF\xBB\xBF", 0) == 0) line.erase(0, 3);
    if (file.eof()) break;  // a half line waits for its end
    if (station::trim(line).empty()) continue;
    const auto cells = cells_of(line);
    if (header.empty()) {
      header = cells;
      continue;
    }
    Row row;
    for (std::size_t i = 0; i < header.size() && i < cells.size(); ++i) row[header[i]] = cells[i];
    if (const Outcome outcome = take(row); !outcome) {
      result.refused.push_back({path, number, outcome.failure().why, station::visible(line)});
    }
  }
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
  read_file(settings.diary_folder + "/irrigation.csv", result, [&](const Row& row) -> Outcome {
    auto irrigation = irrigation_from(settings, row);
    if (!irrigation) return irrigation.failure();
    result.diary.irrigations.push_back(std::move(*irrigation));
    return Done{};
  });
  read_file(settings.diary_folder + "/scouting.csv", result, [&](const Row& row) -> Outcome {
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
