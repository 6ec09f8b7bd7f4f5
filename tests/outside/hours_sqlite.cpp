// Hourly means, sums, extremes and counts against SQLite's own arithmetic: the same random samples
// lie in a table in memory and are grouped by the hour there.
#include <sqlite3.h>

#include <map>
#include <random>
#include <string>

#include "core/weather/hour.hpp"
#include "support/catch.hpp"
#include "support/outside.hpp"

using namespace antherd;
using namespace antherd::weather;
using std::chrono::hours;

namespace {

constexpr HourStart first_hour{hours{490000}};
constexpr int days_long = 40;

/// Weather without a jump that quality control would take for a spike; holes in time and in values.
std::vector<Sample> samples_of(std::uint32_t seed, Seconds interval) {
  std::mt19937 dice(seed);
  const auto chance = [&] { return std::uniform_real_distribution<>(0, 1)(dice); };
  std::vector<Sample> samples;
  const Instant end = Instant(first_hour) + days_long * 24 * one_hour;
  for (Instant at = first_hour; at < end; at += interval) {
    if (chance() < 0.15) continue;
    const double turn = static_cast<double>(at.time_since_epoch().count() % 86400) / 86400 * 6.2832;
    Sample sample;
    sample.time = at;
    if (chance() < 0.95) sample.temperature = Celsius(17 - 6 * std::cos(turn) + chance());
    if (chance() < 0.95) sample.humidity = Percent(75 + 22 * std::cos(turn) + 4 * chance());
    if (chance() < 0.95) sample.rain = Millimetre(chance() < 0.1 ? 0.2 * chance() : 0);
    if (chance() < 0.95) sample.wind = MetrePerSecond(6 * chance());
    if (chance() < 0.95) sample.solar = WattPerSquareMetre(900 * chance());
    if (!sample.empty()) samples.push_back(sample);
  }
  return samples;
}

/// A database in memory that holds the samples.
class Table {
 public:
  explicit Table(const std::vector<Sample>& samples) {
    REQUIRE(sqlite3_open(":memory:", &database_) == SQLITE_OK);
    run("create table s (at integer, temperature real, humidity real, rain real, wind real, "
        "solar real); begin");
    sqlite3_stmt* insert = prepared("insert into s values (?1, ?2, ?3, ?4, ?5, ?6)");
    for (const Sample& sample : samples) {
      sqlite3_bind_int64(insert, 1, sample.time.time_since_epoch().count());
      bind(insert, 2, sample.temperature);
      bind(insert, 3, sample.humidity);
      bind(insert, 4, sample.rain);
      bind(insert, 5, sample.wind);
      bind(insert, 6, sample.solar);
      REQUIRE(sqlite3_step(insert) == SQLITE_DONE);
      sqlite3_reset(insert);
    }
    sqlite3_finalize(insert);
    run("commit");
  }
  ~Table() { sqlite3_close(database_); }
  Table(const Table&) = delete;

  /// By hour since 1970: what `columns` say, a missing value as nothing.
  std::map<long long, std::vector<std::optional<double>>> by_hour(const std::string& columns,
                                                                  Seconds shift) {
    std::map<long long, std::vector<std::optional<double>>> rows;
    const std::string hour = "(at - " + std::to_string(shift.count()) + ") / 3600";
    sqlite3_stmt* select = prepared("select " + hour + ", " + columns + " from s group by 1");
    while (sqlite3_step(select) == SQLITE_ROW) {
      auto& row = rows[sqlite3_column_int64(select, 0)];
      for (int i = 1; i < sqlite3_column_count(select); ++i) {
        const bool null = sqlite3_column_type(select, i) == SQLITE_NULL;
        row.push_back(null ? std::nullopt : std::optional(sqlite3_column_double(select, i)));
      }
    }
    sqlite3_finalize(select);
    return rows;
  }

