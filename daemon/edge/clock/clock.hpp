// The only place that asks what time it is, and the only one that reads the zone database.
#pragma once

#include <chrono>
#include <string>

#include "core/failures/result.hpp"
#include "core/units/time.hpp"

namespace antherd::clock {

/// The wall clock, UTC, to the second.
Instant wall_now();

/// A clock that only moves forward, for intervals; not comparable with the wall's.
std::chrono::steady_clock::time_point steady_now();

/// Whether the kernel holds the wall clock for synchronised (adjtimex: maximum error < 16 s).
bool wall_clock_set();

/// One IANA zone's offsets as data, from 1970 to 2106. Fails for a name that the machine's zone
/// database does not have (it says so, and gives the nearest known names).
Result<Calendar> calendar_of(const std::string& iana_name);

}  // namespace antherd::clock
