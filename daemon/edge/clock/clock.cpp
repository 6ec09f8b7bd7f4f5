// The machine's wall clock; see clock.hpp.
#include "edge/clock/clock.hpp"

#include <sys/timex.h>

namespace antherd::clock {

Instant wall_now() { return std::chrono::floor<Seconds>(std::chrono::system_clock::now()); }

std::chrono::steady_clock::time_point steady_now() { return std::chrono::steady_clock::now(); }

bool wall_clock_set() {
  constexpr long unsynchronised_us = 16'000'000;  // the kernel's own bound (NTP_PHASE_LIMIT)
  timex state{};
  if (adjtimex(&state) == -1) return false;  // not allowed to ask: do not claim it
  return state.maxerror < unsynchronised_us;
}

}  // namespace antherd::clock
