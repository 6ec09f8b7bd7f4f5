// What the commands share: reading settings and facts, saying failures, writing tables.
#pragma once

#include <map>
#include <memory>
#include <nlohmann/json_fwd.hpp>
#include <optional>
#include <string>
#include <vector>

#include "core/failures/result.hpp"
#include "edge/store/store.hpp"
#include "run/commands/commands.hpp"
#include "run/service/farm.hpp"
#include "run/service/lookout.hpp"
#include "run/settings/settings.hpp"

namespace antherd::commands {

using SettingsPointer = std::shared_ptr<const settings::Settings>;

/// Reads the settings; prints every complaint and returns nothing when there are any.
SettingsPointer read_settings(const Invocation& call);

/// Prints a failure to standard error. @return Exit::failed
Exit say(const Failure& failure);

/// The field of the call; prints what there is and returns nothing when it is not one of them.
const settings::FieldPlan* read_field(const settings::Settings& settings, const Invocation& call);

/// Everything a reading command knows: settings, hours, diary.
struct Past {
  SettingsPointer settings;  // may have stations without file left out
  std::map<std::string, std::vector<weather::Hour>> hours;
  std::map<std::string, std::vector<Instant>> times;       // of accepted samples with a temperature
  std::map<std::string, std::vector<Instant>> bare_times;  // of those without
  std::map<std::string, field::Diary> diaries;             // by field
  std::vector<alerts::Said> said;
  std::optional<Instant> first_start;
  std::optional<Instant> last() const;  // newest sample of any station
  /// Of one station.
  std::optional<Instant> last(const std::string& station) const;
};

/// From files, by each station's own table; the diary from the diary folder.
Result<Past> past_from_files(const SettingsPointer& settings,
                             const std::vector<std::string>& station_files);
/// From what the drop folders hold now, for a farm whose service has not run yet.
Past past_from_folders(const SettingsPointer& settings, Instant now);
/// From the store; the running hour is made from its samples.
Result<Past> past_from_store(const SettingsPointer& settings, const store::Store& store,
                             Instant now);
/// Puts a station's samples, in any order and with repeats, into a past.
void add_samples(Past& past, const settings::Station& station,
                 std::vector<weather::Sample> samples);
/// Files when there are any, else the store, else the drop folders.
Result<Past> read_past(const SettingsPointer& settings, const Invocation& call);

/// The time that a command goes by.
struct Present {
  Instant now;
  bool doubted =
      false;  // by the newest reading: the computer's clock is not set and cannot be right
};
/// Now by the wall clock; in an exercise, whose clock is not the wall's, the newest reading. A
/// computer without a network may stand in 1970 or years ahead: then too, and it is said once.
Present present(const settings::Settings& settings, const Result<store::Store>& store);
/// @param shown  by the wall clock
/// @param set    whether the kernel holds it for right
Present present_by(Instant shown, bool set, const settings::Settings& settings,
                   const Result<store::Store>& store);
/// The last farm day that a note may bear. By a clock in doubt it may be weeks after the newest
/// reading: its station may be dead.
std::optional<CivilDay> last_day_of_notes(const settings::Settings& settings, Present present);

Result<store::Store> open_to_read(const settings::Settings& settings);
Result<store::Store> open_to_write(const settings::Settings& settings);

/// A lookout over a past, its ledger included.
service::Lookout lookout_over(const Past& past);
/// Every station's hours closed up to `now` by the live rule.
service::Closed closed_at(const Past& past, Instant now);

// Rows of `--lines` and `--csv`.
std::string utc_text(Instant at);            // 2026-07-14T20:00:00Z
std::string day_text(CivilDay day);          // 2026-07-14
using service::farm_text;                    // 2026-07-14 13:00
double rounded(double value, int decimals);  // half to even

}  // namespace antherd::commands
