// The three crop types; see traits.hpp. The numbers are judgements (science §5).
#include "core/crop/traits.hpp"

namespace antherd::crop {

std::optional<Traits> traits_of(std::string_view crop_type) {
  const auto needs = [](double r09, double r51, double r60, double r65, double r69, double r89) {
    return Requirements{ThermalTime(r09), ThermalTime(r51), ThermalTime(r60),
                        ThermalTime(r65), ThermalTime(r69), ThermalTime(r89)};
  };
  if (crop_type == "early") {  // day-neutral, northern-bred
    return Traits{"early", needs(60, 400, 650, 760, 930, 1400), 0.12, {14.35, 0.008}};
  }
  if (crop_type == "coastal") {  // sea-level, long-day tolerant
    return Traits{"coastal", needs(60, 400, 700, 810, 970, 1300), 0.15, {13.0, 0.02}};
  }
  if (crop_type == "highland") {  // day-length reactive
    return Traits{"highland", needs(60, 550, 900, 1030, 1230, 1900), 0.20, {12.5, 0.02}};
  }
  return std::nullopt;
}

}  // namespace antherd::crop
