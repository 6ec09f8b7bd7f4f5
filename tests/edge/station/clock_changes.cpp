// Both clock changes of a year, by local columns: the skipped hour has no rows, the repeated one
// is told apart by the order in the file.
#include "edge/station/support.hpp"

using namespace antherd;
using namespace antherd::station;

namespace {

std::vector<Instant> times_of(const Readings& readings) {
  std::vector<Instant> times;
  for (const weather::Sample& sample : readings.samples) times.push_back(sample.time);
  return times;
}

/// Rows with the given clock readings of one night.
std::string rows(const std::string& day, std::initializer_list<const char*> clock) {
  std::string text = "time,temp,rh\n";
  for (const char* reading : clock) text += day + " " + reading + ",10,80\n";
  return text;
}

std::vector<Instant> autumn(std::initializer_list<const char*> clock) {
  const Readings readings = read_all(rows("2013-11-03", clock), local_form());
  CHECK(readings.refused.empty());
  return times_of(readings);
}

Instant november(int hour, int minute = 0) { return utc(2013, 11, 3, hour, minute); }

}  // namespace

TEST_CASE("hourly rows of the autumn night: the second 01:00 is the second pass") {
  CHECK(autumn({"00:00", "01:00", "01:00", "02:00"}) ==
        std::vector<Instant>{november(4), november(5), november(6), november(7)});
}

TEST_CASE("quarter-hourly rows: the second pass begins where the readings step back") {
  CHECK(autumn({"00:45", "01:00", "01:15", "01:30", "01:45", "01:00", "01:15", "01:30", "01:45",
                "02:00"}) == std::vector<Instant>{november(4, 45), november(5), november(5, 15),
                                                  november(5, 30), november(5, 45), november(6),
                                                  november(6, 15), november(6, 30), november(6, 45),
                                                  november(7)});
}

TEST_CASE("rows missing from either pass") {
  // the first pass ends early, the second begins late
  CHECK(autumn({"01:00", "01:15", "01:15", "01:45", "02:00"}) ==
        std::vector<Instant>{november(5), november(5, 15), november(6, 15), november(6, 45),
                             november(7)});
  // an hourly file with one row of the two: nothing tells which; it is taken for the first pass
  CHECK(autumn({"00:00", "01:00", "02:00"}) ==
        std::vector<Instant>{november(4), november(5), november(7)});
}

TEST_CASE("a file that holds the night twice begins anew") {
  const std::vector<Instant> once{november(4), november(5), november(6), november(7)};
  std::vector<Instant> twice = once;
  twice.insert(twice.end(), once.begin(), once.end());
  CHECK(autumn({"00:00", "01:00", "01:00", "02:00", "00:00", "01:00", "01:00", "02:00"}) == twice);
}

TEST_CASE("the passes of one station are not mixed with another's") {
  RecordForm form = local_form();
  form.where = {{"origin", "EWR"}};
  const Readings readings = read_all(
      "origin,time,temp,rh\n"
      "JFK,2013-11-03 01:00,1,2\n"
      "EWR,2013-11-03 01:00,3,4\n"
      "JFK,2013-11-03 01:00,5,6\n"
      "EWR,2013-11-03 01:00,7,8\n",
      form);
  CHECK(times_of(readings) == std::vector<Instant>{november(5), november(6)});
}

TEST_CASE("a refused row keeps its place in the order") {
  const Readings readings =
      read_all("time,temp,rh\n2013-11-03 01:00,broken,80\n2013-11-03 01:00,10,80\n", local_form());
  CHECK(readings.refused.size() == 1);
  CHECK(times_of(readings) == std::vector<Instant>{november(6)});
}

TEST_CASE("the hour that spring skips does not exist") {
  const Readings readings =
      read_all(rows("2013-03-10", {"01:00", "01:59", "02:00", "02:30", "03:00"}), local_form());
  CHECK(times_of(readings) ==
        std::vector<Instant>{utc(2013, 3, 10, 6), utc(2013, 3, 10, 6, 59), utc(2013, 3, 10, 7)});
  REQUIRE(readings.refused.size() == 2);
  CHECK(
      says(readings.refused[1].reason, {"2013-03-10 02:30", "does not exist", "America/New_York"}));
}

TEST_CASE("rows with their own offset need no order") {
  RecordForm form = local_form();
  form.time.form = "%Y-%m-%d %H:%M%z";
  const Readings readings =
      read_all("time,temp,rh\n2013-11-03 01:30-05:00,1,2\n2013-11-03 01:30-04:00,3,4\n", form);
  CHECK(times_of(readings) == std::vector<Instant>{november(6, 30), november(5, 30)});
}

TEST_CASE("a whole year by local columns is the same as by UTC") {
  // Every hour of 2013 in both clocks, the local one made by the zone's own rules.
  const Calendar zone = new_york();
  std::string text = "local,utc,temp,rh\n";
  const auto shown = [](std::chrono::sys_seconds at) {
    const auto day = std::chrono::floor<std::chrono::days>(at);
    const std::chrono::year_month_day date{day};
    char form[120];
    std::snprintf(form, sizeof form, "%04d-%02u-%02u %02d:00", static_cast<int>(date.year()),
                  static_cast<unsigned>(date.month()), static_cast<unsigned>(date.day()),
                  static_cast<int>((at - day) / Seconds{3600}));
    return std::string(form);
  };
  for (Instant at = utc(2013, 1, 1); at < utc(2014, 1, 1); at += Seconds{3600}) {
    text += shown(at + zone.offset_at(at)) + "," + shown(at) + ",10,80\n";
  }
  RecordForm local = local_form();
  local.time.at = {"local"};
  RecordForm universal = plain_form();
  universal.time.at = {"utc"};
  const std::vector<Instant> by_utc = times_of(read_all(text, universal));
  CHECK(by_utc.size() == 8760);
  CHECK(times_of(read_all(text, local)) == by_utc);
}
