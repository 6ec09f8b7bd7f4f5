// See development.hpp.
#include "core/crop/development.hpp"

#include <algorithm>
#include <array>
#include <utility>

namespace antherd::crop {
namespace {

using Point = std::pair<double, double>;  // stage, °C·d

std::array<Point, 7> points(const Requirements& needs) {
  return {{{0, 0},
           {9, needs.emerged.value},
           {51, needs.buds.value},
           {60, needs.first_anthers.value},
           {65, needs.full_flower.value},
           {69, needs.flowers_done.value},
           {89, needs.ripe.value}}};
}

}  // namespace

double development_unit(Celsius t) {
  constexpr double base = 3.0, plateau_from = 22.0, plateau_to = 30.0, ceiling = 45.0;
  constexpr double plateau = plateau_from - base;
  if (t.value <= base || t.value >= ceiling) return 0.0;
  if (t.value < plateau_from) return t.value - base;
  if (t.value <= plateau_to) return plateau;
  return plateau * (ceiling - t.value) / (ceiling - plateau_to);
}

double photoperiod_factor(double day_length_hours, const Photoperiod& photoperiod) {
  const double excess = day_length_hours - photoperiod.critical_hours;
  return excess <= 0 ? 1.0 : std::max(0.5, 1.0 - photoperiod.slope_per_hour * excess);
}

ThermalTime requirement(int stage, const Requirements& needs) {
  const auto table = points(needs);
  for (std::size_t i = 1; i < table.size(); ++i) {
    if (stage > table[i].first) continue;
    const auto [s0, t0] = table[i - 1];
    const auto [s1, t1] = table[i];
    return ThermalTime(t0 + (t1 - t0) * (stage - s0) / (s1 - s0));
  }
  return needs.ripe;
}

double stage_at(ThermalTime time, const Requirements& needs, double factor) {
  const auto table = points(needs);
  for (std::size_t i = 1; i < table.size(); ++i) {
    const double t0 = table[i - 1].second * factor;
    const double t1 = table[i].second * factor;
    if (time.value >= t1) continue;
    return table[i - 1].first + (table[i].first - table[i - 1].first) *
                                    (std::max(time.value, t0) - t0) / (t1 - t0);
  }
  return 89.0;
}

std::optional<int> next_scouted_stage(int stage) {
  switch (stage) {
    case 51: return 60;
    case 60: return 65;
    case 65: return 69;
    case 69: return 89;
    default: return std::nullopt;
  }
}

}  // namespace antherd::crop
