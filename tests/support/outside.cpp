#include "support/outside.hpp"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <filesystem>
#include <fstream>

#include "support/paths.hpp"

namespace outside {

void Largest::see(double ours, double theirs) {
  const double difference = std::abs(ours - theirs);
  // What is not a number is as wrong as can be.
  value_ = std::isnan(difference) ? INFINITY : std::max(value_, difference);
  ++compared_;
}

void report(const std::string& what, const std::string& against, const Largest& largest,
            double bound, const std::string& unit) {
  char numbers[160];
  std::snprintf(numbers, sizeof numbers, "%ld compared, largest difference %.3g %s (bound %.3g)",
                largest.compared(), largest.value(), unit.c_str(), bound);
  report(what, against, numbers);
}

void report(const std::string& what, const std::string& against, const std::string& outcome) {
  const std::filesystem::path folder = std::filesystem::path(paths::build()) / "outside";
  std::filesystem::create_directories(folder);
  std::string name = what + "-" + against;
  for (char& letter : name) {
    if (std::isalnum(static_cast<unsigned char>(letter)) == 0) letter = '-';
  }
  std::ofstream(folder / (name.substr(0, 120) + ".txt"))
      << what << " | " << against << " | " << outcome << "\n";
}

}  // namespace outside
