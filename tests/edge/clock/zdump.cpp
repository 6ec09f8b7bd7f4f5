// Every change of ten zones in 2000…2037 against the system's zdump, which reads the same zone
// files by its own code: offsets on both sides, civil times, and the length of the days around.
#include <cstdio>
#include <cstring>
#include <map>
#include <string>
#include <vector>

#include "edge/clock/clock.hpp"
#include "support/catch.hpp"
#include "support/outside.hpp"

using namespace antherd;
using namespace std::chrono;

namespace {

/// One line of zdump: what the clock showed at an instant.
struct Shown {
  Instant at;
  CivilTime civil;
  Seconds offset;
};

year_month_day date_of(const char* month_name, unsigned day_number, int year_number) {
  static const std::string names = "JanFebMarAprMayJunJulAugSepOctNovDec";
  const auto place = names.find(month_name);
  return year{year_number} / month{static_cast<unsigned>(place / 3 + 1)} / day{day_number};
}

/// "Zone  Sun Mar  8 09:59:59 2026 UT = Sun Mar  8 01:59:59 2026 PST isdst=0 gmtoff=-28800".
std::vector<Shown> shown_by_zdump(const std::string& zone) {
  FILE* pipe = ::popen(("LC_ALL=C zdump -v -c 2000,2038 " + zone + " 2>/dev/null").c_str(), "r");
  REQUIRE(pipe != nullptr);
  std::vector<Shown> all;
  char line[400];
  while (std::fgets(line, sizeof line, pipe) != nullptr) {
    char month_utc[4], month_civil[4];
    unsigned d[2];
    int h[2], m[2], s[2], y[2], offset = 0;
    const int read = std::sscanf(
        line, "%*s %*s %3s %u %d:%d:%d %d UT%*[C ]= %*s %3s %u %d:%d:%d %d %*s isdst=%*d gmtoff=%d",
        month_utc, &d[0], &h[0], &m[0], &s[0], &y[0], month_civil, &d[1], &h[1], &m[1], &s[1],
        &y[1], &offset);
    if (read != 13) continue;  // the ends of time
    all.push_back(
        {sys_days{date_of(month_utc, d[0], y[0])} + hours{h[0]} + minutes{m[0]} + seconds{s[0]},
         local_days{date_of(month_civil, d[1], y[1])} + hours{h[1]} + minutes{m[1]} + seconds{s[1]},
         Seconds{offset}});
  }
  ::pclose(pipe);
  return all;
}

/// How many seconds longer or shorter than 24 h the days around a change are, by the clock's
/// readings just before and at it. A day begins when its date is first shown.
std::map<CivilDay, Seconds> uneven_days(const Shown& before, const Shown& after) {
  const CivilTime would_be = before.civil + Seconds{1};
  const CivilDay left = floor<days>(before.civil), reached = floor<days>(after.civil);
  const Seconds ahead = after.civil - would_be;
  if (reached > left) return {{reached, -(after.civil - CivilTime(reached))}};
  return {{left, -ahead}};
}

Seconds length_of(const Calendar& zone, CivilDay day) {
  return zone.start_of(day + days{1}) - zone.start_of(day);
}

const char* const zones[] = {"America/Los_Angeles", "Europe/Madrid",    "Australia/Lord_Howe",
                             "America/Santiago",    "America/St_Johns", "America/Havana",
                             "Africa/Casablanca",   "Asia/Tehran",      "Pacific/Apia",
                             "Asia/Kathmandu",      "Asia/Kolkata"};

}  // namespace

TEST_CASE("every change of eleven zones agrees with zdump") {
  if (shown_by_zdump("Europe/Madrid").empty()) {
    WARN("skipped: no zdump here that prints what it should");
    return;
  }
  outside::Largest offsets, civil, lengths, without_change;
  for (const char* name : zones) {
    INFO(name);
    const Result<Calendar> zone = clock::calendar_of(name);
    REQUIRE(zone);
    const auto all = shown_by_zdump(name);
    CHECK(all.size() % 2 == 0);
    for (std::size_t i = 0; i + 1 < all.size(); i += 2) {
      for (const Shown& shown : {all[i], all[i + 1]}) {
        offsets.see(static_cast<double>(zone->offset_at(shown.at).count()),
                    static_cast<double>(shown.offset.count()));
        civil.see(static_cast<double>(zone->civil(shown.at).time_since_epoch().count()),
                  static_cast<double>(shown.civil.time_since_epoch().count()));
      }
      const auto uneven = uneven_days(all[i], all[i + 1]);
      const CivilDay around = floor<days>(all[i].civil);
      for (CivilDay day = around - days{2}; day <= around + days{3}; day += days{1}) {
        const auto found = uneven.find(day);
        const Seconds expected =
            24 * one_hour + (found == uneven.end() ? Seconds{0} : found->second);
        const Seconds ours = length_of(*zone, day);
        if (ours == Seconds{0}) continue;  // a day that was left out has no length to compare
        lengths.see(static_cast<double>(ours.count()), static_cast<double>(expected.count()));
        without_change.see(86400, static_cast<double>(expected.count()));
      }
    }
  }
  CHECK(offsets.compared() > 900);
  CHECK(offsets.value() == 0);
  CHECK(civil.value() == 0);
  CHECK(lengths.value() == 0);
  CHECK(without_change.value() > 0);  // days of 24 h throughout would be refused
  outside::report("offsets around every change; 11 zones; 2000-2037", "zdump", offsets, 0, "s");
  outside::report("civil time around every change", "zdump", civil, 0, "s");
  outside::report("length of the days around every change", "zdump", lengths, 0, "s");
}
