// From finished letters to outbox items: quiet hours and the daily limit of each recipient. Pure.
#pragma once

#include <map>
#include <string>
#include <vector>

#include "core/letters/letter.hpp"
#include "core/outbox/outbox.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

/// How many letters each address got since farm midnight.
using SentToday = std::map<std::string, int>;

/// Each letter becomes a waiting item. Within a recipient's quiet hours all but Extreme wait for
/// their end; past the daily limit all but raises and Extreme wait for the next morning at 06:00.
std::vector<outbox::Item> to_items(const std::vector<letters::Letter>& letters,
                                   const settings::Settings& settings, SentToday sent_today,
                                   Instant now);

}  // namespace antherd::service
