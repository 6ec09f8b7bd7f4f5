// The words of the levels; see rules.hpp. It must not know who prints them.
#include "core/risk/rules.hpp"

namespace antherd::risk {

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
