// How a station's readings are written down: which column or pointer holds what, in which unit.
// Options only; made by the settings, used by the readers.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "core/units/time.hpp"
#include "core/weather/station.hpp"

namespace antherd::station {

/// One measured value of a record.
struct ValueForm {
  std::string at;    // column name (CSV) or RFC 6901 pointer (JSON)
  std::string unit;  // degC degF K | % 1 | mm in | m/s mph km/h kn | W/m2 MJ/m2 | min h 1
};

/// Raw wetness counts: wet when the value passes a threshold, e.g. ">= 7".
struct WetWhen {
  std::string comparison;  // ">=", ">", "<=", "<"
  double threshold = 0;
};

struct TimeForm {
  std::vector<std::string> at;  // one or several columns, joined by one space; or one pointer
  std::string form;             // strptime-like: %Y %m %d %H %M %S %y %e %j %I %p %b %z %T %F;
                                // or "unix", "unix_ms", "iso" (ISO 8601)
  Calendar zone;                // unless the form holds %z or the text a Z
  bool arrival = false;         // HTTP: the station sends no time
};

/// A whole record.
struct RecordForm {
  TimeForm time;
  std::optional<std::pair<std::string, std::string>> where;  // column, equals
  std::optional<ValueForm> temperature, humidity, dew_point, rain, wind, solar, wetness;
  std::optional<WetWhen> wet_when;
  Seconds wetness_interval{900};  // what one wetness value speaks of
  std::vector<std::string> missing{"", "NA", "NaN", "nan", "null"};
};

struct DropForm {
  std::string folder;
  std::string files = "*";  // glob of file names
  RecordForm record;
};

struct HttpForm {
  std::string url;  // http:// or https://
  Seconds every{300};
  RecordForm record;  // pointers
};

}  // namespace antherd::station
