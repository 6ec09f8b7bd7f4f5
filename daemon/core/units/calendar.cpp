// A zone's rules as data; see time.hpp.
#include <algorithm>
#include <array>
#include <cstddef>
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
  constexpr Seconds one_day{86400};
  const Instant near{reading.time_since_epoch()};
  const std::array<Seconds, 3> offsets{offset_at(near - one_day), offset_at(near),
                                       offset_at(near + one_day)};
  Meaning meaning;
  for (std::size_t i = 0; i < offsets.size(); ++i) {
    const auto tried = offsets.begin() + static_cast<std::ptrdiff_t>(i);
    if (std::find(offsets.begin(), tried, *tried) != tried) continue;
    const Instant candidate = near - *tried;
    if (offset_at(candidate) != *tried) continue;
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
  // Skipped: by the change whose old and new clock readings lie on either side of the reading.
  const Seconds clock = reading.time_since_epoch();
  for (std::size_t i = 1; i < changes_.size(); ++i) {
    const Seconds change = changes_[i].from.time_since_epoch();
    if (change + changes_[i - 1].offset <= clock && clock < change + changes_[i].offset) {
      return changes_[i].from;
    }
  }
  const Instant near{clock};
  return near - offset_at(near);
}

Instant Calendar::start_of(CivilDay day) const { return at(CivilTime(day)); }

}  // namespace antherd
