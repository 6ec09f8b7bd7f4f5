// What the tests of the service stand on: a farm in a folder that goes away, invented weather as
// the station's own files, and a desk that is turned at any time a test likes.
#pragma once

#include <filesystem>
#include <map>
#include <memory>
#include <string>
#include <vector>

#include "core/units/time.hpp"
#include "core/weather/sample.hpp"
#include "run/service/desk_work.hpp"
#include "run/settings/settings.hpp"

namespace ground {

using namespace antherd;
using std::chrono::days;
using std::chrono::hours;
using std::chrono::minutes;

/// A folder of its own under the system's place for such, removed at the end.
class Folder {
 public:
  Folder();
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;
  ~Folder();
  const std::string& path() const { return path_; }
  std::string operator/(const std::string& name) const { return path_ + "/" + name; }
  /// Writes a file, making its folder when it is missing.
  void write(const std::string& name, const std::string& text) const;
  void append(const std::string& name, const std::string& text) const;
  std::string read(const std::string& name) const;
  std::vector<std::string> names(const std::string& folder) const;

 private:
  std::string path_;
};

/// "2026-07-14 20:00" by the farm's clock (America/Los_Angeles), the earlier of two.
Instant farm_time(const std::string& text);
std::string farm_clock(Instant at);
std::string utc_clock(Instant at);
/// "2026-07-14 20:00" by a farm's own clock.
std::string clock_of(const Calendar& calendar, Instant at);
/// From here on the folders of this program's tests lie in memory, where the system has such a
/// place: for tests that turn the desk thousands of times and ask nothing of the disk.
void keep_in_memory();

/// What a farm's settings are made of; a test says only what differs.
struct Farm {
  std::string zone = "America/Los_Angeles";
  double latitude = 46.73, longitude = -117.18;
  std::string stamps = "utc";                    // the zone of the station's clock
  std::string log = "file = \"antherd.log\"\n";  // lines of [log]; empty: no table
  std::string extra_farm;                        // more lines of [farm]
  std::string mail = "folder = \"outgoing\"\n";  // lines of [mail]; empty: no table
  std::string recipients = "[[recipient]]\naddress = \"owner@larkspur.example\"\n";
  std::string alerts;    // lines of [alerts]
  std::string values;    // more lines of [station.drop]
  std::string of_field;  // more lines of [[field]]
  std::string sown = "2026-06-25";
  std::string more;  // whole tables
};
std::string text_of(const Farm& farm);

/// Writes antherd.toml into the folder and reads it; the complaints are REQUIREd to be none.
std::shared_ptr<const settings::Settings> settings_in(const Folder& folder, const Farm& farm = {});

/// Invented weather: clear summer days of 13…27 °C, a hot spell of 21…39 °C on farm days
/// [hot_first, hot_last], readings every 15 min by the station's own clock (UTC here).
struct Weather {
  CivilDay hot_first = std::chrono::local_days(std::chrono::year(2026) / 7 / 12);
  CivilDay hot_last = std::chrono::local_days(std::chrono::year(2026) / 7 / 14);
};
weather::Sample reading_at(const Weather& weather, Instant at);
std::vector<weather::Sample> readings(const Weather& weather, Instant from, Instant to);

/// A station that is polled, beside the farm's own: for Farm::more.
constexpr const char* river =
    "\n[[station]]\nname = \"river\"\nlatitude = 46.7\nlongitude = -117.2\n"
    "elevation = \"750 m\"\ninterval = \"5 min\"\n[station.http]\n"
    "url = \"http://127.0.0.1:9/now.json\"\nevery = \"5 min\"\nform = \"json\"\n"
    "time = { at = \"/t\", form = \"unix\" }\n"
    "temperature = { at = \"/c\", unit = \"degC\" }\nhumidity = { at = \"/h\", unit = \"%\" }\n";

constexpr const char* header = "time,temp_c,rh_pct,rain_mm\n";
std::string row_of(const weather::Sample& sample);
std::string rows_of(const std::vector<weather::Sample>& samples);

/// A farm whose desk is turned by hand.
class Bench {
 public:
  explicit Bench(const Farm& farm = {});
  void open(Instant now);
  void close(Instant now);
  /// Turns at `now`, and again while there is more to read.
  void turn(Instant now);
  /// Turns every `step` from `from` up to and with `to`, each time with the readings of until then
  /// in the drop folder.
  void live(const Weather& weather, Instant from, Instant to, Seconds step = minutes{5});
  /// All of the weather's readings of [from, to) in one file.
  void drop(const std::string& name, const std::vector<weather::Sample>& samples) const;

  Folder folder;
  std::shared_ptr<const settings::Settings> settings;
  std::unique_ptr<service::DeskWork> desk;

  std::vector<outbox::Item> letters() const;
  std::vector<std::string> letter_ids() const;
  std::vector<outbox::Item> letters_of(const std::string& kind) const;
  /// How often something of a kind was said in the ledger.
  std::ptrdiff_t said_of(alerts::Kind kind) const;
  std::string fingerprint() const;
  std::vector<weather::Hour> stored_hours() const;
  const std::vector<alerts::Episode>& episodes() const {
    return desk->keeper().lookout().episodes();
  }
};

/// Episodes as text, for a message that a person can read.
std::string told(const std::vector<alerts::Episode>& episodes);

}  // namespace ground
