// See result.hpp.
#include "core/failures/result.hpp"

#include <cstdio>
#include <cstdlib>

namespace antherd {

std::string Failure::sentence() const {
  std::string text = "could not " + what;
  if (!on_what.empty()) text += " (" + on_what + ")";
  if (!why.empty()) text += ": " + why;
  if (!what_next.empty()) text += "; " + what_next;
  return text;
}

void broken(const char* condition, const char* file, int line) {
  std::fprintf(stderr, "antherd: a promise of its own code is broken: %s (%s:%d)\n", condition,
               file, line);
  std::abort();
}

}  // namespace antherd
