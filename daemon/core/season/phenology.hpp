// The crop's development as the fold carries it: thermal time, belief about flowering, scouting
// (science §5). It must not know heat or humidity.
#pragma once

#include <array>
#include <cstddef>
#include <optional>
#include <utility>
#include <vector>

#include "core/crop/belief.hpp"
#include "core/season/diary_view.hpp"
#include "core/season/plan.hpp"
#include "core/season/status.hpp"

namespace antherd::season {

/// The development units of the last hours with data; °C, newest first out of order.
class UnitMemory {
 public:
  void add(double unit);
  std::size_t count() const { return count_; }
  /// Mean daily units (°C·d per day) of the last 240 hours with data; all of them when fewer.
  double mean_10_days() const;
  /// … of the last 336 hours.
  double mean_14_days() const;

 private:
  static constexpr std::size_t size = 336, short_size = 240;
  std::array<double, size> ring_{};
  std::size_t count_ = 0;
  double sum_ = 0, short_sum_ = 0;
};

/// The last three units seen at one clock hour, to fill a short gap.
struct ClockHour {
  std::array<double, 3> last{};
  int count = 0;
  void add(double unit) { last[static_cast<std::size_t>(count++ % 3)] = unit; }
  std::optional<double> mean() const;
};

/// A note that lies more than 3 combined σ from the belief and from the notes held before it.
struct HeldNote {
  crop::Observation seen;
  crop::Belief with;  // the belief had it been accepted
};

constexpr std::array<int, 6> told_stages{9, 51, 60, 65, 69, 89};

struct Phenology {
  ThermalTime time;  // sum up to the end of the last hour
  int hours = 0;     // since sowing
  int unseen = 0;    // without temperature, since sowing or anchoring
  int filled = 0;    // of these, filled from neighbouring days
  bool scouted = false;
  crop::Belief belief;
  std::vector<HeldNote> held;    // until a note agrees with the belief or with one of them
  std::size_t next_note = 0;     // index into the diary's notes
  std::optional<CivilDay> done;  // "flowers-done" began: the window closes at this day's end
  std::optional<CivilDay> last_note;
  std::optional<int> last_note_stage;
  UnitMemory units;
  std::array<ClockHour, 24> by_clock;  // by UTC hour of day, which keeps to the sun
  std::array<std::optional<CivilDay>, told_stages.size()> reached;
  std::vector<std::pair<CivilDay, double>> day_ends;  // thermal time so far
  std::optional<CivilDay> seen_since;                 // after the last day with many unseen hours
  int unseen_today = 0;
  std::optional<CivilDay> window_first, window_last;
  Part part = Part::before;

  bool known() const { return unseen * 10 <= hours; }
  double filled_share() const { return hours > 0 ? static_cast<double>(filled) / hours : 0.0; }
  crop::FlowerOdds odds(const Plan& plan) const;
  double stage(const Plan& plan) const;
};

/// The past day on which thermal time crossed a value, by what is believed now: a later note moves
/// it, unlike `reached`, which keeps what was believed then. Nothing while it is not crossed, and
/// for what lies before the days that are known.
std::optional<CivilDay> crossed_on(const Phenology& crop, double thermal_time);

/// What one hour did.
struct PhenologyHour {
  double unit = 0;             // °C
  double flower_share = 0;     // of the season's flowers, opened in this hour
  bool note_was_held = false;  // a note was held now
};

/// Takes one more hour in: notes whose noon has come first, then the hour's unit.
/// @param day  the civil day of the hour's start
PhenologyHour advance(Phenology& crop, const Plan& plan, const DiaryView& diary, const Air& air,
                      CivilDay day);

/// The window's edges in thermal time: the hull of the belief's and a held note's.
struct WindowEdges {
  ThermalTime opens, closes, seed_fill_ends;
};
WindowEdges window_edges(const Phenology& crop, const Plan& plan);
/// The edges by one belief alone.
WindowEdges window_edges(const Phenology& crop, const Plan& plan, const crop::Belief& belief);

}  // namespace antherd::season
