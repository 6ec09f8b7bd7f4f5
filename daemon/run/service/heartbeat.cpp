// See heartbeat.hpp.
#include "run/service/heartbeat.hpp"

#include <algorithm>

namespace antherd::service {
namespace {

constexpr Seconds tried_again{300};
constexpr Seconds said_again{3600};

}  // namespace

std::optional<std::string> Heartbeat::beat(const std::optional<settings::Watch>& watch, bool looked,
                                           Instant now) {
  if (!watch || !looked || under_way_) return std::nullopt;
  const Seconds pause = failed_ ? std::min(tried_again, watch->every) : watch->every;
  // A clock that was set back starts anew.
  if (last_ && now >= *last_ && now - *last_ < pause) return std::nullopt;
  last_ = now;
  under_way_ = true;
  return watch->heartbeat_url;
}

std::string Heartbeat::answered(const Outcome& outcome, Instant now) {
  under_way_ = false;
  if (outcome) {
    const bool mended = failed_;
    failed_ = false;
    last_said_.reset();
    return mended ? "signs of life arrive again" : "";
  }
  failed_ = true;
  if (last_said_ && now >= *last_said_ && now - *last_said_ < said_again) return "";
  last_said_ = now;
  return outcome.failure().sentence();
}

}  // namespace antherd::service
