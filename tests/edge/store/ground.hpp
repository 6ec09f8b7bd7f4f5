// What the store's tests stand on: a folder that goes away, a raw connection of SQLite's own, and
// small makers of facts. Nothing here uses the store's inside.
#pragma once

#include <sqlite3.h>
#include <unistd.h>

#include <algorithm>
#include <cstdio>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <random>
#include <stdexcept>
#include <string>
#include <vector>

#include "edge/store/store.hpp"
#include "support/catch.hpp"

namespace ground {

namespace fs = std::filesystem;
using namespace antherd;
using store::Store;

/// A folder of its own under the system's place for such, removed at the end.
class Folder {
 public:
  Folder() {
    std::string pattern = (fs::temp_directory_path() / "antherd-store-XXXXXX").string();
    if (mkdtemp(pattern.data()) == nullptr) throw std::runtime_error("no temporary folder");
    path_ = pattern;
  }
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;
  ~Folder() {
    std::error_code error;
    fs::remove_all(path_, error);
  }
  const std::string& path() const { return path_; }
  std::string database() const { return path_ + "/antherd.db"; }
  bool has(const std::string& name) const { return fs::exists(path_ + "/" + name); }
  std::vector<std::string> names() const {
    std::vector<std::string> found;
    for (const auto& entry : fs::directory_iterator(path_)) {
      found.push_back(entry.path().filename().string());
    }
    std::sort(found.begin(), found.end());
    return found;
  }

 private:
  std::string path_;
};

inline Instant instant(std::int64_t seconds) { return Instant(Seconds(seconds)); }
/// 2026-07-14T00:00:00Z (date -u -d 2026-07-14 +%s).
constexpr std::int64_t july_14 = 1783987200;
inline HourStart hour(int n) { return hour_of(instant(july_14)) + std::chrono::hours(n); }

inline Store::Options writer(const Folder& folder) {
  Store::Options options;
  options.folder = folder.path();
  options.patience = std::chrono::milliseconds(2000);
  return options;
}
inline Store::Options service(const Folder& folder) {
  Store::Options options = writer(folder);
  options.service = true;
  options.now = instant(july_14 + 6 * 3600);
  return options;
}
inline Store::Options reader(const Folder& folder) {
  Store::Options options = writer(folder);
  options.read_only = true;
  return options;
}

/// The value of a Result, or the test ends with the failure's sentence.
template <class Value>
Value must(Result<Value> result) {
  if (!result) FAIL(result.failure().sentence());
  return *std::move(result);
}
inline Store open(const Store::Options& options) { return must(Store::open(options)); }

inline weather::Sample sample(std::int64_t second, std::optional<double> temperature,
                              std::optional<double> humidity = std::nullopt) {
  weather::Sample made;
  made.time = instant(july_14 + second);
  if (temperature) made.temperature = Celsius(*temperature);
  if (humidity) made.humidity = Percent(*humidity);
  return made;
}

inline weather::Hour record(int n, double temperature) {
  weather::Hour made;
  made.start = hour(n);
  made.n = 12;
  made.n_humidity = 11;
  made.coverage = 1.0;
  made.humidity_coverage = 11.0 / 12;
  made.temperature = Celsius(temperature);
  made.temperature_max = Celsius(temperature + 1);
  made.humidity = Percent(41.25);
  made.rain = Millimetre(0);
  return made;
}

inline field::Irrigation irrigation(const std::string& field, std::int64_t second) {
  field::Irrigation made;
  made.field = field;
  made.start = instant(july_14 + second);
  made.end = made.start + one_hour;
  made.depth = Millimetre(12.5);
  return made;
}

inline outbox::Item letter(const std::string& id, const std::string& recipient,
                           std::int64_t second = 0) {
  outbox::Item made;
  made.letter.id = id;
  made.letter.recipient = recipient;
  made.letter.subject = "Heat, Severe: north bench 35.6 °C at 3 pm";
  made.letter.body = "north bench\nline two\n";
  made.letter.kind = "heat";
  made.letter.severity = alerts::Severity::severe;
  made.letter.decided = instant(july_14 + second);
  made.letter.valid_until = made.letter.decided + 72 * one_hour;
  made.letter.still = "It held when decided.";
  made.letter.raise = true;
  made.next_try = made.letter.decided;
  return made;
}

inline alerts::Said said(const std::string& episode, std::int64_t second,
                         alerts::Level level = alerts::Level::severe) {
  alerts::Said made;
  made.episode = episode;
  made.subject = "north bench";
  made.start = instant(july_14);
  made.level = level;
  made.at = instant(july_14 + second);
  made.about = made.at - Seconds(60);
  return made;
}

/// A seed that is printed when the test fails; ANTHERD_SEED sets it.
inline std::uint32_t seed() {
  if (const char* given = std::getenv("ANTHERD_SEED")) {
    return static_cast<std::uint32_t>(std::strtoul(given, nullptr, 10));
  }
  return std::random_device{}();
}

/// SQLite itself on a file, past the store.
class Raw {
 public:
  explicit Raw(const std::string& path) {
    if (sqlite3_open_v2(path.c_str(), &connection_, SQLITE_OPEN_READWRITE, nullptr) != SQLITE_OK) {
      throw std::runtime_error(sqlite3_errmsg(connection_));
    }
  }
  Raw(const Raw&) = delete;
  Raw& operator=(const Raw&) = delete;
  ~Raw() { sqlite3_close_v2(connection_); }
  /// Runs SQL; all rows, one a line, columns between bars.
  std::string run(const std::string& sql) {
    std::string rows;
    char* error = nullptr;
    const auto take = [](void* into, int n, char** values, char**) {
      auto& text = *static_cast<std::string*>(into);
      for (int i = 0; i < n; ++i) {
        text += (i > 0 ? "|" : "") + std::string(values[i] == nullptr ? "NULL" : values[i]);
      }
      text += '\n';
      return 0;
    };
    if (sqlite3_exec(connection_, sql.c_str(), take, &rows, &error) != SQLITE_OK) {
      const std::string why = error == nullptr ? "?" : error;
      sqlite3_free(error);
      throw std::runtime_error(why + " in " + sql);
    }
    return rows;
  }

