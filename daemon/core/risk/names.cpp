// The words of the levels and of the film rules; see rules.hpp. It must not know who prints them.
#include "core/risk/rules.hpp"

namespace antherd::risk {

const char* name_of(Film film) {
  switch (film) {
    case Film::humidity:
      return "humidity";
    case Film::dew_point:
      return "dew_point";
    case Film::energy:
      return "energy";
  }
  return "humidity";
}

const char* name_of(Level level) {
  switch (level) {
    case Level::none:
      return "none";
    case Level::moderate:
      return "Moderate";
    case Level::severe:
      return "Severe";
    case Level::extreme:
      return "Extreme";
  }
  return "none";
}

}  // namespace antherd::risk
