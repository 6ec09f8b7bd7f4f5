// The words of episodes (CAP 1.2 and the kinds of alerts); see episode.hpp. It must not know any
// sentence that a grower reads.
#include <array>

#include "core/alerts/episode.hpp"

namespace antherd::alerts {

namespace {
constexpr std::array all_kinds{Kind::heat,    Kind::heat_ahead,       Kind::humid_spell,
                               Kind::no_data, Kind::doubtful_sensor,  Kind::mail_trouble,
                               Kind::stage,   Kind::sprinkler_streak, Kind::diary_gap,
                               Kind::season};
}  // namespace

Severity severity_of(Level level) {
  switch (level) {
    case Level::none:
      return Severity::minor;
    case Level::moderate:
      return Severity::moderate;
    case Level::severe:
      return Severity::severe;
    case Level::extreme:
      return Severity::extreme;
  }
  return Severity::minor;
}

const char* name_of(Kind kind) {
  switch (kind) {
    case Kind::heat:
      return "heat";
    case Kind::heat_ahead:
      return "heat_ahead";
    case Kind::humid_spell:
      return "humid_spell";
    case Kind::no_data:
      return "no_data";
    case Kind::doubtful_sensor:
      return "doubtful_sensor";
    case Kind::mail_trouble:
      return "mail_trouble";
    case Kind::stage:
      return "stage";
    case Kind::sprinkler_streak:
      return "sprinkler_streak";
    case Kind::diary_gap:
      return "diary_gap";
    case Kind::season:
      return "season";
  }
  return "heat";
}

const char* name_of(Severity severity) {
  switch (severity) {
    case Severity::minor:
      return "Minor";
    case Severity::moderate:
      return "Moderate";
    case Severity::severe:
      return "Severe";
    case Severity::extreme:
      return "Extreme";
  }
  return "Minor";
}

const char* name_of(Certainty certainty) {
  switch (certainty) {
    case Certainty::observed:
      return "Observed";
    case Certainty::likely:
      return "Likely";
    case Certainty::possible:
      return "Possible";
  }
  return "Possible";
}

const char* name_of(Phase phase) {
  switch (phase) {
    case Phase::opened:
      return "opened";
    case Phase::raised:
      return "raised";
    case Phase::lowered:
      return "lowered";
    case Phase::closed:
      return "closed";
  }
  return "opened";
}

std::optional<Kind> kind_from(std::string_view word) {
  for (const Kind kind : all_kinds) {
    if (word == name_of(kind)) return kind;
  }
  return std::nullopt;
}

}  // namespace antherd::alerts
