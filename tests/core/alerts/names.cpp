// The words of alerts are contracts: CAP 1.2 for severity and certainty, ours for the kinds.
#include <set>
#include <string>

#include "core/alerts/episode.hpp"
#include "support/catch.hpp"

using namespace antherd::alerts;

TEST_CASE("every kind has its word and is known by it") {
  std::set<std::string> words;
  for (int i = 0; i <= static_cast<int>(Kind::season); ++i) {
    const Kind kind = static_cast<Kind>(i);
    CHECK(kind_from(name_of(kind)) == kind);
    words.insert(name_of(kind));
  }
  CHECK(words == std::set<std::string>{"heat", "heat_ahead", "humid_spell", "no_data",
                                       "doubtful_sensor", "mail_trouble", "stage",
                                       "sprinkler_streak", "diary_gap", "season"});
  CHECK_FALSE(kind_from("Heat"));
  CHECK_FALSE(kind_from(""));
}

TEST_CASE("a level is a severity of CAP 1.2; no level is Minor") {
  CHECK(severity_of(Level::none) == Severity::minor);
  CHECK(severity_of(Level::moderate) == Severity::moderate);
  CHECK(severity_of(Level::severe) == Severity::severe);
  CHECK(severity_of(Level::extreme) == Severity::extreme);
  CHECK(std::string(name_of(Severity::minor)) == "Minor");
  CHECK(std::string(name_of(Severity::extreme)) == "Extreme");
  CHECK(std::string(name_of(Certainty::observed)) == "Observed");
  CHECK(std::string(name_of(Certainty::likely)) == "Likely");
  CHECK(std::string(name_of(Certainty::possible)) == "Possible");
  CHECK(std::string(name_of(Phase::opened)) == "opened");
  CHECK(std::string(name_of(Phase::closed)) == "closed");
  CHECK(std::string(antherd::risk::name_of(Level::none)) == "none");
  CHECK(std::string(antherd::risk::name_of(Level::severe)) == "Severe");
}
