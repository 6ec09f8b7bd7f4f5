// What a season's checks found: each with the rule that was broken, the season, the seed and the
// moment, so that it can be run again.
#pragma once

#include <map>
#include <string>
#include <vector>

#include "core/units/time.hpp"

namespace simulation {

using namespace antherd;

class Complaints {
 public:
  Complaints(std::string season, const Calendar* calendar)
      : season_(std::move(season)), calendar_(calendar) {}
  void set_calendar(const Calendar* calendar) { calendar_ = calendar; }
  void at(Instant moment) { moment_ = moment; }
  /// Of each rule the first three are kept: one mistake mostly shows many times.
  void add(const std::string& rule, const std::string& what);
  const std::vector<std::string>& all() const { return all_; }
  std::string moment_text() const;

 private:
  std::string season_;
  const Calendar* calendar_;
  Instant moment_{};
  std::vector<std::string> all_;
  std::map<std::string, int> counts_;  // by rule
};

/// "2026-07-14 20:00" by a calendar.
std::string clock_text(const Calendar& calendar, Instant at);

}  // namespace simulation
