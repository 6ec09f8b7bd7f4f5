// Invented letters for the outbox tests.
#pragma once

#include "core/outbox/outbox.hpp"

namespace antherd::outbox {

/// 2026-07-14 22:00 UTC, an afternoon on the farm.
constexpr Instant afternoon =
    std::chrono::sys_days(std::chrono::year(2026) / 7 / 14) + std::chrono::hours(22);

inline Item item_of(std::int64_t id, alerts::Severity severity = alerts::Severity::moderate,
                    Instant decided = afternoon) {
  Item item;
  item.id = id;
  item.letter.id = "heat-" + std::to_string(id);
  item.letter.recipient = "owner@larkspur.example";
  item.letter.subject = "HEAT Severe: north bench 96 °F at 3 pm, in flower";
  item.letter.body = "north bench, in flower: 96 °F at 3 pm.\nNo water tonight.\n";
  item.letter.kind = "heat";
  item.letter.severity = severity;
  item.letter.decided = decided;
  item.letter.valid_until = decided + std::chrono::hours(72);
  item.letter.still = "At 3 pm it was above 95 °F and had not ended.";
  item.next_try = decided;
  return item;
}

inline Receipt receipt_of(std::int64_t id, Ending ending, Instant at,
                          Concern concern = Concern::server, std::string sentence = "as it was") {
  return Receipt{id, ending, concern, 0, std::move(sentence), at};
}

}  // namespace antherd::outbox
