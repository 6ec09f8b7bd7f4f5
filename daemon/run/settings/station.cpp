// The [[station]] tables.
#include <algorithm>
#include <string_view>

#include "run/settings/parts.hpp"
#include "run/settings/quantities.hpp"
#include "run/settings/url.hpp"

namespace antherd::settings {
namespace {

constexpr std::size_t longest_name = 40;  // it stands in subjects of 70 characters
constexpr Seconds one_minute{60};
constexpr Seconds one_week{7 * 86400};

void read_place(const Table& table, weather::Place& place) {
  place.latitude = Degree(
      table
          .number("latitude", -90, 90,
                  {"degrees north from -90 to 90, a number without quotes", "latitude = 46.73"},
                  true)
          .value_or(0));
  place.longitude = Degree(table
                               .number("longitude", -180, 180,
                                       {"degrees east from -180 to 180 (west is negative), a "
                                        "number without quotes",
                                        "longitude = -117.18"},
                                       true)
                               .value_or(0));
  place.elevation =
      table
          .quantity("elevation", parse_length, Metre(-430), Metre(6000),
                    {"a height from -430 m to 6000 m, with its unit", "elevation = \"780 m\""},
                    true)
          .value_or(Metre(0));
}

/// How often readings are taken and come; when silence is worth a letter.
void read_rhythm(const Table& table, weather::Station& station) {
  station.interval =
      table
          .quantity("interval", parse_duration, Seconds{1}, one_hour,
                    {"a duration from 1 s to 60 min, with its unit: the time between two readings",
                     "interval = \"5 min\""},
                    true)
          .value_or(Seconds{300});
  station.arrives_every =
      table
          .quantity("arrives_every", parse_duration, Seconds{1}, one_week,
                    {"a duration from 1 s to 7 d, with its unit", "arrives_every = \"5 min\""})
          .value_or(station.interval);
  station.arrives_every = std::max(station.arrives_every, station.interval);
  const Seconds batch =
      station.arrives_every > station.interval ? station.arrives_every : Seconds{0};
  const Seconds least = 3 * station.interval;
  station.silent_after = std::max({one_hour, least, batch + least});
  const auto silent =
      table.quantity("silent_after", parse_duration, one_minute, one_week,
                     {"a duration from 1 min to 7 d, with its unit", "silent_after = \"60 min\""});
  if (!silent) return;
  station.silent_after = *silent;
  if (*silent < least) {
    table.refuse("silent_after", {"at least three intervals, or a single lost reading would "
                                  "already be an alert",
                                  "silent_after = \"60 min\""});
  } else if (*silent <= batch) {
    table.refuse("silent_after", {"longer than arrives_every, or every wait for the next batch "
                                  "would be an alert",
                                  "silent_after = \"8 h\" with arrives_every = \"6 h\""});
  }
}

void read_manners(const Table& table, weather::Station& station) {
  const Words<weather::Stamp> stamps{{"instant", weather::Stamp::instant},
                                     {"start", weather::Stamp::start},
                                     {"end", weather::Stamp::end}};
  station.stamp =
      table.choice("stamp", stamps, "stamp = \"instant\"").value_or(weather::Stamp::instant);
  const Words<weather::Shield> shields{{"fanned", weather::Shield::fanned},
                                       {"plain", weather::Shield::plain},
                                       {"unknown", weather::Shield::unknown}};
  station.shield =
      table.choice("shield", shields, "shield = \"plain\"").value_or(weather::Shield::unknown);
  // FAO-56 eq. 50: 0.16 inland, 0.19 within about 20 km of a coast.
  station.radiation_coefficient = table.truth("near_coast").value_or(false) ? 0.19 : 0.16;
}

void read_drop(Work& work, const Table& table, Station& station) {
  station::DropForm& form = station.drop.emplace();
  form.folder = path_of(work, table, "folder", true).value_or("");
  const Wanted files{"the files' name with * and ? for what varies, without folders",
                     "files = \"bench-*.csv\""};
  if (const auto name = table.name("files", 200, files)) {
    form.files = *name;
    if (name->find('/') != std::string::npos) table.refuse("files", files);
  }
  read_record(table, "column", work.settings.calendar, station.station, form.record);
}

void read_http(Work& work, const Table& table, Station& station) {
  station::HttpForm& form = station.http.emplace();
  const Wanted address{"an address that begins with http:// or https://",
                       "url = \"http://192.168.1.20/now.json\""};
  if (const auto written = table.name("url", 1000, address, true)) {
    const Result<Url> url = parse_url(*written);
    const bool known = url && (url->scheme == "http" || url->scheme == "https");
    if (known) {
      form.url = *written;
    } else {
      const std::string why = url ? "" : " (" + url.failure().why + ")";
      // An address may hold a secret: such a one is not repeated.
      const bool secret = written->find_first_of("@?") != std::string::npos;
      table.complain("url", secret ? "another text" : in_quotes(*written),
                     {address.allowed + why, address.example});
    }
  }
  const std::string form_name = table.text("form", {"json", "form = \"json\""}).value_or("json");
  if (form_name == "csv" || form_name == "senml") {
    table.object("form", in_quotes(form_name), "over HTTP this version reads json only",
                 "form = \"json\"");
  } else if (form_name != "json") {
    table.refuse("form", {"json", "form = \"json\""});
  }
  const Seconds interval = station.station.interval;
  form.every = table
                   .quantity("every", parse_duration, Seconds{1}, one_hour,
                             {"a duration from 1 s to 60 min, with its unit", "every = \"5 min\""})
                   .value_or(interval);
  if (form.every > interval) {
    table.refuse("every", {"not longer than the station's interval: each answer holds one reading, "
                           "and readings between would be lost",
                           "every = \"5 min\" with interval = \"5 min\""});
  }
  read_record(table, "at", work.settings.calendar, station.station, form.record);
}

void read_station(Work& work, const Node& node, std::size_t index) {
  const std::string label = label_of(node, "[[station]]", "name", index);
  const Table table(node, "[[station]]", label, "", work.faults);
  Station station;
  station.station.name =
      table
          .name("name", longest_name, {"a name of at most 40 characters", "name = \"bench\""}, true)
          .value_or("");
  read_place(table, station.station.place);
  read_rhythm(table, station.station);
  read_manners(table, station.station);
  const std::string of = " of" + label.substr(std::string_view("[[station]]").size());
  const auto source = [&](const std::string& key, auto read) {
    const Node* const inner = table.find(key);
    if (inner == nullptr) return;
    if (inner->kind != Node::Kind::table) {
      table.refuse(key, {"one table, its name in single brackets on a line of its own",
                         "[station." + key + "]"});
      return;
    }
    read(work,
         Table(*inner, "[station." + key + "]", "[station." + key + "]" + of, "", work.faults),
         station);
  };
  source("drop", read_drop);
  source("http", read_http);
  if (!table.has("drop") && !table.has("http")) {
    table.miss("drop", {"one source of readings: a [station.drop] or a [station.http] table below "
                        "the station",
                        "[station.drop] with folder = \"drop\" below it"});
  }
  if (table.has("drop") && table.has("http")) {
    table.object("http", "both drop and http", "a station has one source; keep one of them");
  }
  work.settings.stations.push_back(std::move(station));
}

}  // namespace

void read_stations(Work& work) {
  const auto nodes = sections(work, "station");
  if (work.root.find("station") == nullptr) {
    work.faults.complaints.push_back({work.faults.file, 1, "[[station]]", "",
                                      "at least one station",
                                      "[[station]] with name = \"bench\" below it", ""});
  }
  for (std::size_t i = 0; i < nodes.size(); ++i) read_station(work, *nodes[i], i);
  refuse_repeats(work, "station", "name");
}

std::string Station::source() const {
  if (drop) return "files " + drop->files + " in " + drop->folder;
  if (http) return without_query(http->url);
  return "no source";
}

}  // namespace antherd::settings
