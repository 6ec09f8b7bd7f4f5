// A hash over the facts. Rows are walked in the order of their values, never of their ids, so that
// it tells whether two stores hold the same facts and nothing of how these came.
#include <array>
#include <bit>
#include <cstdio>

#include "edge/store/inside.hpp"

namespace antherd::store {
namespace {

/// 128 bits in two lanes: each word is mixed by the finalizer of SplitMix64 (Steele, Lea and Flood
/// 2014, from memory). Against accident, not against malice.
class Hash {
 public:
  void add(std::uint64_t word) {
    first_ = mix(first_ ^ word) + 0x9E3779B97F4A7C15U;
    second_ = mix(second_ + std::rotl(word, 29)) ^ 0xC2B2AE3D27D4EB4FU;
  }
  void add(std::string_view text) {
    add(text.size());
    for (std::size_t at = 0; at < text.size(); at += 8) {
      std::uint64_t word = 0;
      for (const char letter : text.substr(at, 8)) {
        word = (word << 8) | static_cast<unsigned char>(letter);
      }
      add(word);
    }
  }
  std::string digits() const {
    std::array<char, 33> text{};
    std::snprintf(text.data(), text.size(), "%016llx%016llx",
                  static_cast<unsigned long long>(first_),
                  static_cast<unsigned long long>(second_));
    return text.data();
  }

 private:
  static std::uint64_t mix(std::uint64_t value) {
    value = (value ^ (value >> 30)) * 0xBF58476D1CE4E5B9U;
    value = (value ^ (value >> 27)) * 0x94D049BB133111EBU;
    return value ^ (value >> 31);
  }
  std::uint64_t first_ = 0, second_ = 0;
};

/// One row: each column with its type before it, so that NULL, 0 and "" differ.
void add_row(Hash& hash, Statement& statement) {
  sqlite3_stmt* row = statement.raw();
  const int columns = sqlite3_column_count(row);
  for (int column = 0; column < columns; ++column) {
    const int type = sqlite3_column_type(row, column);
    hash.add(static_cast<std::uint64_t>(type));
    if (type == SQLITE_INTEGER) {
      hash.add(static_cast<std::uint64_t>(sqlite3_column_int64(row, column)));
    } else if (type == SQLITE_FLOAT) {
      hash.add(std::bit_cast<std::uint64_t>(sqlite3_column_double(row, column)));
    } else if (type != SQLITE_NULL) {
      const void* bytes = sqlite3_column_blob(row, column);
      const int size = sqlite3_column_bytes(row, column);
      hash.add(std::string_view(static_cast<const char*>(bytes), static_cast<std::size_t>(size)));
    }
  }
}

constexpr std::array<std::pair<const char*, const char*>, 3> by_station{
    {{"sample",
      "SELECT time, temperature, humidity, dew_point, rain, wind, solar, wet_minutes "
      "FROM sample WHERE station = ? ORDER BY time"},
     {"sample_conflict",
      "SELECT time, temperature, humidity, dew_point, rain, wind, solar, wet_minutes "
      "FROM sample_conflict WHERE station = ? ORDER BY 1, 2, 3, 4, 5, 6, 7, 8"},
     {"hour",
      "SELECT start, n, n_humidity, coverage, humidity_coverage, temperature, temperature_max, "
      "temperature_min, humidity, humidity_max, humidity_min, rain, rain_for_wetness, wind, solar, "
      "wet_minutes, whole_degrees, flags FROM hour WHERE station = ? ORDER BY start"}}};
constexpr std::array<std::pair<const char*, const char*>, 2> of_the_diary{
    {{"irrigation",
      "SELECT field, start, \"end\", method, depth, \"set\" FROM irrigation "
      "ORDER BY 1, 2, 3, 4, 5, 6"},
     {"scouting",
      "SELECT field, date, stage, began, disease, seed_set, seed_looked, note FROM scouting "
      "ORDER BY 1, 2, 3, 4, 5, 6, 7, 8"}}};

}  // namespace

Result<std::string> Store::fingerprint() const {
  return inside_->read("take the fingerprint of the facts", [&] {
    Database& database = *inside_->database;
    Hash hash;
    // One look at all tables, though another process may write meanwhile.
    database.use("BEGIN").run();
    // A station that holds no fact is none.
    Statement station = database.use(
        "SELECT id, name FROM station WHERE EXISTS(SELECT 1 FROM sample WHERE station = "
        "station.id) OR "
        "EXISTS(SELECT 1 FROM sample_conflict WHERE station = station.id) OR "
        "EXISTS(SELECT 1 FROM hour WHERE station = station.id) "
        "ORDER BY name");
    while (station.step()) {
      const std::int64_t id = station.integer();
      hash.add(station.text());
      for (const auto& [part, sql] : by_station) {
        Statement rows = database.use(sql);
        rows.bind(id);
        hash.add(std::string_view(part));
        while (rows.step()) add_row(hash, rows);
      }
    }
    for (const auto& [part, sql] : of_the_diary) {
      hash.add(std::string_view(part));
      Statement rows = database.use(sql);
      while (rows.step()) add_row(hash, rows);
    }
    station.reset();
    database.use("COMMIT").run();
    return hash.digits();
  });
}

}  // namespace antherd::store
