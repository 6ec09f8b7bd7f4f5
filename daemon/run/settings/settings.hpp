// The settings as the program uses them; made whole or not at all from TOML (contracts.md).
#pragma once

#include <map>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "core/alerts/decide.hpp"
#include "core/crop/traits.hpp"
#include "core/failures/result.hpp"
#include "core/field/field.hpp"
#include "core/letters/letter.hpp"
#include "core/risk/rules.hpp"
#include "core/weather/station.hpp"
#include "edge/mail/mail.hpp"
#include "edge/station/form.hpp"

namespace antherd::settings {

struct Station {
  weather::Station station;
  std::optional<station::DropForm> drop;   // exactly one of drop and http
  std::optional<station::HttpForm> http;
  std::string source() const;              // for people: "files bench-*.csv in drop/"
};

struct FieldPlan {
  field::Field field;
  crop::Traits traits;
  risk::Rules rules;
};

struct WeeklyTime {
  int weekday = 1;   // ISO: 1 Monday … 7 Sunday
  int minute = 360;  // after farm midnight
};

struct Mail {
  std::optional<mail::Server> server;  // or
  std::string folder;                  // .eml files
  std::string from;
  WeeklyTime weekly;
  int daily_minute = 19 * 60;
  int at_most_per_day = 12;
};

/// The local page; without it there is no open port.
struct Page {
  std::string address = "127.0.0.1";
  int port = 0;
  std::vector<std::string> names;  // host names by which visitors may call this computer
};

/// A sign of life to somebody else's watch, while the service really looks at its stations.
struct Watch {
  std::string heartbeat_url;  // https, or http on loopback; often a secret: only the host is shown
  Seconds every{3600};
};

struct Log {
  std::string file;     // empty: journal or standard error
  std::string level = "info";
};

struct Settings {
  std::string path;     // the file's absolute path
  std::string farm;
  Calendar calendar;    // farm time
  letters::Units units = letters::Units::metric;
  std::string store_folder;
  Seconds keep_samples{400LL * 86400};
  Log log;
  std::optional<Mail> mail;
  std::optional<Page> page;
  std::optional<Watch> watch;
  std::vector<letters::Recipient> recipients;
  alerts::Policy policy;
  std::vector<Station> stations;
  std::vector<FieldPlan> fields;
  std::string diary_folder;   // empty: none
  bool exercise = false;      // [farm] exercise = true: letters and reviews are marked "exercise"

  const Station* station(std::string_view name) const;
  const FieldPlan* field(std::string_view name) const;
  /// A field by a unique beginning of its name; the Failure lists the fields there are.
  Result<const FieldPlan*> field_by_beginning(std::string_view beginning) const;
};

/// One complaint about the settings.
struct Complaint {
  std::string file;
  int line = 0;
  std::string where;      // "[[station]] bench, temperature.unit"
  std::string got;        // "degX"
  std::string allowed;    // "degC, degF or K"
  std::string example;    // 'temperature = { column = "temp_f", unit = "degF" }'
  std::string advice;     // instead of `allowed`, in words of its own: 'did you mean "rain"?'
  std::string sentence() const;   // "antherd.toml:31: …"
};

/// Settings, or every complaint at once.
struct Reading {
  std::optional<Settings> settings;
  std::vector<Complaint> complaints;
  std::vector<std::string> remarks;   // not wrong, worth saying (e.g. highland above 40°)
};

/// Reads a file. Paths in it hang from its folder. `ask_disk`: also look at password and folders.
Reading read_file(const std::string& path, bool ask_disk = true);
/// Reads a text; `path` is what complaints name and paths hang from.
Reading read_text(std::string_view text, const std::string& path, bool ask_disk);

/// The settings file to use: `--settings`, else /etc/antherd/antherd.toml, else ./antherd.toml.
std::string choose_file(const std::string& option);

}  // namespace antherd::settings
