// How a station writes its time, and in which zone: the checks of the settings. Must not read any
// time itself.
#pragma once

#include <optional>
#include <string>
#include <string_view>

#include "core/failures/result.hpp"
#include "core/units/time.hpp"

namespace antherd::settings {

/// What is wrong with a time form such as "%Y-%m-%d %H:%M", "iso", "unix" or "unix_ms"; nothing
/// when it gives a date and an hour with known letters only.
std::optional<std::string> fault_of_time_form(std::string_view form);

/// utc | farm | +HH:MM | IANA name.
Result<Calendar> zone_of(const std::string& name, const Calendar& farm_zone);

}  // namespace antherd::settings
