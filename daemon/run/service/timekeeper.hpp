// What time it is for the service: the wall clock, or in an exercise a paced clock that starts at
// a chosen moment and runs faster. It must not know what anybody waits for.
#pragma once

#include <chrono>
#include <memory>
#include <mutex>
#include <optional>

#include "core/units/time.hpp"

namespace antherd::service {

/// Steps of a clock that is not set are not followed: time goes on as the steady clock does, until
/// the clock is set and may be believed again.
class SteadyTime {
 public:
  /// @param wall    what the computer's clock says
  /// @param steady  time since some moment in the past, always forward
  /// @param set     whether the clock may be believed
  Instant now(Instant wall, Seconds steady, bool set) {
    if (set || !begun_) begun_ = wall - steady;
    return *begun_ + steady;
  }

 private:
  std::optional<Instant> begun_;
};

class Timekeeper {
 public:
  /// The wall clock. Copies share what they know of it.
  Timekeeper() = default;
  /// An exercise: starts at `from`, each real second counts `pace` seconds.
  Timekeeper(Instant from, double pace);

  Instant now() const;
  /// Whether stamps may be trusted (always in an exercise).
  bool set() const;
  /// How long to really wait until `wake`, not below 20 ms.
  std::chrono::milliseconds wait_until(Instant wake) const;
  bool exercise() const { return from_.has_value(); }

 private:
  struct Shared {
    std::mutex mutex;
    SteadyTime time;
  };
  std::shared_ptr<Shared> shared_ = std::make_shared<Shared>();
  std::optional<Instant> from_;
  std::chrono::steady_clock::time_point started_{};
  double pace_ = 1.0;
};

}  // namespace antherd::service
