// From finished letters to outbox items: quiet hours and the limits of each address. Pure.
#pragma once

#include <map>
#include <optional>
#include <string>
#include <vector>

#include "core/letters/letter.hpp"
#include "core/outbox/outbox.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

/// At most this many letters in any 60 min to one address; what a day allows the settings say.
constexpr int at_most_per_hour = 6;

/// What one address was given lately, and what waits there for a digest.
struct Ration {
  struct Given {
    Instant at;  // when it might leave
    alerts::Severity severity = alerts::Severity::minor;
    bool digest = false;
  };
  std::vector<Given> given;           // of the last two days
  std::optional<Instant> held_since;  // when the oldest that waits was decided
};
using Rations = std::map<std::string, Ration>;  // by address

/// The end of the recipient's quiet hours that hold `now`, or `now`.
Instant after_quiet(const letters::Recipient& recipient, const Calendar& calendar, Instant now);

/// The rations as the stored letters tell them: after a restart the same limits hold.
/// @param recent  letters decided in the last two days, and all that are held
Rations rations_of(const std::vector<outbox::Item>& recent);

/// Each letter becomes an item. Within a recipient's quiet hours all but Extreme wait for their
/// end. Past the limits of the hour or the day, and while others are held, a letter is held for
/// the digest, unless it is Extreme, a raise, graver than all this address was told in the 24 h
/// before, or comes by the calendar (daily line, weekly review). So what is held is never graver
/// than what this person has been told within a day.
/// @param rations  count the new letters
std::vector<outbox::Item> to_items(const std::vector<letters::Letter>& letters,
                                   const settings::Settings& settings, Rations& rations,
                                   Instant now);

/// The addresses whose held letters may go as one now: the hour and the day have room again (after
/// a full day not before 06:00), outside quiet hours, at least an hour after the last digest.
std::vector<std::string> digests_due(const settings::Settings& settings, const Rations& rations,
                                     Instant now);

/// The digest as an item that is due; the ration has nothing held any more.
outbox::Item digest_item(const letters::Letter& digest, Rations& rations, Instant now);

/// Forgets what no limit looks at any more.
void forget_old(Rations& rations, Instant now);

}  // namespace antherd::service
