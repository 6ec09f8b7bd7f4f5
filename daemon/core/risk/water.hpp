// Soil water of a field, day by day: depletion of the root zone and water stress (science §9;
// FAO-56, Allen et al. 1998, chapters 6 to 8). Context for both warnings; it opens no alert.
// It must not know dates, irrigation logs or weather records.
#pragma once

#include <optional>
#include <span>
#include <string_view>
#include <vector>

#include "core/units/quantity.hpp"

namespace antherd::risk {

/// Water that a soil holds between field capacity and wilting point, mm per m of depth: the middle
/// of the printed range. Nothing for another name. "silt loam": (0.13 + 0.19)/2 → 160 mm/m.
/// Source: FAO-56 table 19 (from memory).
std::optional<double> soil_water(std::string_view texture);

/// Crop coefficient by BBCH stage: 0.52 up to 51, rising to 1.00 at 60, level to 75, falling to
/// 0.70 at 89. Source: Garcia et al. 2003 (from memory); the stages between are linear (science
/// §9).
double crop_coefficient(double stage);

/// Depth of roots: 0.2 m at emergence (09) to 1.0 m at 60, linear in stage. Source: science §9.
Metre root_depth(double stage);

/// Reference evapotranspiration of a day from its extremes, mm, not below 0.
/// @param extraterrestrial  Ra of the day, MJ m⁻² d⁻¹
/// Source: FAO-56 eq. 52 (Hargreaves). Example 20 (from memory): Tmax 26.6, Tmin 14.8 °C,
/// Ra 40.55: 5.0 mm.
Millimetre hargreaves(Celsius highest, Celsius lowest, double extraterrestrial);

/// Share of the available water that may go before the crop is stressed:
/// p = 0.55 + 0.04 (5 − ETc), within 0.1…0.8. ETc in mm/d. Source: FAO-56 table 22 note.
double readily_available_share(Millimetre crop_use);

/// Stress coefficient Ks = (TAW − Dr)/((1 − p) TAW), 1 while Dr ≤ p TAW, 0…1.
/// Source: FAO-56 eq. 84. TAW 100 mm, p 0.55, Dr 80 mm: 0.4444.
double stress(Millimetre depletion, Millimetre total, double share);

/// What a day brings to the root zone.
struct WaterDay {
  double stage = 0;         // BBCH
  Millimetre reference{0};  // ETo
  Millimetre rain{0};
  Millimetre irrigation{0};         // of known depth
  bool irrigation_unknown = false;  // some of unknown depth as well
};

/// Depletion below field capacity. What the soil held at sowing may be unknown: then a wet and a
/// dry account are kept, and the answer is known once they have met.
struct WaterAccount {
  double water_per_metre = 0;      // mm/m
  double initial_share = 1.0;      // of it, held by soil that roots reach later (wet account)
  double initial_share_dry = 1.0;  // … (dry account)
  Metre roots{0};
  Millimetre depletion{0};      // wet account
  Millimetre depletion_dry{0};  // dry account
  double crop_use = 0;          // ETc of the last days, mm/d, running mean
  int days = 0;
  bool unknown_start = false;
  bool ran_dry = false;  // of an unknown start: not known again before it is filled

  Millimetre total() const { return Millimetre(water_per_metre * roots.value); }
  /// Both accounts within a twentieth of the total: the depletion is known. Of an unknown start two
  /// accounts that met by running dry know nothing: a crop that lives has had water not logged.
  bool known() const;
  /// Water missing from the root zone, mm: the middle of the two accounts; nothing while unknown.
  /// Source: FAO-56 eq. 85, the root zone's depletion Dr at the day's end.
  std::optional<Millimetre> missing() const;
};

/// @param held_at_sowing  1 full, 0.5 half, nothing: unknown (between wilting point and full)
WaterAccount open_account(double water_per_metre, std::optional<double> held_at_sowing);

/// Books one day. @return Ks of the day, nothing while the accounts have not met
/// Source: FAO-56 eq. 85 without capillary rise and runoff; surplus drains.
std::optional<double> book_day(WaterAccount& account, const WaterDay& day);

/// What one irrigation did to the root zone.
struct Poured {
  Millimetre before{0};   // depletion
  Millimetre after{0};    // depletion
  Millimetre drained{0};  // more than the roots can hold
};

/// What irrigations of a day do, one after the other and after the day's rain, before the crop uses
/// any of it; asked before the day is booked. Nothing of one while the depletion is unknown, and
/// from the first of unknown depth on.
/// @param depths  in their order; their sum is the day's irrigation
std::vector<std::optional<Poured>> pour(const WaterAccount& account, const WaterDay& day,
                                        std::span<const std::optional<Millimetre>> depths);

/// How much warmer the canopy is than the air in a sunny hour (more than 400 W/m²), −5…5 °C:
/// d0 + (1 − Ks)(5 − d0), d0 = 2.5 − 1.9 VPD. At 2 kPa: −1.3 at Ks 1, 1.85 at Ks 0.5.
/// Source: baseline of sugar beet, a relative, Idso 1982 (from memory); the transfer to this crop
/// is a judgement (science §9).
CelsiusDifference canopy_minus_air(Kilopascal deficit, double ks);

/// Whole days until the readily available water is gone at the present use, 0 when it is; nothing
/// while unknown or without use.
std::optional<int> days_to_stress(const WaterAccount& account);

}  // namespace antherd::risk
