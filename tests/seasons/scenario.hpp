// A numbered season: plain.toml with what one file says otherwise, read into a farm's settings,
// its weather and what its grower writes down. It must not know what is computed from them.
#pragma once

#include <map>
#include <string>
#include <vector>

#include "core/field/diary.hpp"
#include "seasons/sky.hpp"
#include "seasons/table.hpp"

namespace antherd::seasons {

/// Something the grower writes down, and when.
struct Entry {
  Instant at;
  field::Diary diary;
};

/// What a grower would expect of the season.
struct Expectation {
  std::string what;   // "letters of heat", "highest heat", "first heat", "stage 60", …
  std::string about;  // a field or station; empty: of all
  std::string is;     // for words
  std::optional<double> low, high;    // for numbers, both included
  std::optional<CivilTime> from, to;  // the stretch looked at, or the dates allowed
  std::string why;                    // "common practice: …" or "judgement: …"
};

struct Scenario {
  std::string name;      // "02-three-hot-afternoons"
  std::string sentence;  // what a grower should hear
  std::string settings;  // as antherd.toml
  Calendar calendar;
  Instant installed, until;  // first start and last turn
  Seconds looks_every{3600};
  Sky sky;
  Instant weather_from;
  std::vector<Source> sources;
  std::vector<Entry> entries;  // by time of entry
  std::vector<Expectation> expectations;
  std::vector<Stretch> busy;  // when something of its own happens
};

/// Reads plain.toml and one file; a mistake in either is an exception that names it.
Scenario read_scenario(const std::string& folder, const std::string& name);

/// The names of the numbered files of a folder, in order, without ".toml".
std::vector<std::string> scenario_names(const std::string& folder);

}  // namespace antherd::seasons
