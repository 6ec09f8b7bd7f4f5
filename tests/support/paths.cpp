#include "support/paths.hpp"

namespace paths {

std::string source() { return ANTHERD_SOURCE; }
std::string build() { return ANTHERD_BUILD; }

}  // namespace paths
