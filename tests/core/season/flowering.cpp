// The flowering window through the fold: edges, scouting, held notes, an unknown stage. All by
// hand from science §5 at 10 °C·d a day, so that thermal time at noon of day n is 10 n + 5.
#include <cmath>

#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::season;
using namespace antherd::season::scene;

namespace {

/// First hour since sowing that lies in a part; −1 when none does.
int first_hour_in(const Told& told, Part part, int from = 0) {
  for (std::size_t n = static_cast<std::size_t>(from); n < told.records.size(); ++n) {
    if (told.records[n].part == part) return static_cast<int>(n);
  }
  return -1;
}

}  // namespace

TEST_CASE("the window opens at P_begun 0.05 and closes at P_over 0.95") {
  const Plan plan = plan_at_greenwich();
  const Told told = tell(plan, 125 * 24, cool);
  // opens 700 − 1.6448536 · 105 = 527.29 °C·d: the 1266th hour ends at 527.5.
  CHECK(first_hour_in(told, Part::window) == 1265);
  // eight days at 10 °C·d ahead of it: 447.29; the 1074th hour ends at 447.5.
  CHECK(first_hour_in(told, Part::shoulder_before) == 1073);
  // closes 970 + 1.6448536 · √(105² + 67.5²) = 1175.32; the 2821st hour ends at 1175.42. Seed fill
  // would last until 970 + 0.6 · 330 = 1168 and is over by then.
  CHECK(first_hour_in(told, Part::after) == 2820);
  CHECK(first_hour_in(told, Part::shoulder_after) == -1);
  CHECK(told.hour(2819).part == Part::window);
  CHECK(told.day(52).in_window);  // hour 1265 lies on day 52
  CHECK_FALSE(told.day(51).in_window);
}

TEST_CASE("a note that agrees moves and sharpens the estimate from noon of its day") {
  const Plan plan = plan_at_greenwich();
  const Told told = tell(plan, 70 * 24, cool, {{}, {note(plan, 65, 60, true)}});
  // k = 655/700, sd 30/700; weights 1/0.15² = 44.444 and (700/30)² = 544.444:
  // m = (44.444 + 0.9357143 · 544.444)/588.889 = 0.9405660, sd = 588.889^−0.5 = 0.0412082
  CHECK(told.state.crop.belief.mean == Approx(0.940566).margin(1e-6));
  CHECK(told.state.crop.belief.sd == Approx(0.0412082).margin(1e-7));
  CHECK(told.state.crop.scouted);
  CHECK(told.hour(65 * 24 + 11).p_flower ==
        Approx(0.3283).margin(0.0002));  // Φ(−0.4286) − Φ(−2.524)
  // at 655.42: Φ((655.42 − 658.40)/28.85) − Φ((655.42 − 928.40)/73.40) = 0.4589 − 0.0001
  CHECK(told.hour(65 * 24 + 12).p_flower == Approx(0.4588).margin(0.0002));
}

TEST_CASE("a note far off is held, and the window spans both") {
  const Plan plan = plan_at_greenwich();
  // k = 305/700 = 0.4357 lies 0.564 from 1, beyond 3 √(0.15² + 0.0429²) = 0.468.
  const field::Scouting early = note(plan, 30, 60, true);
  SECTION("alone") {
    const Told told = tell(plan, 125 * 24, cool, {{}, {early}});
    CHECK(told.state.crop.belief.mean == 1.0);
    CHECK(told.state.crop.held.size() == 1);
    // with it: m = (44.444 + 237.222)/588.889 = 0.478302, opens 700 · 0.478302 − 1.6449 · 28.846 =
    // 287.4 °C·d, passed at 305; the close is the first estimate's
    CHECK(first_hour_in(told, Part::window) == 30 * 24 + 12);
    CHECK(first_hour_in(told, Part::after) == 2820);
    CHECK(told.notices("note-held-2026-05-31").size() == 1);
  }
  SECTION("a second note agrees with the estimate") {
    const Told told = tell(plan, 70 * 24, cool, {{}, {early, note(plan, 65, 60, true)}});
    CHECK(told.state.crop.held.empty());
    CHECK(told.state.crop.belief.mean == Approx(0.940566).margin(1e-6));
  }
  SECTION("a second note agrees with the held one") {
    // k = 385/810 = 0.47531, sd √((30/810)² + (0.25 · 110/810)²) = 0.050244, weight 396.12:
    // m = (588.889 · 0.478302 + 396.12 · 0.47531)/985.01 = 0.477099
    const Told told = tell(plan, 40 * 24, cool, {{}, {early, note(plan, 38, 65, true)}});
    CHECK(told.state.crop.held.empty());
    CHECK(told.state.crop.belief.mean == Approx(0.477099).margin(2e-6));
  }
  SECTION("a second note agrees with both and lies nearer to the held one") {
    // k = 465/810 = 0.57407, sd 0.050244: 0.426 from 1, within 3 √(0.15² + 0.0502²) = 0.475, that
    // is 2.69 σ; 0.0958 from 0.478302, √(0.0412² + 0.0502²) = 0.0650, 1.47 σ. So m = (588.889 ·
    // 0.478302 + 396.12 · 0.574074)/985.01 = 0.516817
    const Told told = tell(plan, 48 * 24, cool, {{}, {early, note(plan, 46, 65, true)}});
    CHECK(told.state.crop.held.empty());
    CHECK(told.state.crop.belief.mean == Approx(0.516817).margin(2e-6));
  }
}

