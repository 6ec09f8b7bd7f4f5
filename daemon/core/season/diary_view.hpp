// A field's diary as the fold reads it: in time order, with the night sets worked out once. Kept
// apart from the plan because `what if` folds use the same plan with another diary.
#pragma once

#include <vector>

#include "core/field/diary.hpp"
#include "core/risk/wetness.hpp"
#include "core/weather/station.hpp"

namespace antherd::season {

struct DiaryView {
  std::vector<field::Irrigation> irrigations;  // by start
  std::vector<field::Scouting> notes;          // by date; of one day the last entered is last
  std::vector<risk::NightSet> sets;            // overhead evening and night irrigations, by end

  DiaryView() = default;
  DiaryView(field::Diary diary, const weather::Place& place);
};

}  // namespace antherd::season
