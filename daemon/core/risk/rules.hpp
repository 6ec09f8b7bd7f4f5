// The thresholds of both hazards (science §6, §8). Defaults are the specification's; a field may
// bring its own heat and humid thresholds.
#pragma once

#include <cstddef>

#include "core/units/quantity.hpp"

namespace antherd::risk {

enum class Level { none = 0, moderate = 1, severe = 2, extreme = 3 };

struct HeatRules {
  Celsius sustained{32.2};
  Celsius severe{35.0};
  Celsius extreme{38.0};
};

/// What tells a humid film (dew, fog) where no sensor does.
enum class Film {
  humidity,   // constant relative humidity (science §7, the usual rule)
  dew_point,  // dew-point depression: 2.0 on, 3.8 off
  energy,     // energy balance of a leaf: dew falls out, is held and dries
};
inline constexpr std::size_t film_rules = 3;

struct HumidRules {
  double film_humidity = 95.0;       // % alone
  double film_humidity_calm = 90.0;  // % while drying < 0.1 mm/h
  Film film = Film::humidity;
  double bucket_mm = 0.2;
  double t_min = 3.0, t_best = 15.0, t_max = 26.0;  // °C, infection
  double w_min = 4.0, w_max = 12.0;                 // h
  double dry_out_humidity = 85.0;                   // %
};

struct Rules {
  HeatRules heat;
  HumidRules humid;
};

const char* name_of(Film film);    // "humidity", "dew_point", "energy", as in settings
const char* name_of(Level level);  // "none", "Moderate", "Severe", "Extreme" (CAP 1.2)

}  // namespace antherd::risk
