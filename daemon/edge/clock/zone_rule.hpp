// The rule at the end of a zone file, which holds after the last change that the file lists.
// Pure; must not know any zone's name.
#pragma once

#include <optional>
#include <string_view>
#include <vector>

#include "core/units/time.hpp"

namespace antherd::clock {

/// Offsets from a POSIX TZ text with the extensions of RFC 8536 §3.3.1, such as
/// "PST8PDT,M3.2.0,M11.1.0" or "<+1030>-10:30<+11>-11,M10.1.0,M4.1.0".
/// @param first_year, last_year  the years whose changes are wanted, both included
/// @return the changes in time order; of a rule without summer time one change, at the start of
///         first_year (UTC); nothing for a text that does not follow the form.
/// Source: IEEE Std 1003.1-2017 ch. 8.3 "TZ"; RFC 8536 §3.3.1.
std::optional<std::vector<Calendar::Change>> changes_by_rule(std::string_view rule, int first_year,
                                                             int last_year);

}  // namespace antherd::clock
