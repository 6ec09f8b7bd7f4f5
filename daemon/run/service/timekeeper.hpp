// What time it is for the service: the wall clock, or in an exercise a paced clock that starts at
// a chosen moment and runs faster. It must not know what anybody waits for.
#pragma once

#include <chrono>
#include <optional>

#include "core/units/time.hpp"

namespace antherd::service {

class Timekeeper {
 public:
  /// The wall clock.
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
  std::optional<Instant> from_;
  std::chrono::steady_clock::time_point started_{};
  double pace_ = 1.0;
};

}  // namespace antherd::service
