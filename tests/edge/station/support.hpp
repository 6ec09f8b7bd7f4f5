// What the tests of this room share: instants, a zone with its two clock changes, forms, a folder
// of their own that goes away again.
#pragma once

#include <unistd.h>

#include <filesystem>
#include <fstream>
#include <string>

#include "edge/station/readings.hpp"
#include "support/catch.hpp"

namespace antherd::station {

inline Instant utc(int year, unsigned month, unsigned day, int hour = 0, int minute = 0,
                   int second = 0) {
  return Instant{std::chrono::sys_days{std::chrono::year{year} / static_cast<int>(month) /
                                       static_cast<int>(day)}} +
         Seconds{hour * 3600 + minute * 60 + second};
}

/// America/New_York in 2013: −5 h; −4 h from 10 March 07:00, −5 h from 3 November 06:00 UTC
/// (IANA tz database, file northamerica, rule US from 2007).
inline Calendar new_york() {
  return Calendar("America/New_York", {{utc(2012, 11, 4, 6), Seconds{-5 * 3600}},
                                       {utc(2013, 3, 10, 7), Seconds{-4 * 3600}},
                                       {utc(2013, 11, 3, 6), Seconds{-5 * 3600}}});
}

/// time,temp,rh in UTC.
inline RecordForm plain_form() {
  RecordForm form;
  form.time.at = {"time"};
  form.time.form = "%Y-%m-%d %H:%M";
  form.temperature = ValueForm{"temp", "degC"};
  form.humidity = ValueForm{"rh", "%"};
  return form;
}

/// The same in New York's local time.
inline RecordForm local_form() {
  RecordForm form = plain_form();
  form.time.zone = new_york();
  return form;
}

constexpr const char* some_rows =
    "time,temp,rh\n"
    "2026-06-01 10:00,21.5,40\n"
    "2026-06-01 10:05,21.7,39\n"
    "2026-06-01 10:10,21.9,38.5\n";

inline Readings read_all(const std::string& text, const RecordForm& form,
                         std::optional<Instant> now = std::nullopt) {
  const Result<Readings> readings = read_csv(text, "bench.csv", form, now);
  INFO((readings ? "" : readings.failure().sentence()));
  REQUIRE(readings);
  return *readings;
}

inline std::string failure_of(const Result<Readings>& readings) {
  return readings ? "" : readings.failure().sentence();
}

/// Whether a sentence names all of it.
inline bool says(const std::string& text, std::initializer_list<const char*> parts) {
  UNSCOPED_INFO(text);
  for (const char* part : parts) {
    if (text.find(part) == std::string::npos) return false;
  }
  return true;
}

/// A folder below the system's temporary one.
class Folder {
 public:
  Folder() {
    std::string name = (std::filesystem::temp_directory_path() / "antherd-station-XXXXXX").string();
    if (mkdtemp(name.data())) path_ = name;
  }
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;
  ~Folder() {
    std::error_code ignored;
    std::filesystem::remove_all(path_, ignored);
  }
  std::string path() const { return path_; }
  std::string operator/(const std::string& name) const { return path_ + "/" + name; }
  void write(const std::string& name, const std::string& text) const {
    std::ofstream(*this / name, std::ios::binary | std::ios::trunc) << text;
  }
  void append(const std::string& name, const std::string& text) const {
    std::ofstream(*this / name, std::ios::binary | std::ios::app) << text;
  }

 private:
  std::string path_;
};

}  // namespace antherd::station
