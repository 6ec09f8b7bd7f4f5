// The words of irrigation; see field.hpp.
#include "core/field/field.hpp"

namespace antherd::field {

const char* name_of(Method method) {
  switch (method) {
    case Method::none:
      return "none";
    case Method::overhead:
      return "overhead";
    case Method::drip:
      return "drip";
    case Method::furrow:
      return "furrow";
  }
  return "none";
}

}  // namespace antherd::field