 private:
  sqlite3* connection_ = nullptr;
};

/// Every fact as text by SQLite's own quote(), in the order of the values: an independent witness
/// of what fingerprint() claims.
inline std::string facts(const std::string& path) {
  Raw raw(path);
  return raw.run(
             "SELECT s.name, time, quote(temperature), quote(humidity), quote(dew_point), "
             "quote(rain), quote(wind), quote(solar), quote(wet_minutes) FROM sample x "
             "JOIN station s ON s.id = x.station ORDER BY 1, 2") +
         "--\n" +
         raw.run(
             "SELECT s.name, time, quote(temperature), quote(humidity), quote(dew_point), "
             "quote(rain), quote(wind), quote(solar), quote(wet_minutes) FROM sample_conflict x "
             "JOIN station s ON s.id = x.station ORDER BY 1, 2, 3, 4, 5, 6, 7, 8, 9") +
         "--\n" +
         raw.run(
             "SELECT s.name, start, n, n_humidity, quote(coverage), quote(temperature), flags "
             "FROM hour x JOIN station s ON s.id = x.station ORDER BY 1, 2") +
         "--\n" +
         raw.run(
             "SELECT field, start, \"end\", method, quote(depth), \"set\" FROM irrigation "
             "ORDER BY 1, 2, 3, 4, 5, 6") +
         "--\n" +
         raw.run(
             "SELECT field, date, stage, began, disease, seed_set, seed_looked, quote(note) "
             "FROM scouting ORDER BY 1, 2, 3, 4, 5, 6, 7, 8");
}

inline std::string bytes_of(const std::string& path) {
  std::ifstream file(path, std::ios::binary);
  return std::string(std::istreambuf_iterator<char>(file), {});
}
inline void put_bytes(const std::string& path, const std::string& bytes) {
  std::ofstream(path, std::ios::binary) << bytes;
}

}  // namespace ground
