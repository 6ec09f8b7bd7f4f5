// Notices: what the grower should look for or write down; see fold.hpp.
#include <algorithm>
#include <array>

#include "core/season/fold.hpp"

namespace antherd::season {
namespace {

using alerts::Kind;
using alerts::Notice;
using std::chrono::days;

constexpr auto morning = std::chrono::hours{7};  // day-based notices are given at 7 in the morning
constexpr int streak_told_from = 3, diary_gap_days = 10, near_days = 10, closing_days = 2;

void add(State& state, const HourContext& hour, Kind kind, std::string key,
         std::optional<CivilDay> day, double figure = 0) {
  Notice notice;
  notice.kind = kind;
  notice.subject = hour.plan.field.name;
  notice.at = end_of(hour.air.start);
  notice.key = std::move(key);
  notice.day = day;
  notice.figure = figure;
  state.notices.push_back(std::move(notice));
}

/// Once a season.
void give(State& state, const HourContext& hour, Kind kind, std::string key,
          std::optional<CivilDay> day = {}, double figure = 0) {
  const auto told = [&](const Notice& n) { return n.kind == kind && n.key == key; };
  if (std::any_of(state.notices.begin(), state.notices.end(), told)) return;
  add(state, hour, kind, std::move(key), day, figure);
}

/// The close is told again when it has moved, by a note that the watch should go on or by cool
/// weather: the window never closes silently (science §5).
void give_close(State& state, const HourContext& hour, std::optional<CivilDay> closes) {
  constexpr auto small_move = days{3};
  const auto told = std::find_if(state.notices.rbegin(), state.notices.rend(), [](const Notice& n) {
    return n.kind == Kind::stage && n.key == "window-closes";
  });
  if (told != state.notices.rend()) {
    const bool moved = closes && told->day && *closes - *told->day >= small_move;
    if (!moved) return;
  }
  add(state, hour, Kind::stage, "window-closes", closes);
}

std::string date_key(CivilDay day) {
  const CivilDate date{day};
  const auto two = [](unsigned n) { return (n < 10 ? "0" : "") + std::to_string(n); };
  return std::to_string(static_cast<int>(date.year())) + "-" +
         two(static_cast<unsigned>(date.month())) + "-" + two(static_cast<unsigned>(date.day()));
}

void follow_streak(State& state, const DiaryView& diary, const HourContext& hour) {
  for (; state.next_set < diary.sets.size(); ++state.next_set) {
    const risk::NightSet& set = diary.sets[state.next_set];
    if (set.end > end_of(hour.air.start)) return;
    if (set.end <= Instant(hour.plan.first_hour())) continue;  // another season's
    const CivilDay night = hour.plan.calendar.day_of(set.sunrise);
    if (state.streak_last == night) continue;
    const bool follows = state.streak_last && night - *state.streak_last == days{1};
    if (!follows) state.streak_first = night;
    state.streak_last = night;
    const auto evenings = (night - *state.streak_first).count() + 1;
    if (evenings >= streak_told_from && hour.watched) {
      give(state, hour, Kind::sprinkler_streak, date_key(*state.streak_first), night,
           static_cast<double>(evenings));
    }
  }
}

void look_at_diary(State& state, const DiaryView& diary, const HourContext& hour) {
  constexpr std::size_t buds = 1;  // index of 51 in told_stages
  const auto buds_day = state.crop.reached[buds];
  if (hour.plan.field.irrigation == field::Method::none || !buds_day) return;
  CivilDay last = *buds_day;
  for (const auto& irrigation : diary.irrigations) {
    if (irrigation.start > Instant(hour.air.start)) break;
    last = std::max(last, hour.plan.calendar.day_of(irrigation.start));
  }
  const auto silent = (hour.day - last).count();
  if (silent < diary_gap_days) return;
  give(state, hour, Kind::diary_gap, date_key(last), last, static_cast<double>(silent));
}

/// Ten days after an episode's first Severe hour in flower seeds can be counted. One count serves
/// two episodes that lie closer together than it takes to look.
void ask_for_count(State& state, const DiaryView& diary, const HourContext& hour) {
  constexpr auto count_after = days{10}, one_count_serves = days{4};
  std::optional<CivilDay> asked;
  for (const CivilDay severe : state.heat.severe_since) {
    if (asked && severe - *asked <= one_count_serves) continue;
    asked = severe;
    if (severe + count_after != hour.day) continue;
    const bool counted =
        std::any_of(diary.notes.begin(), diary.notes.end(), [&](const field::Scouting& note) {
          return note.seed_set && note.date > severe && note.date < hour.day;
        });
    if (!counted) add(state, hour, Kind::stage, "seed-set", severe);
  }
}

void look_at_window(State& state, const HourContext& hour) {
  if (!state.crop.known()) return;
  const WindowEdges edges = window_edges(state.crop, hour.plan);
  const double daily = state.crop.units.mean_14_days();
  const bool enough = state.crop.units.count() >= 120;
  const double time = state.crop.time.value;
  const bool before = state.crop.part == Part::before || state.crop.part == Part::shoulder_before;
  if (before && enough && time + near_days * daily >= edges.opens.value) {
    const auto opens = expected_day(state, edges.opens.value);
    give(state, hour, Kind::stage, "window-near", opens);
  }
  if (state.crop.part == Part::window) {
    // A late station's first note tells where the field stands: that it opened weeks ago is no
    // news.
    const bool news = state.crop.window_first && hour.day - *state.crop.window_first <= days{7};
    if (news) give(state, hour, Kind::stage, "window-opens", state.crop.window_first);
    if (enough && time + closing_days * daily >= edges.closes.value) {
      give_close(state, hour, expected_day(state, edges.closes.value));
    }
  }
}

}  // namespace

void give_notices(State& state, const Plan& plan, const DiaryView& diary, const HourContext& hour,
                  bool note_was_held) {
  follow_streak(state, diary, hour);
  if (note_was_held && state.crop.last_note) {
    give(state, hour, Kind::stage, "note-held-" + date_key(*state.crop.last_note),
         state.crop.last_note);
  }
  const CivilTime from = plan.calendar.civil(Instant(hour.air.start));
  const CivilTime to = plan.calendar.civil(end_of(hour.air.start));
  if (!(from - CivilTime(hour.day) < morning && to - CivilTime(hour.day) >= morning)) return;
  if (state.watch == Watch::ripe) give(state, hour, Kind::season, "ripe", state.ripe_since);
  if (state.watch == Watch::sown_long_ago && !state.ripe_since) {
    give(state, hour, Kind::season, "sown-long-ago", plan.field.sown);
  }
  if (!hour.watched) return;
  look_at_window(state, hour);
  look_at_diary(state, diary, hour);
  ask_for_count(state, diary, hour);
}

}  // namespace antherd::season
