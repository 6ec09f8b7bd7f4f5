// What the keeper does once: a day's tidying, and telling that the store began anew. See
// keeper.hpp.
#include <algorithm>

#include "run/service/keeper.hpp"

namespace antherd::service {

std::vector<Failure> Keeper::tidy(Instant now, bool clock_set) {
  std::vector<Failure> troubles;
  const CivilDay today = settings_->calendar.day_of(now);
  if (tidied_ == today) return troubles;
  const auto note = [&](const Outcome& done) {
    if (!done) troubles.push_back(done.failure());
  };
  // Old by the readings too: a clock that is wrong by years must not throw a season away, and where
  // neither it nor they are believed nothing is thrown away.
  const auto newest = lookout_.time_of_stations();
  if (clock_set || newest) {
    note(store_.drop_samples_before(std::min(now, newest.value_or(now)) - settings_->keep_samples));
  }
  note(store_.keep_ballast());
  // A copy bears its week's name: no clock that may be wrong gives it one.
  std::optional<Instant> week = now;
  if (!clock_set) week = newest ? std::optional(std::min(now, *newest)) : std::nullopt;
  if (week && !store_.has_copy_of_week(*week)) note(store_.copy_without_samples(*week));
  tidied_ = today;
  return troubles;
}

/// With the letters goes the note that they were made: they are told once.
void Keeper::tell_of_beginning(Instant now, std::vector<letters::Letter>& letters) {
  if (settings_->mail) {
    auto made = letters::compose_anew(*anew_, settings_->recipients, lookout_.desk(now));
    std::move(made.begin(), made.end(), std::back_inserter(letters));
  }
  pending_.notes.merge(store::Store::beginning_told());
  anew_.reset();
}

}  // namespace antherd::service
