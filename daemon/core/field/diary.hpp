// The diary: what the grower did and saw during the season. Facts, kept for ever.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "core/field/field.hpp"
#include "core/units/quantity.hpp"
#include "core/units/time.hpp"

namespace antherd::field {

/// One irrigation. `depth` unknown is nothing. end > start.
struct Irrigation {
  std::int64_t id = 0;  // the store's, 0 before it is stored
  std::string field;
  Instant start;
  Instant end;
  Method method = Method::overhead;
  std::optional<Millimetre> depth;
  int set = 0;          // 0: the whole field

  /// The same act, whatever its id.
  bool same_as(const Irrigation& other) const;
};

/// BBCH stage codes that the program speaks of (Sosa-Zuniga et al. 2017, from memory; 65 is ours).
namespace stage {
constexpr int emerged = 9, buds = 51, first_anthers = 60, full_flower = 65, flowers_done = 69,
              milk = 75, dough = 85, ripe = 89;
}

/// One scouting note. It counts from 12:00 farm time of its day.
struct Scouting {
  std::int64_t id = 0;
  std::string field;
  CivilDay date{};
  std::optional<int> stage;        // BBCH 9…99
  bool began = false;              // the stage began that very day (first-anthers always does)
  std::optional<bool> disease;     // downy mildew seen
  std::optional<int> seed_set;     // clusters holding a swelling seed …
  std::optional<int> seed_looked;  // … of so many looked at
  std::string note;

  bool same_as(const Scouting& other) const;
};

/// A field's diary in time order; of notes with one date the last entered is last.
struct Diary {
  std::vector<Irrigation> irrigations;
  std::vector<Scouting> notes;
};

/// Puts a diary in order: irrigations by start (then end, set), notes by date (entry order kept).
void sort(Diary& diary);

/// `first-anthers` → 60, `65` → 65; nothing for unknown words and codes outside 9…99.
std::optional<int> stage_from_word(std::string_view word);
/// 60 → "first-anthers"; a code without a word is its number.
std::string word_for_stage(int code);

}  // namespace antherd::field