TEST_CASE("a second note that agrees with neither is held beside the first") {
  const Plan plan = plan_at_greenwich();
  const field::Scouting early = note(plan, 30, 60, true);
  // buds that began at 955 °C·d: k = 955/400 = 2.39, far from 1 and from the first note's 0.436
  const field::Scouting late = note(plan, 95, 51, true);
  const Told two = tell(plan, 96 * 24, cool, {{}, {early, late}});
  CHECK(two.state.crop.held.size() == 2);
  CHECK(two.state.crop.belief.mean == 1.0);
  // the first note's window still counts: it opens at 287.4 °C·d (see above), not at 527.3
  CHECK(window_edges(two.state.crop, plan).opens.value == Approx(287.4).margin(0.1));
  CHECK(two.notices("note-held-2026-05-31").size() == 1);
  CHECK(two.notices("note-held-2026-08-04").size() == 1);
  // full flower that began on day 96: k = 965/810 = 1.191 agrees with the estimate alone
  const Told settled = tell(plan, 98 * 24, cool, {{}, {early, late, note(plan, 96, 65, true)}});
  CHECK(settled.state.crop.held.empty());
  CHECK(settled.state.crop.belief.mean > 1.0);
  CHECK(settled.state.crop.belief.mean < 1.2);
}

TEST_CASE("a held note keeps two windows apart, and both are told") {
  const Plan plan = plan_at_greenwich();
  const field::Diary diary{{}, {note(plan, 30, 60, true)}};
  const Told told = tell(plan, 60 * 24, cool, diary);
  const FieldStatus seen = status(told.state, plan, DiaryView(diary, plan.place()));
  REQUIRE(seen.flower.without_note_first);
  REQUIRE(seen.flower.with_note_first);
  // 527.29 °C·d is crossed on day 52, 287.4 on day 28; the closes lie ahead or behind likewise.
  CHECK(*seen.flower.without_note_first == plan.field.sown + days{52});
  CHECK(*seen.flower.with_note_first == plan.field.sown + days{28});
  CHECK(*seen.flower.with_note_last < *seen.flower.without_note_last);
}

TEST_CASE("flowers done closes the window at the day's end, flowers seen later open it again") {
  const Plan plan = plan_at_greenwich();
  const Told told =
      tell(plan, 100 * 24, cool, {{}, {note(plan, 90, 69, true), note(plan, 95, 65, false)}});
  CHECK(told.hour(91 * 24 - 1).part == Part::window);
  CHECK(told.hour(91 * 24).part == Part::shoulder_after);
  CHECK(told.hour(95 * 24 + 11).part == Part::shoulder_after);
  CHECK(told.hour(95 * 24 + 12).part == Part::window);
}

TEST_CASE("of several notes on one day the last entered stands") {
  const Plan plan = plan_at_greenwich();
  field::Scouting wrong = note(plan, 65, 69, true);
  const Told told = tell(plan, 70 * 24, cool, {{}, {wrong, note(plan, 65, 60, true)}});
  CHECK(told.state.crop.belief.mean == Approx(0.940566).margin(1e-6));
  CHECK_FALSE(told.state.crop.done);
}

TEST_CASE("a station that comes late leaves the stage unknown until a note anchors it") {
  const Plan plan = plan_at_greenwich();
  const auto late = [](int n) {
    return n < 30 * 24 ? std::nullopt : std::optional<Weather>(Weather{});
  };
  SECTION("unknown: days 35 to 110 count as inside the window") {
    const Told told = tell(plan, 120 * 24, late);
    CHECK_FALSE(told.hour(60 * 24).known);
    CHECK(told.hour(35 * 24 - 1).part == Part::before);
    CHECK(told.hour(35 * 24).part == Part::window);
    CHECK(told.hour(111 * 24 - 1).part == Part::window);
    CHECK(told.hour(111 * 24).part == Part::after);
    CHECK(told.hour(60 * 24).p_flower == 0);
  }
  SECTION("anchored: the note sets thermal time, its sd is the belief's") {
    const Told told = tell(plan, 61 * 24, late, {{}, {note(plan, 60, 65, true)}});
    CHECK(told.hour(60 * 24 + 12).known);
    CHECK(told.state.crop.time.value == Approx(810 + 5));  // twelve hours of 10/24
    CHECK(told.state.crop.belief.mean == 1.0);
    CHECK(told.state.crop.belief.sd == Approx(0.050244).margin(1e-6));
  }
}

