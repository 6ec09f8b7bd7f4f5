// An episode: one stretch of trouble of one kind on one subject, from opening to close. Episodes
// come from facts alone; what was said of them is another matter (decide.hpp).
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "core/risk/rules.hpp"
#include "core/units/time.hpp"

namespace antherd::alerts {

using risk::Level;

enum class Kind {
  heat,
  heat_ahead,
  humid_spell,
  no_data,
  doubtful_sensor,
  mail_trouble,
  stage,
  sprinkler_streak,
  diary_gap,
  season
};
enum class Severity { minor, moderate, severe, extreme };  // CAP 1.2
enum class Certainty { observed, likely, possible };       // CAP 1.2
enum class Phase { opened, raised, lowered, closed };

/// The detail of a change that closed an episode because nobody needs the watch any longer: the
/// trouble itself may go on, so that nothing like "readings are back" may be said.
inline constexpr std::string_view season_over = "season over";

/// One change of an episode's level. `at` is the moment the deciding hour closed (its end).
struct Change {
  Instant at;
  Phase phase = Phase::opened;
  Level level = Level::none;  // after the change
  Certainty certainty = Certainty::observed;
  std::optional<double> figure;  // heat: °C, highest hourly mean of the day so far;
                                 // humid_spell: R; no_data: hours silent
  std::string detail;            // what a letter needs beyond the figure, e.g. a sensor's fault
  bool operator==(const Change&) const = default;
};

struct Episode {
  Kind kind = Kind::heat;
  std::string subject;          // field or station name, or "antherd"
  Instant start;                // start of the first hour that counted
  std::vector<Change> changes;  // in time order, first is `opened`
  Level level = Level::none;    // now
  Level peak = Level::none;
  std::optional<Instant> closed;

  bool open() const { return !closed; }
  bool operator==(const Episode&) const = default;
};

/// A notice: said once, never raised. `key` tells it from others of its kind in one season.
struct Notice {
  Kind kind = Kind::stage;
  std::string subject;
  Instant at;
  std::string key;  // stage: "window-near" | "window-opens" | "window-closes" | "note-held-DATE" |
                    // "seed-set";
                    // streak: date; diary_gap: date; season: "ripe" | "sown-long-ago"
  std::optional<CivilDay> day;  // the date it speaks of
  double figure = 0;            // streak: evenings; diary_gap: days
};

Severity severity_of(Level level);
const char* name_of(Kind kind);          // "heat", "humid_spell" …
const char* name_of(Severity severity);  // "Minor" … CAP words
const char* name_of(Certainty certainty);
const char* name_of(Phase phase);
std::optional<Kind> kind_from(std::string_view word);

}  // namespace antherd::alerts
