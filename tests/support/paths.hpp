// Where this tree and its build lie. Functions, so that one file alone depends on the paths.
#pragma once

#include <string>

namespace paths {

std::string source();  // the project's root
std::string build();   // the build folder

}  // namespace paths
