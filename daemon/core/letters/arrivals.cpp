// A station's clock, as the ages of its readings on arrival tell of it, in words.
#include <algorithm>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

using How = weather::ClockDoubt::How;

/// "62 min" up to two hours, for which an hour more or less is the news; then "7 h 5 min".
std::string age_words(Seconds age) {
  const auto total = std::max(0L, static_cast<long>(age.count()) / 60);
  const auto in_minutes = [](long count) { return std::to_string(count) + glue + "min"; };
  if (total < 120) return in_minutes(total);
  const std::string whole = std::to_string(total / 60) + glue + "h";
  return total % 60 == 0 ? whole : whole + glue + in_minutes(total % 60);
}

}  // namespace

std::string clock_words(const StationStory& story) {
  if (!story.clock) return "";
  const std::string by = age_words(story.clock->by);
  const std::string day = std::string("the last 24") + glue + "h";
  switch (story.clock->how) {
    case How::behind:
      return "newest reading was never less than " + by + " old on arrival in " + day +
             ": its clock is behind (summer time not set?), or its values come late";
    case How::ahead:
      return "newest reading was always at least " + by + " ahead of this computer's clock in " +
             day + ": its clock runs ahead, and what is 10" + glue + "min ahead is refused";
    case How::refused:
      return "every row that came in " + day + " was refused, because its time is at least " + by +
             " ahead of this computer's clock: is the station's clock or zone wrong, or this "
             "computer's clock?";
  }
  return "";
}

std::string clock_in_short(const StationStory& story) {
  if (!story.clock) return "";
  const std::string by = age_words(story.clock->by);
  switch (story.clock->how) {
    case How::behind:
      return "values never under " + by + " old on arrival: behind, or late";
    case How::ahead:
      return "stamps at least " + by + " ahead of this computer: runs ahead";
    case How::refused:
      return "rows refused: at least " + by + " ahead of this computer";
  }
  return "";
}

std::string late_arrival(const StationStory& story, const Words& words) {
  const auto& last = story.last_arrival;
  if (!last || last->age < weather::late_on_arrival) return "";
  if (words.desk().now - last->at > one_hour) return "";
  return "Readings do arrive: one came " + words.when(last->at) + " and was " +
         age_words(last->age) +
         " old by this computer's clock. Is the station's clock behind (summer time not set?), "
         "this computer's clock ahead, or do values come late?";
}

}  // namespace antherd::letters
