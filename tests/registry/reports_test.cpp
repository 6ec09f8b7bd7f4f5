// Real reports of real stations through settings, drop folder, quality control and hours, against
// a count of the same rows in plain SQL (reports.sql).
#include "registry/reports.hpp"

#include <chrono>
#include <set>

#include "core/weather/hour.hpp"
#include "registry/sql.hpp"
#include "support/catch.hpp"
#include "support/outside.hpp"

using namespace antherd;
using registry::Cell;
using registry::Intake;
using registry::Row;

namespace {

constexpr const char* against = "SQL over the same rows, libncarg-data";

long long seconds(Instant at) {
  static const Seconds moved = std::chrono::sys_days{std::chrono::year{2023} / 3 / 18} -
                               std::chrono::sys_days{std::chrono::year{1995} / 3 / 18};
  return (at.time_since_epoch() - moved).count();
}

template <class Quantity>
Cell cell(const std::optional<Quantity>& value) {
  return value ? Cell(value->value) : Cell(nullptr);
}

void put_raw(registry::Sql& sql) {
  sql.run("create table report (file, station text, time text, temperature text, dew_point text)");
  std::vector<Row> rows;
  for (const auto& report : registry::reports()) {
    rows.push_back({static_cast<long long>(report.file), report.station, report.time,
                    report.temperature, report.dew_point});
  }
  sql.fill("report", rows);
}

void put_ours(registry::Sql& sql, const std::vector<Intake>& intakes) {
  std::vector<Row> readings, hours, flags;
  for (const Intake& intake : intakes) {
    const std::string& name = intake.station.name;
    const auto& samples = intake.look.readings.samples;
    for (const auto& sample : samples) {
      readings.push_back(
          {name, seconds(sample.time), cell(sample.temperature), cell(sample.dew_point)});
    }
    const auto standing = weather::standing(samples);
    if (standing.empty()) continue;
    for (const auto& hour :
         weather::gather(standing, intake.station, hour_of(standing.front().time),
                         hour_of(standing.back().time) + std::chrono::hours{1})) {
      const long long start = seconds(Instant(hour.start)) / 3600;
      hours.push_back({name, start, static_cast<long long>(hour.n), cell(hour.temperature),
                       cell(hour.temperature_min), cell(hour.temperature_max),
                       static_cast<long long>(hour.n_humidity), cell(hour.humidity),
                       cell(hour.humidity_min), cell(hour.humidity_max)});
      for (const auto& flag : hour.flags) {
        flags.push_back({name, start, weather::name_of(flag.element), weather::name_of(flag.reason),
                         weather::name_of(flag.verdict), static_cast<long long>(flag.count)});
      }
    }
  }
  sql.run(
      "create table our_reading (station text, at integer, t real, td real);"
      "create table our_hour as select * from hour where 0;"
      "create table our_flag as select * from flag where 0;");
  sql.fill("our_reading", readings);
  sql.fill("our_hour", hours);
  sql.fill("our_flag", flags);
}

/// Everything once: the raw rows, SQL's count, the intake, our hours.
struct Day {
  registry::Sql sql;
  std::vector<Intake> intakes = registry::take_in();

  Day() {
    put_raw(sql);
    sql.run_file("reports.sql");
    put_ours(sql, intakes);
  }
};

Day& day() {
  static Day the_day;
  return the_day;
}

/// The rows that only one of two queries answers: none, or they are shown.
void check_same(const std::string& ours, const std::string& theirs) {
  registry::Sql& sql = day().sql;
  CHECK(sql.text("select * from (" + ours + " except " + theirs + ")") == "");
  CHECK(sql.text("select * from (" + theirs + " except " + ours + ")") == "");
}

std::string words(long count, const std::string& what) {
  return std::to_string(count) + " " + what;
}

}  // namespace

TEST_CASE("the files hold what is known of them, hostile values and all") {
  registry::Sql& sql = day().sql;
  CHECK(sql.count("select count(*) from report") == 47469);
  CHECK(sql.count("select count(distinct station) from report where station <> ''") == 2094);
  CHECK(sql.text("select cast(temperature as real) as t from report "
                 "where temperature <> '_' and t > 50 order by t") ==
        "51 | \n76 | \n204 | \n322 | \n343 | \n406 | \n");
  CHECK(sql.count("select count(*) from report where temperature <> '_' and dew_point <> '_' "
                  "and cast(dew_point as real) > cast(temperature as real)") == 98);
}

TEST_CASE("the intake reads each station's rows and no other's, missing values missing") {
  Day& d = day();
  std::size_t refused = 0, troubles = 0;
  for (const Intake& intake : d.intakes) {
    refused += intake.look.readings.refused.size();
    troubles += intake.look.troubles.size();
    CHECK_FALSE(intake.look.more);
  }
  CHECK(d.intakes.size() == 2094);
  CHECK(refused == 0);
  CHECK(troubles == 0);
  const std::string rows = " station, at, round(t, 6), round(td, 6), count(*) from ";
  check_same("select" + rows + "our_reading group by 1, 2, 3, 4",
             "select" + rows + "reading group by 1, 2, 3, 4");
  const long ours = d.sql.count("select count(*) from our_reading");
  CHECK(ours == d.sql.count("select count(*) from reading"));
  outside::report(
      "intake of 2,094 stations' reports", against,
      words(ours, "readings, ") +
          words(d.sql.count("select sum(t is null) from our_reading"), "without temperature, ") +
          words(d.sql.count("select sum(td is null) from our_reading"), "without dew point, ") +
          words(d.sql.count("select count(*) from (select 1 from our_reading group by station, at "
                            "having count(distinct coalesce(t, 'x') || coalesce(td, 'x')) > 1)"),
                "times with two different reports: as SQL counts them"));
}

