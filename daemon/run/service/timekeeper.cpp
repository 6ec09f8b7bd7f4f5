// See timekeeper.hpp.
#include "run/service/timekeeper.hpp"

#include <algorithm>

#include "edge/clock/clock.hpp"

namespace antherd::service {

Timekeeper::Timekeeper(Instant from, double pace)
    : from_(from), started_(clock::steady_now()), pace_(pace) {}

Instant Timekeeper::now() const {
  if (!from_) {
    const std::lock_guard lock(shared_->mutex);
    const auto steady = std::chrono::floor<Seconds>(clock::steady_now().time_since_epoch());
    return shared_->time.now(clock::wall_now(), steady, set());
  }
  const std::chrono::duration<double> real = clock::steady_now() - started_;
  const double passed = real.count() * pace_;
  return *from_ + Seconds{static_cast<long long>(passed)};
}

bool Timekeeper::set() const { return from_ || clock::wall_clock_set(); }

std::chrono::milliseconds Timekeeper::wait_until(Instant wake) const {
  const double seconds = static_cast<double>((wake - now()).count()) / pace_;
  return std::chrono::milliseconds{std::max(20L, static_cast<long>(seconds * 1000.0))};
}

}  // namespace antherd::service
