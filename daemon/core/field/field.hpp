// What the grower told us once a season: the field. Numbers of crop types live in core/crop, of
// warnings in core/risk; here stands only what is true of this piece of ground and this sowing.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "core/units/quantity.hpp"
#include "core/units/time.hpp"

namespace antherd::field {

enum class Method { none, overhead, drip, furrow };

/// Temperature difference to the station, measured by the grower; replaces the lapse rate.
struct Offset {
  CelsiusDifference day{0};
  CelsiusDifference night{0};
};

struct Field {
  std::string name;
  std::vector<std::string> stations;   // in order: the first with data gives the hour
  Degree latitude{0};
  Degree longitude{0};
  Metre elevation{0};
  CivilDay sown{};                     // farm time
  std::optional<CivilDay> harvested;   // the season ends with this day
  std::string crop_type;               // early | coastal | highland | a table of the settings
  Method irrigation = Method::none;
  int sets = 1;
  std::string soil;                    // FAO-56 texture name, empty when not said
  std::optional<double> soil_water_at_sowing;  // 1 full, 0.5 half, nothing: unknown
  std::optional<Offset> offset;        // measured against the first station
  bool photoperiod = false;
};

const char* name_of(Method method);

}  // namespace antherd::field
