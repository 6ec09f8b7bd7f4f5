// How texts become instants: forms, ranges, zones.
#include "edge/station/support.hpp"
#include "edge/station/time_reader.hpp"

using namespace antherd;
using namespace antherd::station;

namespace {

struct Read {
  std::optional<Instant> at;
  std::string reason;
};

Read read_as(const std::string& form, const std::string& text, const Calendar& zone = Calendar(),
             std::optional<Instant> now = std::nullopt) {
  TimeForm time;
  time.at = {"time"};
  time.form = form;
  time.zone = zone;
  Result<TimeReader> reader = TimeReader::make(time, now);
  REQUIRE(reader);
  Read read;
  read.at = reader->read(text, read.reason);
  return read;
}

Instant at(const std::string& form, const std::string& text, const Calendar& zone = Calendar()) {
  const Read read = read_as(form, text, zone);
  INFO(form << " | " << text << " | " << read.reason);
  REQUIRE(read.at);
  return *read.at;
}

std::string refused(const std::string& form, const std::string& text) {
  const Read read = read_as(form, text);
  INFO(form << " | " << text);
  CHECK_FALSE(read.at);
  return read.reason;
}

std::string form_fault(const std::string& form) {
  TimeForm time;
  time.form = form;
  const Result<TimeReader> reader = TimeReader::make(time, std::nullopt);
  return reader ? "" : reader.failure().sentence();
}

}  // namespace

TEST_CASE("forms of the trade are read") {
  const Instant noon = utc(2026, 7, 4, 12, 30);
  CHECK(at("%Y-%m-%d %H:%M", "2026-07-04 12:30") == noon);
  CHECK(at("%F %T", "2026-07-04 12:30:15") == noon + Seconds{15});
  CHECK(at("%F %R", "2026-07-04 12:30") == noon);
  CHECK(at("%d.%m.%y %H:%M", "04.07.26 12:30") == noon);
  CHECK(at("%m/%d/%Y %I:%M %p", "7/4/2026 12:30 PM") == noon);
  CHECK(at("%m/%d/%Y %I:%M %p", "7/4/2026 12:30 am") == noon - Seconds{12 * 3600});
  CHECK(at("%e %b %Y %H:%M", " 4 Jul 2026 12:30") == noon);
  CHECK(at("%d %B %Y %H:%M", "4 JULY 2026 12:30") == noon);
  CHECK(at("%Y %j %H%M", "2026 185 1230") == noon);
  CHECK(at("%Y%m%d%H%M", "202607041230") == noon);
  CHECK(at("%Y %m %d %H", "2026 7 4 9") == utc(2026, 7, 4, 9));
  CHECK(at("100%% %Y-%m-%d %H:%M", "100% 2026-07-04 12:30") == noon);
  CHECK(at("%Y-%m-%d %H:%M:%S", "2026-07-04 12:30:59.999") == noon + Seconds{59});
  CHECK(at("%Y-%m-%d %H:%M:%S %z", "2026-07-04 12:30:00 -0500") == noon + Seconds{5 * 3600});
  CHECK(at("%Y-%m-%d %H:%M%z", "2026-07-04 12:30+05:30") == noon - Seconds{19800});
  CHECK(at("%Y-%m-%d %H:%M", "2026-07-04 12:30Z", new_york()) == noon);
}