TEST_CASE("rows of a year before 2000 are refused by name, every one") {
  long refused = 0, rows = 0;
  std::set<std::string> reasons;
  for (const Intake& intake : registry::take_in_unmoved()) {
    rows += day().sql.count("select count(*) from report where station = '" + intake.station.name +
                            "'");
    CHECK(intake.look.readings.samples.empty());
    for (const auto& row : intake.look.readings.refused) {
      ++refused;
      reasons.insert(row.reason);
    }
  }
  CHECK(rows > 20);
  CHECK(refused == rows);
  CHECK(reasons == std::set<std::string>{"time: year 1995 is outside 2000 to 2099"});
}

TEST_CASE("a reported place that is none on Earth is refused by name, alone among 2,094") {
  const std::vector<std::string> complaints = registry::complaints_as_reported();
  REQUIRE(complaints.size() == 1);
  CHECK(complaints.front().find("[[station]] WUY, longitude: got the number -790.2") !=
        std::string::npos);
}

TEST_CASE("every verdict of the real reports is SQL's, by station, hour, reason and count") {
  registry::Sql& sql = day().sql;
  check_same("select * from our_flag", "select * from flag");
  const auto counted = [&](const std::string& which) {
    return sql.count("select coalesce(sum(count), 0) from our_flag where " + which);
  };
  // The five that no thermometer reads are named; 51 °C is possible, and its neighbours judge it.
  CHECK(sql.text("select station, element, reason, verdict from our_flag where "
                 "reason = 'out of range' and element = 'temperature' order by station") ==
        "KCGX | temperature | out of range | wrong | \n"
        "KFTY | temperature | out of range | wrong | \n"
        "KGPT | temperature | out of range | wrong | \n"
        "KGSO | temperature | out of range | wrong | \n"
        "KNEW | temperature | out of range | wrong | \n");
  CHECK(counted("reason = 'dew point above temperature'") == 2);
  CHECK(counted("reason = 'spike' and verdict = 'wrong'") > 0);
  CHECK(counted("reason = 'stuck'") > 0);
  outside::report(
      "verdicts on real reports", against,
      words(counted("reason = 'out of range' and element = 'temperature'"),
            "temperatures out of range, ") +
          words(counted("reason = 'out of range' and element = 'dew point'"),
                "dew points out of range, ") +
          words(counted("reason = 'dew point above temperature'"), "above the air, ") +
          words(counted("reason = 'spike' and verdict = 'wrong'"), "wrong and ") +
          words(counted("reason = 'spike' and verdict = 'suspect'"), "suspect spikes, ") +
          words(counted("reason = 'unconfirmed'"), "unconfirmed, ") +
          words(counted("reason = 'stuck'"), "stuck: the same in SQL"));
}

TEST_CASE("the hours of the real reports are SQL's: counts, means and extremes") {
  registry::Sql& sql = day().sql;
  check_same("select station, hour, n, n_humidity from our_hour",
             "select station, hour, n, n_humidity from hour");
  outside::Largest temperature, humidity;
  for (const Row& row :
       sql.rows("select o.mean, h.mean, o.least, h.least, o.most, h.most from our_hour o "
                "join hour h on h.station = o.station and h.hour = o.hour where h.n > 0")) {
    for (std::size_t i = 0; i < row.size(); i += 2) {
      temperature.see(std::get<double>(row[i]), std::get<double>(row[i + 1]));
    }
  }
  for (const Row& row : sql.rows(
           "select o.mean_humidity, h.mean_humidity, o.least_humidity, h.least_humidity, "
           "o.most_humidity, h.most_humidity from our_hour o "
           "join hour h on h.station = o.station and h.hour = o.hour where h.n_humidity > 0")) {
    for (std::size_t i = 0; i < row.size(); i += 2) {
      humidity.see(std::get<double>(row[i]), std::get<double>(row[i + 1]));
    }
  }
  CHECK(temperature.compared() == 3 * sql.count("select count(*) from hour where n > 0"));
  // Means are rounded to a millionth; a wrong neighbour in a mean would move it by tenths.
  CHECK(temperature.value() <= 1e-6);
  CHECK(humidity.value() <= 1e-6);
  outside::report("hours of real reports: temperature", against, temperature, 1e-6, "°C");
  outside::report("hours of real reports: humidity", against, humidity, 1e-6, "%");
  const long several = sql.count("select sum(n > 1) from our_hour");
  CHECK(several == sql.count("select sum(n > 1) from hour"));
  CHECK(several > 600);
  outside::report("hours of real reports: counts", against,
                  words(sql.count("select count(*) from our_hour"), "station-hours, ") +
                      words(sql.count("select sum(n > 0) from our_hour"), "with a temperature, ") +
                      words(several, "of several reports: the same in SQL"));
}
