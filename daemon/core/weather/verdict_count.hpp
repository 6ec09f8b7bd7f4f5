// A station's own history: how many of its hours were good, doubtful or wrong, and why. Counted
// from its hours; nothing is kept for it. This file must not know what an hour is used for.
#pragma once

#include <map>
#include <span>
#include <string>

#include "core/weather/hour.hpp"

namespace antherd::weather {

/// Hours of a stretch of time by their gravest flag. A flag that only waits for a later reading to
/// confirm a jump counts as suspect.
struct VerdictCount {
  int expected = 0;  // whole hours of the stretch
  int good = 0, suspect = 0, wrong = 0;
  std::map<std::string, int> reasons;  // "humidity stuck" → hours; several may hold in one hour

  int seen() const { return good + suspect + wrong; }
  int missing() const { return expected > seen() ? expected - seen() : 0; }
};

/// @param hours     one station's hours in time order, with suspicions written in
/// @param from, to  the stretch; hours that begin in [from, to)
/// @return counts only, never more hours than the stretch has
/// Source: science §3. By hand: 3 hours, one stuck, one of them missing: good 1, suspect 1.
VerdictCount count_verdicts(std::span<const Hour> hours, HourStart from, HourStart to);

}  // namespace antherd::weather
