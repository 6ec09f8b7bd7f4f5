// How an episode moves between levels; see hazards.hpp.
#include "core/season/hazards.hpp"

namespace antherd::season {

void move_episode(std::vector<alerts::Episode>& episodes, std::optional<std::size_t>& open,
                  alerts::Kind kind, const std::string& subject, HourStart hour, Level level,
                  Certainty certainty, std::optional<double> figure) {
  using alerts::Phase;
  const auto change = [&](Phase phase) {
    return alerts::Change{end_of(hour), phase, level, certainty, figure, ""};
  };
  if (!open) {
    if (level == Level::none) return;
    alerts::Episode episode;
    episode.kind = kind;
    episode.subject = subject;
    episode.start = hour;
    episode.level = episode.peak = level;
    episode.changes.push_back(change(Phase::opened));
    open = episodes.size();
    episodes.push_back(std::move(episode));
    return;
  }
  alerts::Episode& episode = episodes[*open];
  if (level == episode.level) return;
  if (level == Level::none) {
    episode.changes.push_back(change(Phase::closed));
    episode.closed = end_of(hour);
    open.reset();
  } else {
    episode.changes.push_back(change(level > episode.level ? Phase::raised : Phase::lowered));
    episode.peak = std::max(episode.peak, level);
  }
  episode.level = level;
}

Certainty certainty_of(const Phenology& crop, const Plan& plan) {
  if (!crop.known()) return Certainty::possible;
  const bool flowers_noted =
      crop.scouted && crop.last_note_stage.value_or(0) >= field::stage::first_anthers;
  if (flowers_noted) return Certainty::observed;
  return crop.odds(plan).in_flower(crop.time) >= 0.5 ? Certainty::likely : Certainty::possible;
}

}  // namespace antherd::season
