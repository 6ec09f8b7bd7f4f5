#include "season_settings.hpp"

namespace demo {

std::string irrigation_csv() {
  // Overhead sets on the bench once a week, by day, deep enough for a field that is well watered;
  // then short ones on five evenings in a row before the heat. The creek field has drip lines.
  return R"(field,start,end,method,depth,set
north bench,2026-06-02 06:00,2026-06-02 15:00,overhead,1.0 in,1
north bench,2026-06-10 06:00,2026-06-10 15:00,overhead,1.2 in,1
north bench,2026-06-17 06:00,2026-06-17 15:00,overhead,1.4 in,1
north bench,2026-06-26 06:00,2026-06-26 15:00,overhead,1.6 in,1
north bench,2026-06-30 06:00,2026-06-30 15:00,overhead,1.8 in,1
north bench,2026-07-05 06:00,2026-07-05 15:00,overhead,1.8 in,1
north bench,2026-07-09 20:00,2026-07-09 23:00,overhead,0.4 in,1
north bench,2026-07-10 20:00,2026-07-10 23:00,overhead,0.4 in,1
north bench,2026-07-11 20:00,2026-07-11 23:00,overhead,0.4 in,1
north bench,2026-07-12 20:00,2026-07-12 23:00,overhead,0.4 in,1
north bench,2026-07-13 20:00,2026-07-13 23:00,overhead,0.4 in,1
north bench,2026-07-18 06:00,2026-07-18 15:00,overhead,1.8 in,1
north bench,2026-07-23 06:00,2026-07-23 15:00,overhead,1.8 in,1
north bench,2026-07-28 06:00,2026-07-28 15:00,overhead,1.8 in,1
north bench,2026-08-02 06:00,2026-08-02 15:00,overhead,1.6 in,1
north bench,2026-08-08 06:00,2026-08-08 15:00,overhead,1.4 in,1
creek field,2026-06-05 06:00,2026-06-05 18:00,drip,1.2 in,0
creek field,2026-06-13 06:00,2026-06-13 18:00,drip,1.2 in,0
creek field,2026-06-19 06:00,2026-06-19 18:00,drip,1.2 in,0
creek field,2026-06-27 06:00,2026-06-27 18:00,drip,1.2 in,0
creek field,2026-07-05 06:00,2026-07-05 18:00,drip,1.4 in,0
creek field,2026-07-11 06:00,2026-07-11 18:00,drip,1.4 in,0
creek field,2026-07-17 06:00,2026-07-17 18:00,drip,1.4 in,0
creek field,2026-07-24 06:00,2026-07-24 18:00,drip,1.4 in,0
creek field,2026-07-31 06:00,2026-07-31 18:00,drip,1.4 in,0
creek field,2026-08-07 06:00,2026-08-07 18:00,drip,1.2 in,0
)";
}

std::string scouting_csv() {
  return R"(field,date,stage,began,disease,seed_set,note
north bench,2026-06-14,buds,no,no,,
north bench,2026-07-02,first-anthers,yes,no,,first yellow on the south rows
creek field,2026-07-06,first-anthers,yes,no,,
north bench,2026-07-10,full-flower,no,no,,
north bench,2026-07-30,,no,no,13/20,clusters of the hot week look thin
)";
}

namespace {

const char* const head = R"([farm]
name = "Larkspur Bench"
time_zone = "America/Los_Angeles"
units = "us"
exercise = true                        # an invented season: every letter says so

[store]
folder = "store"

[log]
file = "antherd.log"

[mail]
folder = "outgoing"                    # each letter becomes a file here
from = "antherd@larkspur.example"
weekly = "Mon 06:00"
daily = "19:00"

[[recipient]]
address = "owner@larkspur.example"

[[recipient]]
address = "irrigation@larkspur.example"
fields = ["north bench"]

[diary]
folder = "diary"

[[station]]
name = "bench"
latitude = 46.73
longitude = -117.18
elevation = "780 m"
interval = "5 min"
silent_after = "60 min"
shield = "plain"

[station.drop]
folder = "drop"
files = "bench-*.csv"
time = { column = "time", form = "%Y-%m-%d %H:%M", zone = "farm" }
temperature = { column = "temp_f", unit = "degF" }
humidity = { column = "rh_pct", unit = "%" }
rain = { column = "rain_in", unit = "in", meaning = "since_last" }
wind = { column = "wind_mph", unit = "mph", height = "3 m" }
solar = { column = "solar", unit = "W/m2" }

[[station]]
name = "creek"
latitude = 46.71
longitude = -117.20
elevation = "760 m"
interval = "10 min"
silent_after = "60 min"
arrives_every = "10 min"
shield = "fanned"
)";

const char* const creek_from_files = R"(
[station.drop]
folder = "drop"
files = "creek-*.csv"
time = { column = "utc", form = "%Y-%m-%dT%H:%M:%SZ", zone = "utc" }
temperature = { column = "t_degC", unit = "degC" }
humidity = { column = "rh", unit = "%" }
rain = { column = "rain_mm", unit = "mm", meaning = "since_last" }
wind = { column = "wind_ms", unit = "m/s", height = "2 m" }
)";

const char* const creek_over_http = R"(
[station.http]
url = "http://127.0.0.1:{port}/now.json"
every = "10 min"
form = "json"
time = { at = "/obs/time", form = "unix" }
temperature = { at = "/obs/t", unit = "degC" }
humidity = { at = "/obs/rh", unit = "%" }
wind = { at = "/obs/wind", unit = "m/s", height = "2 m" }
)";

const char* const fields = R"(
[[field]]
name = "north bench"
station = "bench"
elevation = "780 m"
sown = 2026-04-20
crop_type = "coastal"
irrigation = { method = "overhead", sets = 1 }
soil = "silt loam"
soil_water_at_sowing = "full"

[[field]]
name = "creek field"
stations = ["creek", "bench"]
elevation = "760 m"
sown = 2026-04-20
crop_type = "coastal"
irrigation = "drip"
soil = "silt loam"
soil_water_at_sowing = "full"
)";

}  // namespace

std::string replay_settings() {
  return std::string("# The demo's season, replayed from files. Times are those of the farm.\n") +
         head + creek_from_files + fields;
}

std::string live_settings() {
  return std::string(
             "# The demo's hot day, lived through: one station drops a file, one is asked.\n") +
         head + creek_over_http + fields;
}

}  // namespace demo
