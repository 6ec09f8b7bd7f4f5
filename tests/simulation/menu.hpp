// The menu of faults, and what of it a seed orders for one season.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "kinds.hpp"

namespace simulation {

enum class What {
  // what the station says
  silent,
  frozen,
  spikes,
  garbage,
  out_of_range,
  fahrenheit,
  flapping,
  twofold,
  // how its readings travel
  half_rows,
  rotated,
  repeated,
  shuffled,
  late,
  not_modified,
  unreachable,
  // the computer's clock
  clock_1970,
  clock_last_shutdown,
  clock_hours,
  clock_20_years,
  // the process and the power
  kill,
  kill_in_commit,
  kill_in_mail,
  power_cut,
  cut_in_commit,
  cut_in_mail,
  long_off,
  // the store
  disk_full,
  disk_locked,
  disk_error,
  // the mail server
  mail_down,
  mail_4xx,
  mail_5xx_recipient,
  mail_login,
  mail_silent,
  mail_lost_body,
  mail_slow,
  offline,
  // the grower and the settings
  diary_late,
  diary_undone,
  reload_broken,
  reload_good,
};

const char* name_of(What what);

struct Fault {
  What what = What::silent;
  Instant from, to;  // of a moment both are the same
  std::uint64_t dice = 0;
};

/// What happens in a season, in time order; the last days are left alone.
/// The environment variable ANTHERD_FAULTS ("kill,mail_down") keeps only what it names.
std::vector<Fault> order(const Kind& kind, std::uint64_t seed, Instant start, Instant end);

}  // namespace simulation
