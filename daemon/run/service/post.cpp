// See post.hpp.
#include "run/service/post.hpp"

#include <algorithm>

namespace antherd::service {
namespace {

using std::chrono::minutes;

/// The end of the quiet hours that hold `now`, or `now`.
Instant after_quiet(const letters::Recipient& recipient, const Calendar& calendar, Instant now) {
  if (!recipient.quiet) return now;
  const auto [from, to] = *recipient.quiet;
  const CivilDay today = calendar.day_of(now);
  const auto clock = std::chrono::floor<minutes>(calendar.civil(now) - CivilTime(today)).count();
  const bool over_midnight = from > to;
  const bool quiet = over_midnight ? clock >= from || clock < to : clock >= from && clock < to;
  if (!quiet) return now;
  const CivilDay day = over_midnight && clock >= from ? today + std::chrono::days{1} : today;
  return std::max(now, calendar.at(CivilTime(day) + minutes{to}));
}

}  // namespace

std::vector<outbox::Item> to_items(const std::vector<letters::Letter>& letters,
                                   const settings::Settings& settings, SentToday sent_today,
                                   Instant now) {
  std::vector<outbox::Item> items;
  for (const letters::Letter& letter : letters) {
    outbox::Item item;
    item.letter = letter;
    item.next_try = now;
    const bool extreme = letter.severity == alerts::Severity::extreme;
    const auto& recipients = settings.recipients;
    const auto recipient = std::find_if(recipients.begin(), recipients.end(), [&](const auto& r) {
      return r.address == letter.recipient;
    });
    if (!extreme && recipient != recipients.end()) {
      item.next_try = after_quiet(*recipient, settings.calendar, now);
    }
    const int count = ++sent_today[letter.recipient];
    if (!extreme && !letter.raise && settings.mail && count > settings.mail->at_most_per_day) {
      const CivilDay tomorrow = settings.calendar.day_of(now) + std::chrono::days{1};
      const Instant morning = settings.calendar.at(CivilTime(tomorrow) + std::chrono::hours{6});
      item.next_try = std::max(item.next_try, morning);
    }
    // A letter that was held back on purpose is not "delayed": it speaks from when it may go.
    item.letter.decided = std::max(item.letter.decided, item.next_try);
    items.push_back(std::move(item));
  }
  return items;
}

}  // namespace antherd::service
