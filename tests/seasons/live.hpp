// A season lived through: the service's own desk, turned by the test's clock, with the station's
// files growing and the grower writing things down. What it said is kept for the other files.
#pragma once

#include <map>
#include <string>
#include <vector>

#include "core/outbox/outbox.hpp"
#include "core/season/fold.hpp"
#include "seasons/scenario.hpp"

namespace antherd::seasons {

struct FieldSeason {
  season::Plan plan;
  season::State state;
  season::Chronicle chronicle;
  std::optional<CivilDay> stage_day(int stage) const;
};

struct Lived {
  std::vector<outbox::Item> letters;          // in the order in which they were decided
  std::map<std::string, FieldSeason> fields;  // as the season stands at its end
  std::vector<alerts::Episode> of_stations;   // as they were believed in their hours
};

/// The days of a season on which something of its own happens, with some days around them, are
/// turned each hour or as often as the file says. Other days are turned at 07:00 and 19:00, when
/// the calendar asks for stages and lines, and on Mondays at 06:00, so that a season takes a
/// second.
Lived live_through(const Scenario& scenario);

}  // namespace antherd::seasons
