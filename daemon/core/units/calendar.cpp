// A zone's rules as data; see time.hpp.
#include <algorithm>
#include <utility>

#include "core/units/time.hpp"

namespace antherd {

Calendar Calendar::fixed(Seconds offset, std::string name) {
  return Calendar(std::move(name), {Change{Instant::min(), offset}});
}

Calendar::Calendar(std::string name, std::vector<Change> changes)
    : name_(std::move(name)), changes_(std::move(changes)) {
  if (changes_.empty()) changes_.push_back(Change{Instant::min(), Seconds{0}});
}

Seconds Calendar::offset_at(Instant at) const {
  const auto after = std::upper_bound(changes_.begin(), changes_.end(), at,
                                      [](Instant t, const Change& c) { return t < c.from; });
  return after == changes_.begin() ? changes_.front().offset : std::prev(after)->offset;
}

Calendar::Meaning Calendar::meaning_of(CivilTime reading) const {
  // No zone is further than a day from UTC: only the offsets around the reading can fit.
  const Instant near{reading.time_since_epoch()};
  Meaning meaning;
  std::vector<Seconds> tried;
  for (const Seconds shift : {Seconds{-86400}, Seconds{0}, Seconds{86400}}) {
    const Seconds offset = offset_at(near + shift);
    if (std::find(tried.begin(), tried.end(), offset) != tried.end()) continue;
    tried.push_back(offset);
    const Instant candidate = near - offset;
    if (offset_at(candidate) != offset) continue;
    if (!meaning.first) {
      meaning.first = candidate;
    } else {
      meaning.second = std::max(*meaning.first, candidate);
      meaning.first = std::min(*meaning.first, candidate);
    }
  }
  return meaning;
}

Instant Calendar::at(CivilTime reading) const {
  if (const Meaning meaning = meaning_of(reading); meaning.first) return *meaning.first;
  // Skipped: the change that skipped it lies within a day; its instant is the first that exists.
  const Instant near{reading.time_since_epoch()};
  Instant best = near - offset_at(near);
  for (const Change& change : changes_) {
    if (change.from > near - Seconds{86400} && change.from < near + Seconds{86400}) {
      best = change.from;
    }
  }
  return best;
}

Instant Calendar::start_of(CivilDay day) const { return at(CivilTime(day)); }

}  // namespace antherd
