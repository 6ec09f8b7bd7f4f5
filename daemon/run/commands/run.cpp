// antherd run: the service.
#include <iostream>

#include "core/letters/words.hpp"
#include "run/commands/common.hpp"
#include "run/service/intake.hpp"
#include "run/service/log.hpp"
#include "run/service/loop.hpp"
#include "run/service/signals.hpp"
#include "run/settings/quantities.hpp"

namespace antherd::commands {
namespace {

/// The paced clock is for exercises: real warnings must never run on an invented time.
Result<service::Timekeeper> timekeeper_of(const settings::Settings& settings,
                                          const Invocation& call) {
  if (call.clock_from.empty()) return service::Timekeeper{};
  if (!settings.exercise) {
    return Failure{"start an exercise", settings.path,
                   "--clock-from needs [farm] exercise = true, so that no letter can be mistaken "
                   "for a real one",
                   "nothing was started"};
  }
  const auto reading = settings::parse_civil_time(call.clock_from);
  if (!reading) return reading.failure();
  const auto from = service::farm_instant(settings, *reading);
  if (!from) return from.failure();
  return service::Timekeeper(*from, call.pace);
}

}  // namespace

Exit run(const Invocation& call) {
  service::Signals signals;  // before all else: none of them ends the start halfway
  const SettingsPointer settings = read_settings(call);
  if (!settings) return Exit::usage;
  const auto time = timekeeper_of(*settings, call);
  if (!time) {
    say(time.failure());
    return Exit::usage;
  }
  if (auto done = service::open_log(settings->log); !done) {
    // A worn disk must not silence the service: it speaks to standard error, as without a file.
    if (auto plain = service::open_log({"", settings->log.level}); !plain)
      return say(plain.failure());
    service::log_error(done.failure().sentence());
  }
  service::log_info("antherd watches " + letters::plain_count(settings->fields.size(), "field") +
                    " of " + settings->farm + " with " +
                    letters::plain_count(settings->stations.size(), "station"));
  service::RunOptions options{*time, std::nullopt};
  if (call.stop_after > 0) options.stop_after = Seconds{call.stop_after};
  if (auto done = service::run(settings, options, signals); !done) {
    service::log_error(done.failure().sentence());
    return say(done.failure());
  }
  return Exit::done;
}

}  // namespace antherd::commands
