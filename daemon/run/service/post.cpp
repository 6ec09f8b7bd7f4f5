// See post.hpp.
#include "run/service/post.hpp"

#include <algorithm>
#include <numeric>

namespace antherd::service {
namespace {

using std::chrono::minutes;
using Given = Ration::Given;

constexpr Seconds an_hour{3600};
constexpr Seconds told_lately{24 * 3600};
constexpr auto remembered = std::chrono::days{2};
constexpr auto morning = std::chrono::hours{6};  // after farm midnight
constexpr const char* why_held =
    "held: as many letters as an hour or a day allows went before; it goes in one with others";

bool by_calendar(const std::string& kind) { return kind == "daily" || kind == "weekly"; }

const letters::Recipient* recipient_of(const settings::Settings& settings,
                                       const std::string& address) {
  const auto found = std::find_if(settings.recipients.begin(), settings.recipients.end(),
                                  [&](const auto& r) { return r.address == address; });
  return found == settings.recipients.end() ? nullptr : &*found;
}

bool hour_full(const Ration& ration, Instant at) {
  return std::count_if(ration.given.begin(), ration.given.end(), [&](const Given& given) {
           return given.at > at - an_hour && given.at <= at;
         }) >= at_most_per_hour;
}

bool day_full(const Ration& ration, const settings::Settings& settings, CivilDay day) {
  return settings.mail &&
         std::count_if(ration.given.begin(), ration.given.end(), [&](const Given& given) {
           return settings.calendar.day_of(given.at) == day;
         }) >= settings.mail->at_most_per_day;
}

/// Graver than all that this address was told in the day before.
bool graver_than_told(const Ration& ration, const letters::Letter& letter, Instant at) {
  return std::none_of(ration.given.begin(), ration.given.end(), [&](const Given& given) {
    return given.at > at - told_lately && given.at <= at && given.severity >= letter.severity;
  });
}

bool held_back(const Ration& ration, const letters::Letter& letter,
               const settings::Settings& settings, Instant at) {
  if (letter.severity == alerts::Severity::extreme || letter.raise) return false;
  const bool full = ration.held_since || hour_full(ration, at) ||
                    day_full(ration, settings, settings.calendar.day_of(at));
  return full && !graver_than_told(ration, letter, at);
}

outbox::Item to_item(const letters::Letter& letter, const settings::Settings& settings,
                     Ration& ration, Instant now) {
  outbox::Item item;
  item.letter = letter;
  item.next_try = now;
  const letters::Recipient* recipient = recipient_of(settings, letter.recipient);
  if (recipient != nullptr && letter.severity != alerts::Severity::extreme) {
    const Instant morning_of = after_quiet(*recipient, settings.calendar, now);
    if (morning_of > now) item = outbox::rest_quietly(std::move(item), morning_of);
  }
  if (!by_calendar(letter.kind)) {
    if (held_back(ration, letter, settings, item.next_try)) {
      item = outbox::hold(std::move(item));
      item.answer = why_held;
      ration.held_since = std::min(ration.held_since.value_or(letter.decided), letter.decided);
      return item;
    }
    ration.given.push_back({item.next_try, letter.severity, false});
  }
  // A letter that quiet hours held back is not "delayed": it speaks from when it may go.
  item.letter.decided = std::max(item.letter.decided, item.next_try);
  return item;
}

}  // namespace

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

Rations rations_of(const std::vector<outbox::Item>& recent) {
  Rations rations;
  for (const outbox::Item& item : recent) {
    const letters::Letter& letter = item.letter;
    if (by_calendar(letter.kind) || item.state == outbox::State::merged) continue;
    Ration& ration = rations[letter.recipient];
    if (item.state == outbox::State::held) {
      ration.held_since = std::min(ration.held_since.value_or(letter.decided), letter.decided);
    } else {
      ration.given.push_back({letter.decided, letter.severity, letter.kind == "digest"});
    }
  }
  return rations;
}

std::vector<outbox::Item> to_items(const std::vector<letters::Letter>& letters,
                                   const settings::Settings& settings, Rations& rations,
                                   Instant now) {
  // The gravest first: they get the room that is left.
  std::vector<std::size_t> order(letters.size());
  std::iota(order.begin(), order.end(), 0U);
  std::stable_sort(order.begin(), order.end(), [&](std::size_t one, std::size_t other) {
    return letters[one].severity > letters[other].severity;
  });
  std::vector<outbox::Item> items(letters.size());
  for (const std::size_t i : order) {
    items[i] = to_item(letters[i], settings, rations[letters[i].recipient], now);
  }
  return items;
}

std::vector<std::string> digests_due(const settings::Settings& settings, const Rations& rations,
                                     Instant now) {
  const CivilDay today = settings.calendar.day_of(now);
  const bool before_morning = now < settings.calendar.at(CivilTime(today) + morning);
  std::vector<std::string> due;
  for (const auto& [address, ration] : rations) {
    if (!ration.held_since) continue;
    const letters::Recipient* recipient = recipient_of(settings, address);
    const bool quiet =
        recipient != nullptr && after_quiet(*recipient, settings.calendar, now) > now;
    const bool after_full_day = before_morning &&
                                settings.calendar.day_of(*ration.held_since) < today &&
                                day_full(ration, settings, today - std::chrono::days{1});
    const bool just_had_one =
        std::any_of(ration.given.begin(), ration.given.end(), [&](const Given& given) {
          return given.digest && given.at > now - an_hour && given.at <= now;
        });
    if (quiet || after_full_day || just_had_one || hour_full(ration, now) ||
        day_full(ration, settings, today)) {
      continue;
    }
    due.push_back(address);
  }
  return due;
}

outbox::Item digest_item(const letters::Letter& digest, Rations& rations, Instant now) {
  outbox::Item item;
  item.letter = digest;
  item.next_try = now;
  Ration& ration = rations[digest.recipient];
  ration.held_since.reset();
  ration.given.push_back({now, digest.severity, true});
  return item;
}

void forget_old(Rations& rations, Instant now) {
  for (auto& [address, ration] : rations) {
    std::erase_if(ration.given, [&](const Given& given) { return given.at < now - remembered; });
  }
}

}  // namespace antherd::service
