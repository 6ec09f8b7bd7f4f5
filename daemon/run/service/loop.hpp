// The loop: look, advance, save, send, sleep. One thread owns all state and the store; two workers
// poll and mail. This is the only code that knows Asio.
#pragma once

#include <memory>
#include <optional>
#include <string>

#include "core/failures/result.hpp"
#include "run/service/signals.hpp"
#include "run/service/timekeeper.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

struct RunOptions {
  Timekeeper time;
  std::optional<Seconds> stop_after;  // an exercise stops by itself after so many real seconds
};

/// Runs until SIGTERM or SIGINT. SIGHUP re-reads the settings whole or not at all. While the
/// store's disk keeps the watch from beginning it stays up and says so (standstill.hpp).
/// @return a Failure when it could not start, or ended because its store was damaged meanwhile and
///         only a start heals that; Done after a clean stop
/// @param signals  those that came before are heeded once it is up
Outcome run(std::shared_ptr<const settings::Settings> settings, RunOptions options,
            Signals& signals);

}  // namespace antherd::service
