// See keys.hpp.
#include "run/settings/keys.hpp"

#include <algorithm>

#include "core/failures/result.hpp"
#include "edge/clock/nearest.hpp"
#include "run/settings/table.hpp"

namespace antherd::settings {
namespace {

using Names = std::vector<std::string>;

std::vector<KnownTable> make_tables() {
  const Names values{"temperature", "humidity", "dew_point", "rain", "wind", "solar", "wetness"};
  const auto with = [](Names words, const Names& more) {
    words.insert(words.end(), more.begin(), more.end());
    return words;
  };
  std::vector<KnownTable> tables{
      {"the file",
       {"farm", "store", "log", "mail", "recipient", "alerts", "station", "field", "crop", "diary",
        "page", "watch"}},
      {"[farm]", {"name", "time_zone", "units", "exercise"}},
      {"[store]", {"folder", "keep_samples"}},
      {"[log]", {"file", "level"}},
      {"[mail]",
       {"server", "user", "password_file", "from", "weekly", "daily", "at_most_per_day", "folder",
        "plain", "ca_file"}},
      {"[[recipient]]", {"address", "fields", "brief", "language", "quiet"}},
      {"[alerts]", {"min_severity", "remind_after", "folder"}},
      {"[[station]]",
       {"name", "latitude", "longitude", "elevation", "interval", "silent_after", "arrives_every",
        "stamp", "shield", "near_coast", "drop", "http"}},
      {"[station.drop]", with({"folder", "files", "time", "where", "missing"}, values)},
      {"[station.http]", with({"url", "every", "form", "time", "missing"}, values)},
      {"[[field]]",
       {"name", "station", "stations", "latitude", "longitude", "elevation", "sown", "harvested",
        "crop_type", "irrigation", "soil", "soil_water_at_sowing", "offset", "heat", "humid",
        "photoperiod"}},
      {"[field] irrigation", {"method", "sets"}},
      {"[field] offset", {"day", "night"}},
      {"[field] heat", {"sustained", "severe", "extreme"}},
      {"[field] humid",
       {"film", "film_humidity", "film_humidity_calm", "dew_point_film", "bucket", "coldest",
        "best", "warmest", "shortest", "longest", "dry_out_humidity"}},
      {"[crop.NAME]",
       {"emerged", "buds", "first_anthers", "full_flower", "flowers_done", "ripe", "prior_sigma",
        "photoperiod"}},
      {"[crop.NAME] photoperiod", {"critical", "slope"}},
      {"[diary]", {"folder"}},
      {"[page]", {"port", "address", "names"}},
      {"[watch]", {"heartbeat_url", "every"}},
      {"[station.drop] time", {"column", "columns", "form", "zone"}},
      {"[station.http] time", {"at", "form", "zone"}},
      {"[station.drop] where", {"column", "equals"}},
  };
  for (const std::string form : {"drop", "http"}) {
    const std::string at = form == "drop" ? "column" : "at";
    for (const std::string& value : values) {
      Names keys{at, "unit"};
      if (value == "rain") keys.push_back("meaning");
      if (value == "wind") keys.push_back("height");
      if (value == "wetness") keys.insert(keys.end(), {"wet_when", "interval"});
      tables.push_back({"[station." + form + "] " + value, keys});
    }
  }
  return tables;
}

Names tables_with(std::string_view key, bool inner) {
  Names names;
  for (const KnownTable& table : known_tables()) {
    const bool is_inner = table.name.find("] ") != std::string::npos;
    const bool holds = std::find(table.keys.begin(), table.keys.end(), key) != table.keys.end();
    if (is_inner == inner && holds && table.name != "the file") names.push_back(table.name);
  }
  return names;
}

/// The tables that hold a key, for a sentence: "[[station]] or [[field]]"; of the small tables of
/// one value only while no other table holds it, and in short where they are many.
std::string homes_of(std::string_view key) {
  Names homes = tables_with(key, false);
  if (!homes.empty()) return either(homes);
  homes = tables_with(key, true);
  if (homes.size() <= 2) return either(homes);
  for (std::string& home : homes) home = "the values of " + home.substr(0, home.find("] ") + 1);
  homes.erase(std::unique(homes.begin(), homes.end()), homes.end());
  return either(homes);
}

std::string listed(const Names& words) {
  std::string text;
  for (const std::string& word : words) text += (text.empty() ? "" : ", ") + word;
  return text;
}

Names all_keys() {
  Names keys;
  for (const KnownTable& table : known_tables()) {
    keys.insert(keys.end(), table.keys.begin(), table.keys.end());
  }
  std::sort(keys.begin(), keys.end());
  keys.erase(std::unique(keys.begin(), keys.end()), keys.end());
  return keys;
}

}  // namespace

std::span<const KnownTable> known_tables() {
  static const std::vector<KnownTable> tables = make_tables();
  return tables;
}

const Names& keys_of(std::string_view table) {
  const auto tables = known_tables();
  const auto found = std::find_if(tables.begin(), tables.end(),
                                  [&](const KnownTable& known) { return known.name == table; });
  ANTHERD_CHECK(found != tables.end());
  return found->keys;
}

std::string advice_on(std::string_view key, std::string_view table) {
  const Names& here = keys_of(table);
  const std::string home = homes_of(key);
  const Names near = clock::nearest_to(key, here);
  if (!tables_with(key, false).empty() && !near.empty()) {
    return "did you mean \"" + near.front() + "\"? (\"" + std::string(key) + "\" belongs to " +
           home + ")";
  }
  if (!near.empty()) return "did you mean \"" + near.front() + "\"?";
  if (!home.empty()) return "it belongs to " + home;
  static const Names everything = all_keys();
  const Names far = clock::nearest_to(key, everything);
  if (!far.empty() && !homes_of(far.front()).empty()) {
    return "did you mean \"" + far.front() + "\" of " + homes_of(far.front()) + "?";
  }
  return "known here: " + listed(here);
}

}  // namespace antherd::settings
