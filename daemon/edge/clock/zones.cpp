// The machine's zone database turned into data. Must not know which zone is the farm's.
#include <date/tz.h>

#include <algorithm>
#include <exception>
#include <fstream>
#include <string_view>
#include <utility>

#include "edge/clock/clock.hpp"
#include "edge/clock/nearest.hpp"
#include "edge/clock/zone_rule.hpp"

namespace antherd::clock {
namespace {

using std::chrono::days;
using std::chrono::sys_days;
constexpr Instant first_moment = sys_days(std::chrono::January / 1 / 1970);
constexpr int last_year = 2106;
constexpr Instant last_moment = sys_days(std::chrono::January / 1 / (last_year + 1));
constexpr std::streamoff longest_rule = 200;  // the last line of a zone file is short

/// Names that the database's folder holds besides zones: copies with leap seconds and the like.
bool is_zone_name(const std::string& name) {
  if (name.empty() || name.starts_with("right/") || name.starts_with("posix/")) return false;
  return name != "posixrules" && name != "localtime" && name != "Factory";
}

std::vector<std::string> zone_names() {
  std::vector<std::string> names;
  for (const auto& zone : date::get_tzdb().zones) {
    if (is_zone_name(zone.name())) names.push_back(zone.name());
  }
  return names;
}

/// The rule that a zone file states for the time after its last listed change (RFC 8536 §3.3,
/// footer): its last line. Empty when there is none.
std::string rule_of(const std::string& name) {
  std::ifstream file("/usr/share/zoneinfo/" + name, std::ios::binary | std::ios::ate);
  const std::streamoff size = file ? static_cast<std::streamoff>(file.tellg()) : 0;
  if (size < 2) return {};
  const std::streamoff length = std::min(size, longest_rule);
  std::string tail(static_cast<std::size_t>(length), '\0');
  file.seekg(size - length);
  if (!file.read(tail.data(), length) || tail.back() != '\n') return {};
  tail.pop_back();
  const std::size_t line = tail.rfind('\n');
  return line == std::string::npos ? std::string() : tail.substr(line + 1);
}

void append(std::vector<Calendar::Change>& changes, Instant from, Seconds offset) {
  if (changes.empty() || changes.back().offset != offset) changes.push_back({from, offset});
}

std::vector<Calendar::Change> changes_of(const date::time_zone& zone) {
  std::vector<Calendar::Change> changes;
  Instant at = first_moment;
  Instant listed = first_moment;  // the last change that the file lists
  while (at < last_moment) {
    const auto info = zone.get_info(at);
    append(changes, at, info.offset);
    listed = at;
    if (info.end <= at) break;
    at = info.end;
  }
  // The library knows the listed changes only (to 2037, or to the last new law): go on by rule.
  const int listed_year = int(std::chrono::year_month_day(std::chrono::floor<days>(listed)).year());
  const auto ruled = changes_by_rule(rule_of(zone.name()), listed_year, last_year);
  if (!ruled) return changes;
  for (const Calendar::Change& change : *ruled) {
    if (change.from > listed) append(changes, change.from, change.offset);
  }
  return changes;
}

/// Names of the same place first, whatever the capitals, the blanks or the continent; else the
/// nearest by letters, of the whole name, then of the place alone.
std::vector<std::string> near_names(const std::string& wanted) {
  if (wanted.size() > longest_word) return {};
  const auto place_of = [](const std::string& name) { return name.substr(name.rfind('/') + 1); };
  const std::vector<std::string> names = zone_names();
  for (const std::size_t apart : {0U, 1U}) {
    std::vector<std::string> near;
    for (const std::string& name : names) {
      if (distance_between(place_of(name), place_of(wanted)) == apart) near.push_back(name);
    }
    if (near.empty() && apart == 0) near = nearest_to(wanted, names, 3);
    if (near.size() > 3) near.resize(3);
    if (!near.empty()) return near;
  }
  return {};
}

std::string joined(const std::vector<std::string>& names) {
  std::string text;
  for (const std::string& name : names) text += (text.empty() ? "" : ", ") + name;
  return text;
}

}  // namespace

Result<Calendar> calendar_of(const std::string& iana_name) {
  Failure failure{"read the time zone", iana_name, "",
                  "use an IANA name such as \"Europe/Madrid\""};
  try {
    if (!is_zone_name(iana_name)) {
      failure.why = "it is not the name of a time zone";
      return failure;
    }
    const auto& zones = date::get_tzdb().zones;
    const auto found = std::find_if(zones.begin(), zones.end(),
                                    [&](const auto& zone) { return zone.name() == iana_name; });
    if (found != zones.end()) return Calendar(iana_name, changes_of(*found));
    failure.why = "this machine's zone database has no such name";
    const std::string near = joined(near_names(iana_name));
    if (!near.empty()) failure.what_next = "did you mean " + near + "?";
  } catch (const std::exception& trouble) {
    failure.why = std::string("this machine's zone database cannot be read: ") + trouble.what();
    failure.what_next = "install the package tzdata";
  }
  return failure;
}

}  // namespace antherd::clock
