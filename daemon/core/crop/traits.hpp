// The numbers of a crop type (science §5). All are judgements assembled from calibrated models and
// field calendars; a field may bring its own.
#pragma once

#include <optional>
#include <string>
#include <string_view>

#include "core/units/quantity.hpp"

namespace antherd::crop {

/// Thermal time from sowing to a BBCH stage, °C·d; ascending.
struct Requirements {
  ThermalTime emerged{60};         // 09
  ThermalTime buds{400};           // 51
  ThermalTime first_anthers{700};  // 60
  ThermalTime full_flower{810};    // 65
  ThermalTime flowers_done{970};   // 69
  ThermalTime ripe{1300};          // 89
};

struct Photoperiod {
  double critical_hours = 13.0;
  double slope_per_hour = 0.02;
};

struct Traits {
  std::string name = "coastal";
  Requirements needs;
  double prior_sigma = 0.15;  // sd of the factor k on the requirements
  Photoperiod photoperiod;
};

/// early | coastal | highland; nothing for another name.
std::optional<Traits> traits_of(std::string_view crop_type);

}  // namespace antherd::crop
