// How sure we are of the flowering window: one factor k ~ N(m, σ²) on all requirements, corrected
// by scouting notes (science §5, "Uncertainty" and "Scouting").
#pragma once

#include "core/crop/traits.hpp"
#include "core/units/quantity.hpp"

namespace antherd::crop {

struct Belief {
  double mean = 1.0;
  double sd = 0.15;
};

/// Standard normal distribution function. Φ(−1.6448536) = 0.05 (any table of the normal).
/// Source: Φ(z) = erfc(−z/√2)/2, Abramowitz & Stegun 26.2.29.
double normal_probability(double z);

/// Where flowering is likely to be, as thresholds on thermal time. All °C·d.
struct FlowerOdds {
  double begins = 0;    // req60 m
  double lasts = 0;     // L = req69 − req60
  double sd_begin = 0;  // s0 = req60 σ
  double sd_end = 0;    // s1 = √(s0² + (0.25 L)²)

  /// P_begun = Φ((TT − req60 m)/s0). Source: science §5.
  double begun(ThermalTime time) const;
  /// P_over = Φ((TT − (req60 m + L))/s1). Source: science §5.
  double over(ThermalTime time) const;
  /// P_flower = max(0, P_begun − P_over). Source: science §5.
  double in_flower(ThermalTime time) const;
  /// Thermal time at which P_begun reaches 0.05 and P_over 0.95.
  ThermalTime opens() const;
  ThermalTime closes() const;
  /// Inside the flowering window: P_begun ≥ 0.05 and P_over < 0.95.
  bool window(ThermalTime time) const;
};

/// @param filled_share  of the hours since sowing or anchoring, 0…1: widens σ by 0.3 × share
FlowerOdds odds(const Requirements& needs, const Belief& belief, double filled_share);

/// What a scouting note says of k.
struct Observation {
  double factor = 1.0;  // k_obs = TT / r
  double sd = 0.02;     // σ_obs
  ThermalTime reached;  // r
};

/// Reads a note: stage 51…69, whether it began that day, TT at noon, mean daily units of the last
/// 10 days (°C·d per day). Codes between the four words are exact. Source: science §5.
Observation observe(int stage, bool began, ThermalTime at_noon, double mean_daily_units,
                    const Requirements& needs);

/// Whether an observation lies within 3 combined σ of a belief.
bool agrees(const Belief& belief, const Observation& seen);

/// Conjugate update, precision-weighted. N(1, 0.2²) with 1.2 ± 0.2 gives 1.1 ± 0.1414.
/// Source: normal–normal conjugacy (any text on Bayesian inference).
Belief update(const Belief& belief, const Observation& seen);

}  // namespace antherd::crop
