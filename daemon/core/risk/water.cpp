// See water.hpp.
#include "core/risk/water.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <utility>

namespace antherd::risk {
namespace {

constexpr double use_memory = 5.0;  // days that the running mean of crop use remembers

double between(double x, double x0, double y0, double x1, double y1) {
  return y0 + (y1 - y0) * (std::clamp(x, x0, x1) - x0) / (x1 - x0);
}

/// Roots reach new soil, and what is missing there. @return how much soil water it could hold, mm
double grow(WaterAccount& account, double stage) {
  const Metre roots = std::max(account.roots, root_depth(stage));
  const double grown = account.water_per_metre * (roots - account.roots).value;
  account.roots = roots;
  return grown;
}

/// One account's day. @return its stress before the day's use
double book(Millimetre& depletion, Millimetre new_soil, Millimetre total, double share,
            Millimetre use, Millimetre income) {
  depletion += new_soil;
  depletion = std::clamp(depletion - income, Millimetre(0), total);
  const double ks = stress(depletion, total, share);
  depletion = std::clamp(depletion + use * ks, Millimetre(0), total);
  return ks;
}

}  // namespace

std::optional<double> soil_water(std::string_view texture) {
  struct Row {
    std::string_view name;
    double low, high;  // m³/m³
  };
  static constexpr std::array<Row, 9> table{{{"sand", 0.05, 0.11},
                                             {"loamy sand", 0.06, 0.12},
                                             {"sandy loam", 0.11, 0.15},
                                             {"loam", 0.13, 0.18},
                                             {"silt loam", 0.13, 0.19},
                                             {"silt", 0.16, 0.20},
                                             {"silt clay loam", 0.13, 0.18},
                                             {"silty clay", 0.13, 0.19},
                                             {"clay", 0.12, 0.20}}};
  for (const Row& row : table) {
    if (row.name == texture) return 1000.0 * (row.low + row.high) / 2.0;
  }
  return std::nullopt;
}

double crop_coefficient(double stage) {
  if (stage < 60) return between(stage, 51, 0.52, 60, 1.00);
  return between(stage, 75, 1.00, 89, 0.70);
}

Metre root_depth(double stage) { return Metre(between(stage, 9, 0.2, 60, 1.0)); }

Millimetre hargreaves(Celsius highest, Celsius lowest, double extraterrestrial) {
  const double mean = (highest.value + lowest.value) / 2.0;
  const double range = std::max(0.0, (highest - lowest).value);
  const double water = 0.408 * extraterrestrial;  // MJ to mm, FAO-56 eq. 20
  return Millimetre(std::max(0.0, 0.0023 * (mean + 17.8) * std::sqrt(range) * water));
}

double readily_available_share(Millimetre crop_use) {
  return std::clamp(0.55 + 0.04 * (5.0 - crop_use.value), 0.1, 0.8);
}

double stress(Millimetre depletion, Millimetre total, double share) {
  if (total.value <= 0 || depletion <= total * share) return 1.0;
  return std::clamp((total - depletion) / (total * (1.0 - share)), 0.0, 1.0);
}

bool WaterAccount::known() const {
  const double all = total().value;
  if (all <= 0 || std::abs((depletion_dry - depletion).value) > all / 20.0) return false;
  return !unknown_start || !ran_dry;
}

std::optional<Millimetre> WaterAccount::missing() const {
  if (!known()) return std::nullopt;
  return (depletion + depletion_dry) / 2.0;
}

WaterAccount open_account(double water_per_metre, std::optional<double> held_at_sowing) {
  WaterAccount account;
  account.water_per_metre = water_per_metre;
  account.unknown_start = !held_at_sowing;
  account.initial_share = held_at_sowing.value_or(1.0);
  account.initial_share_dry = held_at_sowing.value_or(0.0);
  return account;
}

std::optional<double> book_day(WaterAccount& account, const WaterDay& day) {
  const double grown = grow(account, day.stage);
  const Millimetre use = day.reference * crop_coefficient(day.stage);
  account.crop_use = account.days == 0
                         ? use.value
                         : account.crop_use + (use.value - account.crop_use) / use_memory;
  ++account.days;
  const double share = readily_available_share(use);
  const Millimetre known_income = day.rain + day.irrigation;
  // An irrigation of unknown depth may have filled the root zone, or hardly wetted it.
  const Millimetre most = day.irrigation_unknown ? account.total() : known_income;
  const double ks = book(account.depletion, Millimetre(grown * (1 - account.initial_share)),
                         account.total(), share, use, std::max(most, known_income));
  const double ks_dry =
      book(account.depletion_dry, Millimetre(grown * (1 - account.initial_share_dry)),
           account.total(), share, use, known_income);
  const double all = account.total().value;
  if (account.depletion.value > 0.9 * all) account.ran_dry = true;
  if (account.depletion_dry.value - use.value <= all / 20.0) account.ran_dry = false;
  if (!account.known()) return std::nullopt;
  return (ks + ks_dry) / 2.0;
}

std::vector<std::optional<Poured>> pour(const WaterAccount& account, const WaterDay& day,
                                        std::span<const std::optional<Millimetre>> depths) {
  std::vector<std::optional<Poured>> poured(depths.size());
  WaterAccount filled = account;
  const double grown = grow(filled, day.stage);
  filled.depletion += Millimetre(grown * (1 - filled.initial_share));
  filled.depletion_dry += Millimetre(grown * (1 - filled.initial_share_dry));
  const auto missing = filled.missing();
  if (!missing) return poured;
  Millimetre depletion = std::max(Millimetre(0), *missing - day.rain);
  for (std::size_t i = 0; i < depths.size() && depths[i]; ++i) {
    const Millimetre after = std::max(Millimetre(0), depletion - *depths[i]);
    poured[i] = Poured{depletion, after, *depths[i] - (depletion - after)};
    depletion = after;
  }
  return poured;
}

CelsiusDifference canopy_minus_air(Kilopascal deficit, double ks) {
  const double watered = 2.5 - 1.9 * deficit.value;
  return CelsiusDifference(std::clamp(watered + (1 - ks) * (5 - watered), -5.0, 5.0));
}

std::optional<int> days_to_stress(const WaterAccount& account) {
  if (!account.known() || account.crop_use <= 0.1) return std::nullopt;
  const double share = readily_available_share(Millimetre(account.crop_use));
  const double left = (account.total() * share - account.depletion_dry).value;
  return std::max(0, static_cast<int>(std::floor(left / account.crop_use)));
}

}  // namespace antherd::risk
