// What the settings mean, in words: the part of `check`'s plan that needs no store and no clock.
#pragma once

#include <string>

#include "run/settings/settings.hpp"

namespace antherd::settings {

/// The farm, who is told and how, every station with its columns, every field; several lines, each
/// ended by a newline, at most 100 columns where names allow. Never a secret.
std::string describe(const Settings& settings);

/// One station's or one field's part of it.
std::string describe(const Station& station, letters::Units units);
std::string describe(const FieldPlan& plan, letters::Units units);

/// "22:00"
std::string clock_text(int minute);
/// "5 min", "1 h 30 min", "400 d"
std::string duration_text(Seconds duration);

}  // namespace antherd::settings
