// A letter for the outbox where its words do not matter.
#pragma once

#include <string>

#include "ground.hpp"

namespace ground {

/// Severe heat told to the owner, due when it was decided, and good for three days.
inline outbox::Item some_letter(const std::string& id, Instant due) {
  outbox::Item item;
  item.letter.id = id;
  item.letter.recipient = "owner@larkspur.example";
  item.letter.subject = id;
  item.letter.body = "A body.\n";
  item.letter.kind = "heat";
  item.letter.severity = alerts::Severity::severe;
  item.letter.decided = item.next_try = due;
  item.letter.valid_until = due + hours{72};
  item.letter.still = "It held.";
  return item;
}

}  // namespace ground
