// Thermal time and stages: how far a crop has come (science §5). It must not know where in the
// season anything matters, nor who asks.
#pragma once

#include <optional>

#include "core/crop/traits.hpp"
#include "core/units/quantity.hpp"

namespace antherd::crop {

/// Development unit of an hour, °C (its 24th part is the hour's share of a °C·d): 0 at or below
/// 3 °C, T − 3 up to 22, 19 from 22 to 30, falling linearly to 0 at 45. unit(25 °C) = 19.
/// Source: cardinal temperatures 1–4 °C across studies (Bois et al. 2006; Präger et al. 2019),
/// 3 °C is the common bookkeeping base; science §5.
double development_unit(Celsius t);

/// Photoperiod factor between stages 09 and 60: max(0.5, 1 − s (P − Pc)) for P > Pc, else 1.
/// Day length 0…24 h. early at 15.35 h: 0.992. Source: Präger et al. 2019 for early; science §5.
double photoperiod_factor(double day_length_hours, const Photoperiod& photoperiod);

/// Thermal time that a BBCH code asks for, linear between the listed stages; codes 0…89.
/// coastal, 75: 970 + (1300 − 970) · 6/20 = 1069. Source: science §5.
ThermalTime requirement(int stage, const Requirements& needs);

/// BBCH stage reached at a thermal time when all requirements are multiplied by `factor`;
/// 0…89, linear between the listed stages. coastal at 700, factor 1: 60. Source: science §5.
double stage_at(ThermalTime time, const Requirements& needs, double factor);

/// The next of 51, 60, 65, 69, 89 after a stage that a note may mean "at least, not yet the next".
std::optional<int> next_scouted_stage(int stage);

}  // namespace antherd::crop
