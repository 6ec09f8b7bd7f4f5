// What the carrier would do now. See outbox.hpp.
#include <algorithm>
#include <tuple>

#include "core/outbox/outbox.hpp"

namespace antherd::outbox {
namespace {

constexpr Seconds longest_quiet{25 * 3600};  // a day on which the clock is put back

/// When a stored wait is over. No wait of the timetable is longer than an hour, and no quiet hours
/// than a day, so a longer one was written by a clock that has been set back since: it is over.
Instant end_of_wait(Instant next_try, Seconds longest, Instant now) {
  return next_try - now > longest ? now : next_try;
}

bool graver(const Item& one, const Item& other) {
  return std::tuple(-static_cast<int>(one.letter.severity), one.letter.decided, one.id) <
         std::tuple(-static_cast<int>(other.letter.severity), other.letter.decided, other.id);
}

void sooner(std::optional<Instant>& when, Instant candidate) {
  if (!when || candidate < *when) when = candidate;
}

}  // namespace

Plan plan(std::span<const Item> items, const Line& line, Instant now) {
  Plan result;
  bool busy = false;
  const Item* first = nullptr;
  std::optional<Instant> next_due;
  for (const Item& item : items) {
    busy = busy || item.state == State::sending;
    if (item.state != State::waiting && item.state != State::in_doubt) continue;
    if (item.letter.valid_until) {
      if (*item.letter.valid_until <= now) {
        result.expired.push_back(item.id);
        continue;
      }
      sooner(result.look_again, *item.letter.valid_until);
    }
    const Instant due =
        end_of_wait(item.next_try, rests_quietly(item) ? longest_quiet : trouble_rest, now);
    if (due > now) {
      sooner(next_due, due);
    } else if (first == nullptr || graver(item, *first)) {
      first = &item;
    }
  }
  if (busy) return result;  // its receipt is the next event
  // While the line rests nothing goes, not even a letter that would be due.
  const Instant line_open = line.next_try ? end_of_wait(*line.next_try, trouble_rest, now) : now;
  if (line_open > now) {
    if (first != nullptr) sooner(result.look_again, line_open);
    if (next_due) sooner(result.look_again, std::max(*next_due, line_open));
    return result;
  }
  if (first != nullptr) result.send = first->id;
  if (next_due) sooner(result.look_again, *next_due);
  return result;
}

}  // namespace antherd::outbox
