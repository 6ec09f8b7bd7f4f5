// See exposure.hpp.
#include "core/season/exposure.hpp"

#include <algorithm>
#include <cmath>

#include "core/crop/flowers.hpp"
#include "core/risk/heat.hpp"

namespace antherd::season {
namespace {

using std::chrono::days;

constexpr int buds_hurt = 7;  // days before opening in which heat still reaches a flower

/// Flowers by the day of their opening, past and due, by what is believed now.
std::vector<DayExposure> openings(const Phenology& crop, const Plan& plan) {
  const auto odds = crop.odds(plan);
  const auto opened = [&](double time) {
    return crop::share_opened(100.0 * (time - odds.begins) / odds.lasts);
  };
  std::vector<DayExposure> found;
  double before = opened(crop.day_ends.front().second);
  const auto add = [&](CivilDay day, double time) {
    const double by_now = opened(time);
    const bool cut = plan.field.harvested && day > *plan.field.harvested;
    if (by_now > before && !cut) found.push_back({day, false, by_now - before, 0, 0});
    before = by_now;
  };
  for (const auto& [day, time] : crop.day_ends) add(day, time);
  const CivilDay today = crop.day_ends.back().first;
  for (int ahead = 1; ahead <= buds_hurt; ++ahead) {
    add(today + days{ahead}, crop.time.value + ahead * crop.units.mean_10_days());
  }
  return found;
}

const DayHeat* heat_on(std::span<const DayHeat> heat, CivilDay day) {
  const auto at = std::lower_bound(heat.begin(), heat.end(), day,
                                   [](const DayHeat& h, CivilDay d) { return h.date < d; });
  return at != heat.end() && at->date == day ? &*at : nullptr;
}

/// The worst day for a flower that opens on `day`; of equal ones the last.
const DayHeat* worst_before(std::span<const DayHeat> heat, CivilDay day) {
  const DayHeat* worst = nullptr;
  for (int back = buds_hurt; back >= 0; --back) {
    const DayHeat* one = heat_on(heat, day - days{back});
    if (one != nullptr && (worst == nullptr || one->high >= worst->high)) worst = one;
  }
  return worst;
}

DayExposure& day_of(std::vector<DayExposure>& all, CivilDay day) {
  const auto at = std::lower_bound(all.begin(), all.end(), day,
                                   [](const DayExposure& one, CivilDay d) { return one.date < d; });
  if (at != all.end() && at->date == day) return *at;
  DayExposure fresh;
  fresh.date = day;
  return *all.insert(at, fresh);
}

}  // namespace

double Exposure::exposed_until(CivilDay day) const {
  double sum = 0;
  for (const DayExposure& one : days) {
    if (one.severe && one.date <= day) sum += one.share;
  }
  return sum;
}

std::optional<DayHeat> day_heat(CivilDay date, bool severe,
                                std::span<const std::pair<HourStart, double>> hours,
                                Instant sunrise, Instant sunset) {
  constexpr double open_after = 6.0, spread = 2.0;  // hours after sunrise, sd
  double low = 0, low_weight = 0, high = 0, high_weight = 0;
  for (const auto& [start, t] : hours) {
    const Instant middle = middle_of(start);
    if (middle < sunrise || middle > sunset) continue;
    const double off = static_cast<double>((middle - sunrise).count()) / 3600.0 - open_after;
    const double weight = std::exp(-off * off / (2.0 * spread * spread));
    low += weight * risk::sterile_share(Celsius(t), Celsius(40));
    low_weight += weight;
    high += risk::sterile_share(Celsius(t), Celsius(35));
    high_weight += 1;
  }
  if (high_weight == 0 || low_weight == 0) return std::nullopt;
  return DayHeat{date, severe, low / low_weight, high / high_weight};
}

Exposure exposure_of(const Phenology& crop, const Plan& plan, std::span<const DayHeat> heat) {
  Exposure result;
  if (!crop.known() || crop.day_ends.empty()) return result;
  const CivilDay today = crop.day_ends.back().first;
  for (const DayExposure& opening : openings(crop, plan)) {
    if (opening.date <= today) {
      DayExposure& day = day_of(result.days, opening.date);
      day.share = opening.share;
      if (const DayHeat* own = heat_on(heat, opening.date)) {
        day.severe = own->severe;
        day.low = own->low * opening.share;
      }
    }
    if (const DayHeat* worst = worst_before(heat, opening.date)) {
      day_of(result.days, worst->date).high += worst->high * opening.share;
    }
  }
  for (DayExposure& day : result.days) {
    if (const DayHeat* own = heat_on(heat, day.date)) day.severe = own->severe;
    if (day.severe) result.exposed += day.share;
    result.low += day.low;
    result.high += day.high;
  }
  result.exposed = std::min(1.0, result.exposed);
  result.high = std::min(1.0, std::max(result.high, result.low));
  return result;
}

}  // namespace antherd::season
