// Hour records: one row an hour of a station, written anew when later samples change it.
#include "edge/store/inside.hpp"
#include "edge/store/rows.hpp"

namespace antherd::store {
namespace {

using weather::Hour;

// A row that would not change is not written: a fold from sowing must not wear a card out.
constexpr const char* put_hour = R"sql(
INSERT INTO hour(station, start, n, n_humidity, coverage, humidity_coverage, temperature,
  temperature_max, temperature_min, humidity, humidity_max, humidity_min, rain, rain_for_wetness,
  wind, solar, wet_minutes, whole_degrees, flags)
VALUES(?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)
ON CONFLICT(station, start) DO UPDATE SET n = excluded.n, n_humidity = excluded.n_humidity,
  coverage = excluded.coverage, humidity_coverage = excluded.humidity_coverage,
  temperature = excluded.temperature, temperature_max = excluded.temperature_max,
  temperature_min = excluded.temperature_min, humidity = excluded.humidity,
  humidity_max = excluded.humidity_max, humidity_min = excluded.humidity_min,
  rain = excluded.rain, rain_for_wetness = excluded.rain_for_wetness, wind = excluded.wind,
  solar = excluded.solar, wet_minutes = excluded.wet_minutes,
  whole_degrees = excluded.whole_degrees, flags = excluded.flags
WHERE (n, n_humidity, coverage, humidity_coverage, temperature, temperature_max, temperature_min,
  humidity, humidity_max, humidity_min, rain, rain_for_wetness, wind, solar, wet_minutes,
  whole_degrees, flags)
IS NOT (excluded.n, excluded.n_humidity, excluded.coverage, excluded.humidity_coverage,
  excluded.temperature, excluded.temperature_max, excluded.temperature_min, excluded.humidity,
  excluded.humidity_max, excluded.humidity_min, excluded.rain, excluded.rain_for_wetness,
  excluded.wind, excluded.solar, excluded.wet_minutes, excluded.whole_degrees, excluded.flags)
)sql";

constexpr const char* hours_between = R"sql(
SELECT start, n, n_humidity, coverage, humidity_coverage, temperature, temperature_max,
  temperature_min, humidity, humidity_max, humidity_min, rain, rain_for_wetness, wind, solar,
  wet_minutes, whole_degrees, flags
FROM hour WHERE station = ? AND start >= ? AND start < ? ORDER BY start
)sql";

Hour read_hour(Statement& row) {
  Hour hour;
  hour.start = row.hour();
  hour.n = row.small();
  hour.n_humidity = row.small();
  hour.coverage = row.real();
  hour.humidity_coverage = row.real();
  hour.temperature = row.maybe<Celsius>();
  hour.temperature_max = row.maybe<Celsius>();
  hour.temperature_min = row.maybe<Celsius>();
  hour.humidity = row.maybe<Percent>();
  hour.humidity_max = row.maybe<Percent>();
  hour.humidity_min = row.maybe<Percent>();
  hour.rain = row.maybe<Millimetre>();
  hour.rain_for_wetness = row.maybe<Millimetre>();
  hour.wind = row.maybe<MetrePerSecond>();
  hour.solar = row.maybe<WattPerSquareMetre>();
  hour.wet_minutes = row.maybe<double>();
  hour.whole_degrees = row.integer() != 0;
  if (!row.is_null()) hour.flags = flags_from_text(row.text());
  return hour;
}

}  // namespace

void Store::Inside::put(const std::string& station, const std::vector<weather::Hour>& hours) {
  if (hours.empty()) return;
  const std::int64_t id = station_id(station);
  Statement statement = database->use(put_hour);
  for (const Hour& hour : hours) {
    std::optional<std::string> flags;
    if (!hour.flags.empty()) flags = flags_to_text(hour.flags);
    statement
        .bind(id, hour.start, hour.n, hour.n_humidity, hour.coverage, hour.humidity_coverage,
              hour.temperature, hour.temperature_max, hour.temperature_min, hour.humidity,
              hour.humidity_max, hour.humidity_min, hour.rain, hour.rain_for_wetness, hour.wind,
              hour.solar, hour.wet_minutes, hour.whole_degrees, flags)
        .run();
  }
}

void Store::Inside::remove(const std::string& station, const std::vector<HourStart>& hours) {
  const auto id = known_station(station);
  if (!id) return;
  Statement statement = database->use("DELETE FROM hour WHERE station = ? AND start = ?");
  for (const HourStart hour : hours) statement.bind(*id, hour).run();
}

Result<std::vector<weather::Hour>> Store::hours(const std::string& station, HourStart from,
                                                HourStart to) const {
  return inside_->read("read hours", [&] {
    std::vector<Hour> found;
    const auto id = inside_->known_station(station);
    if (!id) return found;
    Statement row = inside_->database->use(hours_between);
    row.bind(*id, from, to);
    while (row.step()) found.push_back(read_hour(row));
    return found;
  });
}

}  // namespace antherd::store
