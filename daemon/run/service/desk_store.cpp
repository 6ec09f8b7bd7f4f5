// How the desk minds its store: the reserve on a full disk, a file that was damaged while it runs,
// and what people are told past it. See desk_work.hpp.
#include <utility>

#include "run/service/desk_work.hpp"
#include "run/service/log.hpp"

namespace antherd::service {
namespace {

constexpr Seconds reserve_tried_again{60 * 60};
constexpr Seconds checked_again{60 * 60};  // reading the whole file takes seconds on a small card

}  // namespace

/// What was given up is said, and put back as soon as the disk has room for it.
void DeskWork::mind_reserve(Instant now) {
  if (store_.reserve_given() && !reserve_told_) {
    reserve_told_ = true;
    reserve_tried_ = now;
    log_error(
        "the disk is full: the 8 MiB kept in reserve were given up for decisions and letters; "
        "make room on the disk before they are used up");
  }
  const bool rested = now - reserve_tried_ >= reserve_tried_again || now < reserve_tried_;
  if (store_.reserve_given() && rested) {
    reserve_tried_ = now;
    static_cast<void>(store_.keep_ballast());  // fails while there is no room
  }
  if (reserve_told_ && !store_.reserve_given()) {
    reserve_told_ = false;
    log_info("the disk has room again: the 8 MiB kept in reserve were put back");
  }
}

/// A store that was damaged while it was open takes nothing, or not all, from then on, and only an
/// opening sets it aside. So where the damage is in the file itself the desk ends.
/// @return whether it does
bool DeskWork::mind_damage(Instant now) {
  // A letter at the line is waited for: it would be cut off, and perhaps come twice.
  if (broken_ || !store_.met_damage() || line_busy()) return broken_.has_value();
  if (checked_ && now >= *checked_ && now - *checked_ < checked_again) return false;
  checked_ = now;
  const auto found = store_.check();
  if (!found) {
    log_warning(found.failure().sentence());
  } else if (!*found) {
    log_warning(
        "a call found the store damaged, but the whole file was read and is sound: it goes on");
  } else {
    broken_ = Failure{"go on with the store", settings_->store_folder, "it is damaged: " + **found,
                      "the service ends; started anew, by itself where a service manager does "
                      "that, it sets the damaged file aside and begins a new one"};
  }
  return broken_.has_value();
}

void DeskWork::note_distress(const Kept& kept, Instant now) {
  const auto first = kept.troubles.empty() ? std::nullopt : std::optional(kept.troubles.front());
  distress_.note(first, now, store_.samples_wait() && !kept.decisions_wait);
}

}  // namespace antherd::service
