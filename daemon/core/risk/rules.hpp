// The thresholds of both hazards (science §6, §8). Defaults are the specification's; a field may
// bring its own heat and humid thresholds.
#pragma once

#include "core/units/quantity.hpp"

namespace antherd::risk {

enum class Level { none = 0, moderate = 1, severe = 2, extreme = 3 };

struct HeatRules {
  Celsius sustained{32.2};
  Celsius severe{35.0};
  Celsius extreme{38.0};
};

struct HumidRules {
  double film_humidity = 95.0;       // % alone
  double film_humidity_calm = 90.0;  // % while drying < 0.1 mm/h
  bool dew_point_film = false;       // use dew-point depression instead (2.0 on, 3.8 off)
  double bucket_mm = 0.2;
  double t_min = 3.0, t_best = 15.0, t_max = 26.0;  // °C, infection
  double w_min = 4.0, w_max = 12.0;                 // h
  double dry_out_humidity = 85.0;                   // %
};

struct Rules {
  HeatRules heat;
  HumidRules humid;
};

const char* name_of(Level level);  // "none", "Moderate", "Severe", "Extreme" (CAP 1.2)

}  // namespace antherd::risk
