// See intake.hpp.
#include "run/service/intake.hpp"

#include <sys/stat.h>

#include <cstdio>
#include <fstream>
#include <nlohmann/json.hpp>

namespace antherd::service {
namespace {

using nlohmann::json;

constexpr off_t refused_file_bound = 4 * 1024 * 1024;

/// RFC 4180: quoted when it holds a comma, a quote or a line end.
std::string cell(const std::string& text) {
  if (text.find_first_of(",\"\r\n") == std::string::npos) return text;
  std::string quoted = "\"";
  for (const char c : text) {
    if (c == '"') quoted += '"';
    quoted += c;
  }
  return quoted + "\"";
}

std::string time_text(Instant at) {
  const auto day = std::chrono::floor<std::chrono::days>(at);
  const std::chrono::year_month_day date{day};
  const std::chrono::hh_mm_ss time{at - day};
  char text[80];
  std::snprintf(text, sizeof text, "%04d-%02u-%02uT%02ld:%02ld:%02ldZ",
                static_cast<int>(date.year()), static_cast<unsigned>(date.month()),
                static_cast<unsigned>(date.day()), static_cast<long>(time.hours().count()),
                static_cast<long>(time.minutes().count()),
                static_cast<long>(time.seconds().count()));
  return text;
}

}  // namespace

std::string bookmark_prefix(const std::string& station) { return "bookmark/" + station + "/"; }

std::pair<std::string, std::string> note_of(const std::string& station,
                                            const station::Bookmark& bookmark) {
  json text = {{"path", bookmark.path},           {"device", bookmark.device},
               {"inode", bookmark.inode},         {"bytes_read", bookmark.bytes_read},
               {"head_hash", bookmark.head_hash}, {"lines_read", bookmark.lines_read},
               {"header", bookmark.header},       {"modified", bookmark.modified}};
  if (bookmark.last_local_first_pass) {
    text["first_pass"] = bookmark.last_local_first_pass->time_since_epoch().count();
  }
  return {bookmark_prefix(station) + bookmark.path,
          text.dump(-1, ' ', false, json::error_handler_t::replace)};
}

Result<station::Bookmark> bookmark_of(const std::string& text) {
  try {
    const json note = json::parse(text);
    station::Bookmark bookmark;
    bookmark.path = note.at("path").get<std::string>();
    bookmark.device = note.at("device").get<std::uint64_t>();
    bookmark.inode = note.at("inode").get<std::uint64_t>();
    bookmark.bytes_read = note.at("bytes_read").get<std::int64_t>();
    bookmark.head_hash = note.at("head_hash").get<std::string>();
    bookmark.lines_read = note.at("lines_read").get<std::int64_t>();
    bookmark.header = note.at("header").get<std::string>();
    bookmark.modified = note.at("modified").get<std::int64_t>();
    if (note.contains("first_pass")) {
      bookmark.last_local_first_pass = Instant{Seconds{note.at("first_pass").get<long long>()}};
    }
    return bookmark;
  } catch (const json::exception& error) {
    return Failure{"read a file's bookmark", text.substr(0, 80), error.what(),
                   "the file is read again from its start, which changes nothing"};
  }
}

Outcome write_refused(const std::string& folder, const std::string& station, Instant seen,
                      const std::vector<station::Refused>& rows) {
  if (rows.empty()) return Done{};
  const std::string path = folder + "/refused.csv";
  struct stat status {};
  const bool there = stat(path.c_str(), &status) == 0;
  if (there && status.st_size > refused_file_bound) {
    std::rename(path.c_str(), (folder + "/refused-older.csv").c_str());
  }
  std::ofstream file(path, std::ios::app | std::ios::binary);
  if (!there || status.st_size > refused_file_bound) {
    file << "seen,station,file,line,reason,text\r\n";
  }
  for (const station::Refused& row : rows) {
    file << time_text(seen) << ',' << cell(station) << ',' << cell(row.file) << ',' << row.line
         << ',' << cell(row.reason) << ',' << cell(row.text) << "\r\n";
  }
  file.flush();
  if (!file) {
    return Failure{"write refused rows", path, "the disk or the folder does not take it",
                   "the good rows are used all the same"};
  }
  return Done{};
}

}  // namespace antherd::service