TEST_CASE("a short gap is filled from the same clock hour and widens the belief") {
  const Plan plan = plan_at_greenwich();
  const auto holed = [](int n) {
    return n >= 480 && n < 504 ? std::nullopt : std::optional<Weather>(Weather{});
  };
  const Told told = tell(plan, 40 * 24, holed);
  CHECK(told.state.crop.time.value == Approx(400));  // as without the gap: all days are alike
  CHECK(told.state.crop.filled_share() == Approx(24.0 / 960));
  // s0 = 700 (0.15 + 0.3 · 0.025) = 110.25; opens 700 − 1.6448536 · 110.25
  CHECK(window_edges(told.state.crop, plan).opens.value == Approx(518.655).margin(0.001));
}

TEST_CASE("another season's diary changes nothing") {
  const Plan plan = plan_at_greenwich();
  field::Scouting sick = note(plan, -290, 69, true);
  sick.disease = true;
  field::Diary old{{}, {note(plan, -310, 60, true), sick}};
  for (int day = -300; day < -290; ++day) old.irrigations.push_back(set_on(plan, day));
  const Told with = tell(plan, 125 * 24, cool, old);
  const Told without = tell(plan, 125 * 24, cool);
  CHECK(first_hour_in(with, Part::window) == 1265);
  CHECK(with.state.crop.belief.mean == 1.0);
  CHECK_FALSE(with.state.crop.done);
  CHECK_FALSE(with.state.crop.last_note);
  REQUIRE(with.state.notices.size() == without.state.notices.size());
  const FieldStatus now = status(with.state, plan, DiaryView(old, plan.place()));
  CHECK_FALSE(now.humid.disease_seen);
  CHECK_FALSE(now.last_irrigation_end);
}

TEST_CASE("ripe by the estimate alone does not silence a field whose note is held") {
  const Plan plan = plan_at_greenwich();
  // k = 1405/890 = 1.579 (middle of 810 and 970) is 0.579 from 1, beyond 3 √(0.15² + 0.077²).
  const Told told = tell(plan, 142 * 24, cool, {{}, {note(plan, 140, 65, false)}});
  CHECK(told.hour(140 * 24).part == Part::after);
  REQUIRE(told.state.crop.held.size() == 1);
  CHECK(told.state.crop.part == Part::window);
  CHECK(told.state.watch == Watch::watched);
}

TEST_CASE("a ripe field stays ripe when its station falls silent afterwards") {
  const Plan plan = plan_at_greenwich();
  // 10 °C·d a day: ripe (1300) after 130 days; then 40 days without a reading.
  const auto silent_later = [](int n) { return n < 135 * 24 ? cool(n) : std::nullopt; };
  const Told told = tell(plan, 175 * 24, silent_later);
  CHECK_FALSE(told.state.crop.known());  // 40 of 175 days were not seen
  CHECK(told.state.watch == Watch::ripe);
  REQUIRE(told.state.ripe_since);
  CHECK((*told.state.ripe_since - plan.field.sown).count() == 129);
}

TEST_CASE("a note moves the date of first anthers back to where it puts it") {
  const Plan plan = plan_at_greenwich();
  // 10 °C·d a day: 700 is crossed on day 69 by the prior; the note says day 76.
  field::Diary diary;
  diary.notes.push_back(note(plan, 76, 60, true));
  const Told told = tell(plan, 80 * 24, cool, diary);
  const FieldStatus seen = status(told.state, plan, DiaryView(diary, plan.place()));
  const double needed = 700 * told.state.crop.belief.mean;
  REQUIRE(seen.flower.flower_first);
  const auto day = (*seen.flower.flower_first - plan.field.sown).count();
  CHECK(day == static_cast<long>(std::ceil(needed / 10.0)) - 1);
  CHECK(day > 72);  // without the history it would still be day 69
  CHECK(day <= 76);
  // So does the day on which the window opened: the prior had opened it at 527.29, on day 52.
  const double opens = window_edges(told.state.crop, plan).opens.value;
  REQUIRE(seen.flower.window_first);
  CHECK(*seen.flower.window_first ==
        plan.field.sown + days{static_cast<int>(std::ceil(opens / 10.0)) - 1});
  CHECK(*seen.flower.window_first > plan.field.sown + days{60});
  CHECK(*seen.flower.day_of_window == 80 - (*seen.flower.window_first - plan.field.sown).count());
}
