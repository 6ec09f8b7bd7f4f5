// See complaints.hpp.
#include "complaints.hpp"

#include <cstdio>

namespace simulation {

std::string clock_text(const Calendar& calendar, Instant at) {
  const CivilTime local = calendar.civil(at);
  const auto day = std::chrono::floor<std::chrono::days>(local);
  const CivilDate date{day};
  const std::chrono::hh_mm_ss time{local - CivilTime(day)};
  char text[80];
  std::snprintf(text, sizeof text, "%04d-%02u-%02u %02d:%02d", static_cast<int>(date.year()),
                static_cast<unsigned>(date.month()), static_cast<unsigned>(date.day()),
                static_cast<int>(time.hours().count()), static_cast<int>(time.minutes().count()));
  return text;
}

std::string Complaints::moment_text() const {
  return calendar_ == nullptr ? "" : clock_text(*calendar_, moment_);
}

void Complaints::add(const std::string& rule, const std::string& what) {
  if (++counts_[rule] > 3) return;
  all_.push_back(season_ + ", " + moment_text() + ": " + rule + ": " + what);
}

}  // namespace simulation