 private:
  void run(const char* sql) {
    REQUIRE(sqlite3_exec(database_, sql, nullptr, nullptr, nullptr) == SQLITE_OK);
  }
  sqlite3_stmt* prepared(const std::string& sql) {
    sqlite3_stmt* statement = nullptr;
    INFO(sql);
    REQUIRE(sqlite3_prepare_v2(database_, sql.c_str(), -1, &statement, nullptr) == SQLITE_OK);
    return statement;
  }
  template <class Unit>
  static void bind(sqlite3_stmt* statement, int place, const std::optional<Unit>& value) {
    if (value) {
      sqlite3_bind_double(statement, place, value->value);
    } else {
      sqlite3_bind_null(statement, place);
    }
  }

  sqlite3* database_ = nullptr;
};

const char* const columns =
    "count(temperature), avg(temperature), min(temperature), max(temperature), count(humidity), "
    "avg(min(100.0, humidity)), min(min(100.0, humidity)), max(min(100.0, humidity)), sum(rain), "
    "avg(wind), avg(solar)";

template <class Unit>
std::optional<double> plain(const std::optional<Unit>& value) {
  return value ? std::optional(value->value) : std::nullopt;
}

/// Our hour in the order of `columns`.
std::vector<std::optional<double>> ours(const Hour& hour) {
  return {hour.n,
          plain(hour.temperature),
          plain(hour.temperature_min),
          plain(hour.temperature_max),
          hour.n_humidity,
          plain(hour.humidity),
          plain(hour.humidity_min),
          plain(hour.humidity_max),
          plain(hour.rain),
          plain(hour.wind),
          plain(hour.solar)};
}

/// Largest differences of values, and how many were missing on one side only.
struct Compared {
  outside::Largest values;
  int one_sided = 0;

  void see(const std::vector<Hour>& made,
           const std::map<long long, std::vector<std::optional<double>>>& grouped) {
    for (const Hour& hour : made) {
      const auto row = grouped.find(hour.start.time_since_epoch().count());
      const auto mine = ours(hour);
      for (std::size_t i = 0; i < mine.size(); ++i) {
        const auto theirs = row == grouped.end() ? std::nullopt : row->second[i];
        if (mine[i] && theirs) values.see(*mine[i], *theirs);
        if (mine[i].has_value() != theirs.has_value()) ++one_sided;
      }
    }
  }
};

}  // namespace

TEST_CASE("hours agree with SQLite's own arithmetic") {
  Compared right, wrong;
  outside::Largest coverage;
  std::size_t hour_count = 0;
  std::uint32_t seed = 1;
  for (const int minutes_apart : {1, 5, 10, 15, 30, 60}) {
    for (const Stamp stamp : {Stamp::instant, Stamp::end}) {
      Station station;
      station.interval = Seconds{60 * minutes_apart};
      station.stamp = stamp;
      const auto samples = samples_of(seed++, station.interval);
      const auto made =
          gather(samples, station, first_hour - hours{2}, first_hour + hours{24 * days_long + 2});
      const Seconds shift = stamp == Stamp::end ? station.interval : Seconds{0};
      Table table(samples);
      const auto grouped = table.by_hour(columns, shift);
      CHECK(made.size() == grouped.size());
      hour_count += made.size();
      right.see(made, grouped);
      // an hour that took its end and not its start would be this one
      wrong.see(made, table.by_hour(columns, shift + Seconds{1}));
      const auto shares = table.by_hour(
          "min(1.0, count(temperature) * " + std::to_string(minutes_apart) + " / 60.0)", shift);
      for (const Hour& hour : made) {
        const auto row = shares.find(hour.start.time_since_epoch().count());
        if (row != shares.end()) coverage.see(hour.coverage, *row->second[0]);
      }
    }
  }
  // Means are rounded to six decimals (science §0): half of the last one, and binary noise.
  const double bound = 6e-7;
  CHECK(hour_count > 8000);
  CHECK(right.one_sided == 0);
  CHECK(right.values.value() <= bound);
  CHECK(wrong.values.value() > bound);
  CHECK(coverage.value() <= 1e-12);
  const std::string library = std::string("SQLite ") + sqlite3_libversion();
  outside::report("hourly means; sums; extremes; counts", library, right.values, bound,
                  "of their unit");
  outside::report("coverage of hours", library, coverage, 1e-12, "share");
}