TEST_CASE("ISO 8601 and Unix times are read") {
  const Instant noon = utc(2026, 7, 4, 12, 30);
  CHECK(at("iso", "2026-07-04T12:30:00Z", new_york()) == noon);
  CHECK(at("iso", "2026-07-04T12:30Z") == noon);
  CHECK(at("iso", "20260704T123000Z") == noon);
  CHECK(at("iso", "2026-07-04 12:30:00.987+02:00") == noon - Seconds{7200});
  CHECK(at("iso", "2012-01-01 00:00:00 -0500") == utc(2012, 1, 1, 5));
  CHECK(at("iso", "2013-07-04T12:30:00", new_york()) == utc(2013, 7, 4, 16, 30));
  // 2026-07-04 12:30 UTC: 20638 days and 45000 s after 1970 (GNU date)
  CHECK(at("unix", "1783168200") == noon);
  CHECK(at("unix", "1783168200.9") == noon);
  CHECK(at("unix_ms", "1783168200999") == noon);
  CHECK(says(refused("unix", "1783168200000"), {"unix_ms"}));
  for (const char* text : {"", "x", "1783168200x", "-5", "17.8.3", "99999999999999999999"}) {
    CHECK_FALSE(refused("unix", text).empty());
    CHECK_FALSE(refused("unix_ms", text).empty());
  }
  for (const char* text : {"2026-07-04", "2026-07-04T", "2026-07-04T24:00Z", "2026-13-04T10:00Z",
                           "2026-07-04T12:30:00+23:00", "2026-07-04T12:30:00Zx", "noon", ""}) {
    CHECK_FALSE(refused("iso", text).empty());
  }
}

TEST_CASE("impossible times are refused by name") {
  CHECK(refused("%Y-%m-%d %H:%M", "2026-13-01 10:00") == "month 13 is not in 1 to 12");
  CHECK(refused("%Y-%m-%d %H:%M", "2026-06-01 24:00") == "hour 24 is not in 0 to 23");
  CHECK(refused("%Y-%m-%d %H:%M", "2026-06-01 10:60") == "minute 60 is not in 0 to 59");
  CHECK(refused("%Y-%m-%d %H:%M", "2026-00-01 10:00") == "month 0 is not in 1 to 12");
  CHECK(says(refused("%Y-%m-%d %H:%M", "2026-02-29 10:00"), {"no day 29 in month 2 of 2026"}));
  CHECK(at("%Y-%m-%d %H:%M", "2028-02-29 10:00") == utc(2028, 2, 29, 10));
  CHECK(says(refused("%Y %j %H", "2026 366 0"), {"no day 366"}));
  CHECK(says(refused("%Y-%m-%d %H:%M", "1970-01-01 00:00"), {"year 1970"}));
  CHECK(says(refused("%Y-%m-%d %H:%M", "2106-02-07 06:28"), {"year 2106"}));
  CHECK(says(refused("unix", "0"), {"2000 to 2099"}));
  CHECK(says(refused("unix", "4294967295"), {"2000 to 2099"}));
  CHECK(says(refused("%Y-%m-%d %H:%M%z", "2000-01-01 00:00+01:00"), {"2000 to 2099"}));
  CHECK(says(refused("%Y-%m-%d %H:%M", "2026-06-01 10:00 PM"), {"left over"}));
  CHECK(says(refused("%Y-%m-%d %I:%M %p", "2026-06-01 13:00 PM"), {"hour 13"}));
  CHECK(says(refused("%Y-%m-%d %H:%M", "26-06-01 10:00"), {"four digits"}));
}

TEST_CASE("a time ahead of the clock is refused, unless the clock is not set") {
  const Instant now = utc(2026, 6, 1, 12);
  const std::string form = "%Y-%m-%d %H:%M";
  CHECK(read_as(form, "2026-06-01 12:10", Calendar(), now).at);
  const Read ahead = read_as(form, "2026-06-01 15:00", Calendar(), now);
  CHECK_FALSE(ahead.at);
  CHECK(says(ahead.reason, {"3 h ahead of this computer's clock"}));
  CHECK_FALSE(read_as(form, "2026-06-01 12:11", Calendar(), now).at);
  CHECK(read_as(form, "2026-06-01 15:00", Calendar(), utc(1970, 1, 1)).at);
}

TEST_CASE("a form that cannot give an instant is named") {
  CHECK(says(form_fault("%Y-%m-%d"), {"no hour"}));
  CHECK(says(form_fault("%H:%M"), {"no year"}));
  CHECK(says(form_fault("%Y %H"), {"no day"}));
  CHECK(says(form_fault("%Y-%m-%d %I:%M"), {"%p"}));
  CHECK(says(form_fault("%Y-%m-%d %Q"), {"%Q"}));
  CHECK(says(form_fault("%Y-%m-%d %H%"), {"lone %"}));
  CHECK(form_fault("iso").empty());
}
