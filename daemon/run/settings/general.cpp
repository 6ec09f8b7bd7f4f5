// The tables of the farm, the store, the log, the alerts, the diary, the page and the watch.
#include <chrono>

#include "edge/clock/clock.hpp"
#include "run/settings/parts.hpp"
#include "run/settings/quantities.hpp"
#include "run/settings/url.hpp"

namespace antherd::settings {
namespace {

constexpr std::size_t longest_farm_name = 60;  // it stands in letters of 78 columns
constexpr Seconds one_day{86400};

}  // namespace

void read_farm(Work& work) {
  const Wanted name{"the farm's name, at most 60 characters", "name = \"Larkspur Bench\""};
  const Wanted zone{"the farm's time zone by its IANA name", "time_zone = \"America/Los_Angeles\""};
  const auto farm = section(work, "farm");
  if (!farm) {
    if (work.root.find("farm") == nullptr) {
      work.faults.complaints.push_back({work.faults.file, 1, "[farm]", "",
                                        "a table with the farm's name and time zone",
                                        "[farm] with name = \"Larkspur Bench\" and "
                                        "time_zone = \"America/Los_Angeles\" below it",
                                        ""});
    }
    return;
  }
  work.settings.farm = farm->name("name", longest_farm_name, name, true).value_or("");
  if (const auto zone_name = farm->text("time_zone", zone, true)) {
    const Result<Calendar> calendar = clock::calendar_of(*zone_name);
    if (calendar) {
      work.settings.calendar = *calendar;
    } else {
      const Failure& why = calendar.failure();
      farm->object("time_zone", in_quotes(*zone_name), why.why + "; " + why.what_next,
                   zone.example);
    }
  }
  const Words<letters::Units> units{{"us", letters::Units::us}, {"metric", letters::Units::metric}};
  work.settings.units =
      farm->choice("units", units, "units = \"us\"").value_or(letters::Units::metric);
  work.settings.exercise = farm->truth("exercise").value_or(false);
}

void read_store_and_log(Work& work) {
  work.settings.store_folder = "/var/lib/antherd";
  if (const auto store = section(work, "store")) {
    if (const auto folder = path_of(work, *store, "folder", false)) {
      work.settings.store_folder = *folder;
    }
    // The morning outlook fits 45 days; hours are kept for ever, so samples may go after that.
    work.settings.keep_samples =
        store
            ->quantity(
                "keep_samples", parse_duration, 30 * one_day, 36'525 * one_day,
                {"a duration from 30 d to 36525 d, with its unit", "keep_samples = \"400 d\""})
            .value_or(work.settings.keep_samples);
  }
  if (const auto log = section(work, "log")) {
    work.settings.log.file = path_of(work, *log, "file", false).value_or("");
    const Words<std::string> levels{
        {"debug", "debug"}, {"info", "info"}, {"warning", "warning"}, {"error", "error"}};
    work.settings.log.level = log->choice("level", levels, "level = \"info\"").value_or("info");
  }
}

void read_alerts(Work& work) {
  const auto alerts = section(work, "alerts");
  if (!alerts) return;
  const Words<risk::Level> levels{{"Moderate", risk::Level::moderate},
                                  {"Severe", risk::Level::severe},
                                  {"Extreme", risk::Level::extreme}};
  work.settings.policy.min_level =
      alerts->choice("min_severity", levels, "min_severity = \"Moderate\"")
          .value_or(risk::Level::moderate);
  work.settings.policy.remind_after =
      alerts
          ->quantity("remind_after", parse_duration, one_hour, 30 * one_day,
                     {"a duration from 1 h to 30 d, with its unit", "remind_after = \"24 h\""})
          .value_or(work.settings.policy.remind_after);
  if (alerts->has("folder")) {
    alerts->object("folder", shown(*alerts->find("folder")),
                   "alerts as CAP files are not in this version; remove the line");
  }
}

void read_diary(Work& work) {
  const auto diary = section(work, "diary");
  if (!diary) return;
  work.settings.diary_folder = path_of(work, *diary, "folder", true).value_or("");
}

void read_page(Work& work) {
  const auto table = section(work, "page");
  if (!table) return;
  const Wanted port{"a port from 1024 to 65535", "port = 8470"};
  const Wanted address{
      "a numeric address; only one of this computer's own loopback is hidden from others",
      "address = \"127.0.0.1\""};
  const Wanted names{"host names of this computer", "names = [\"farm-computer\"]"};
  Page page;
  if (!table->has("port")) table->miss("port", port);
  page.port = table->whole("port", 1024, 65535, port).value_or(0);
  page.address = table->text("address", address).value_or(page.address);
  page.names = table->texts("names", names).value_or(page.names);
  work.settings.page = page;
}

void read_watch(Work& work) {
  const auto table = section(work, "watch");
  if (!table) return;
  const Wanted address{"an address that begins with https:// (http:// on this computer alone)",
                       "heartbeat_url = \"https://watch.larkspur.example/farm\""};
  Watch watch;
  if (const auto written = table->name("heartbeat_url", 1000, address, true)) {
    const Result<Url> url = parse_url(*written);
    const bool known =
        url && (url->scheme == "https" || (url->scheme == "http" && is_loopback(url->host)));
    if (known) {
      watch.heartbeat_url = *written;
    } else {  // it is not repeated: such an address is often a key
      table->complain(
          "heartbeat_url", "another text",
          {address.allowed + (url ? "" : " (" + url.failure().why + ")"), address.example});
    }
  }
  watch.every = table
                    ->quantity("every", parse_duration, Seconds{300}, one_day,
                               {"a duration from 5 min to 24 h, with its unit", "every = \"1 h\""})
                    .value_or(watch.every);
  work.settings.watch = std::move(watch);
}

}  // namespace antherd::settings
