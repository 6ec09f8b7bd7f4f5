// When the next sign of life is due, and what the log says of it. Pure.
#pragma once

#include <optional>
#include <string>

#include "core/failures/result.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

/// It beats only after a turn of the working loop that really looked at its stations and could keep
/// what it found: a loop that turns for nothing is no life. Failures are said once an hour, never
/// by letter.
class Heartbeat {
 public:
  /// @param looked  this turn looked at every station and the store took what it had to
  /// @return the address to ask now, if any; it is then under way until answered()
  std::optional<std::string> beat(const std::optional<settings::Watch>& watch, bool looked,
                                  Instant now);
  /// @return a sentence for the log, or nothing
  std::string answered(const Outcome& outcome, Instant now);

 private:
  bool under_way_ = false, failed_ = false;
  std::optional<Instant> last_, last_said_;
};

}  // namespace antherd::service
