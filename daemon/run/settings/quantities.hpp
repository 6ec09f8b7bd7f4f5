// Quantities as people write them: "780 m", "95 degF", "5 min", "0.5 in". Whole text or a Failure,
// whose `what_next` shows how to write it. This file must not know who asks.
#pragma once

#include <string_view>

#include "core/failures/result.hpp"
#include "core/units/quantity.hpp"
#include "core/units/time.hpp"

namespace antherd::settings {

/// Temperature point: degC, degF, K; also °C and °F. °F values are rounded to 0.1 °C (science §0).
Result<Celsius> parse_temperature(std::string_view text);
/// Temperature difference, sign allowed: "+0.8 degC", "-1 degF".
Result<CelsiusDifference> parse_difference(std::string_view text);
Result<Metre> parse_length(std::string_view text);       // m, ft, km
Result<Millimetre> parse_depth(std::string_view text);   // mm, cm, in; not negative
Result<Percent> parse_humidity(std::string_view text);   // "90 %", 0…100
Result<ThermalTime> parse_thermal_time(std::string_view text);  // degC d, degF d
Result<Seconds> parse_duration(std::string_view text);   // s, min, h, d; also "1 h 30 min"
/// "22:00" → 1320 minutes after midnight; 00:00…23:59.
Result<int> parse_clock(std::string_view text);
/// A civil time without zone: "2026-07-14 20:00", also with T and with seconds.
Result<CivilTime> parse_civil_time(std::string_view text);
Result<CivilDay> parse_day(std::string_view text);       // 2026-07-14, years 1970…2106
/// A plain number, locale-free, whole text, finite.
Result<double> parse_number(std::string_view text);

}  // namespace antherd::settings
