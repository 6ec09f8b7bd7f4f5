// What the service remembers of its sources between looks, and what becomes of refused rows. Files
// beside the store; no sockets, no threads.
#pragma once

#include <string>
#include <vector>

#include "core/failures/result.hpp"
#include "core/field/diary.hpp"
#include "core/weather/arrivals.hpp"
#include "edge/station/readings.hpp"
#include "edge/store/store.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

/// A bookmark as a note of the store, and back. The key names station and file.
std::pair<std::string, std::string> note_of(const std::string& station,
                                            const station::Bookmark& bookmark);
Result<station::Bookmark> bookmark_of(const std::string& text);
std::string bookmark_prefix(const std::string& station);

/// What the service has seen of a station's arrivals; empty where nothing is kept.
weather::Arrivals stored_arrivals(const store::Store& store, const std::string& station);

/// Appends refused rows to `refused.csv` beside the store: time seen, station, file, line, reason,
/// text (RFC 4180). At 4 MiB the file becomes `refused-older.csv` and a new one begins.
Outcome write_refused(const std::string& folder, const std::string& station, Instant seen,
                      const std::vector<station::Refused>& rows);

/// Entries of the diary folder's irrigation.csv and scouting.csv. What cannot be used is refused
/// with file, line and reason; an unknown field, a time that does not exist or exists twice at a
/// clock change, a depth without unit are refused by name.
struct DiaryFiles {
  field::Diary diary;
  std::vector<station::Refused> refused;
  std::vector<Failure> troubles;
};
DiaryFiles read_diary_files(const settings::Settings& settings);

/// Changes whenever a file of the diary folder does (size and modification time).
std::string diary_files_version(const settings::Settings& settings);

/// A clock reading of farm time as an instant; refuses one that does not exist or exists twice.
Result<Instant> farm_instant(const settings::Settings& settings, CivilTime reading);

}  // namespace antherd::service
