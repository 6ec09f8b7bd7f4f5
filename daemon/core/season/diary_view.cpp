// See diary_view.hpp.
#include "core/season/diary_view.hpp"

#include <utility>

namespace antherd::season {

DiaryView::DiaryView(field::Diary diary, const weather::Place& place) {
  field::sort(diary);
  irrigations = std::move(diary.irrigations);
  notes = std::move(diary.notes);
  sets = risk::night_sets(irrigations, place);
}

}  // namespace antherd::season
