// What a comparison with something outside the project came to, in one line: tests/run prints these
// lines at its end. A line stands in a file of the build folder until the check runs again.
#pragma once

#include <string>

namespace outside {

/// Largest difference seen while two sources are compared value by value.
class Largest {
 public:
  void see(double ours, double theirs);
  double value() const { return value_; }
  long compared() const { return compared_; }

 private:
  double value_ = 0;
  long compared_ = 0;
};

/// Keeps the line of one check.
/// @param what     what was checked: "dew point"
/// @param against  the outside source with its version: "psychrolib 1.1.1, npm"
/// @param bound    the difference that the check allows, in `unit`
void report(const std::string& what, const std::string& against, const Largest& largest,
            double bound, const std::string& unit);

/// The same in free words, for checks that count: "2,400 stations, 7 refused, as SQL counts them".
void report(const std::string& what, const std::string& against, const std::string& outcome);

}  // namespace outside
