// See belief.hpp.
#include "core/crop/belief.hpp"

#include <algorithm>
#include <cmath>

#include "core/crop/development.hpp"

namespace antherd::crop {
namespace {

constexpr double five_percent_point = -1.6448536269514722;  // Φ⁻¹(0.05)
constexpr double floor_sd = 0.02;

}  // namespace

double normal_probability(double z) { return 0.5 * std::erfc(-z / std::sqrt(2.0)); }

double FlowerOdds::begun(ThermalTime time) const {
  return normal_probability((time.value - begins) / sd_begin);
}
double FlowerOdds::over(ThermalTime time) const {
  return normal_probability((time.value - (begins + lasts)) / sd_end);
}
double FlowerOdds::in_flower(ThermalTime time) const {
  return std::max(0.0, begun(time) - over(time));
}
ThermalTime FlowerOdds::opens() const {
  return ThermalTime(begins + five_percent_point * sd_begin);
}
ThermalTime FlowerOdds::closes() const {
  return ThermalTime(begins + lasts - five_percent_point * sd_end);
}
bool FlowerOdds::window(ThermalTime time) const { return time >= opens() && time < closes(); }

FlowerOdds odds(const Requirements& needs, const Belief& belief, double filled_share) {
  FlowerOdds result;
  const double sigma = belief.sd + 0.3 * filled_share;
  result.begins = needs.first_anthers.value * belief.mean;
  result.lasts = (needs.flowers_done - needs.first_anthers).value;
  result.sd_begin = needs.first_anthers.value * sigma;
  result.sd_end = std::hypot(result.sd_begin, 0.25 * result.lasts);
  return result;
}

Observation observe(int stage, bool began, ThermalTime at_noon, double mean_daily_units,
                    const Requirements& needs) {
  double r = requirement(stage, needs).value;
  double quarter = 0.0;
  const bool a_word = stage == 51 || stage == 65 || stage == 69;
  if (a_word && !began) {
    const double next = requirement(*next_scouted_stage(stage), needs).value;
    quarter = (next - r) / 4.0;
    r = (r + next) / 2.0;
  }
  const double beyond = std::max(0.0, r - needs.first_anthers.value);
  const double variance = std::pow(3.0 * mean_daily_units / r, 2) + std::pow(quarter / r, 2) +
                          std::pow(0.25 * beyond / r, 2);
  Observation seen;
  seen.factor = at_noon.value / r;
  seen.sd = std::max(floor_sd, std::sqrt(variance));
  seen.reached = ThermalTime(r);
  return seen;
}

bool agrees(const Belief& belief, const Observation& seen) {
  return std::abs(seen.factor - belief.mean) <= 3.0 * std::hypot(belief.sd, seen.sd);
}

Belief update(const Belief& belief, const Observation& seen) {
  const double prior = 1.0 / (belief.sd * belief.sd);
  const double note = 1.0 / (seen.sd * seen.sd);
  return Belief{(belief.mean * prior + seen.factor * note) / (prior + note),
                std::sqrt(1.0 / (prior + note))};
}

}  // namespace antherd::crop
