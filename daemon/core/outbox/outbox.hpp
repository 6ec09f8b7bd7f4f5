// The life of a letter between decision and acceptance (see DEVELOPERS.md, "outbox"):
//
//   waiting ──take──▶ sending ──last dot──▶ in_doubt ──250──▶ sent
//      ▲                 │ 4xx, no line        │ no answer: 10 min, then once more, marked
//      └─────────────────┘                     └─ a second doubt, 5xx, too old ──▶ parked
//
// Pure: states and arrows, and the timetable of tries. It must not know SMTP nor a database.
#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "core/letters/letter.hpp"
#include "core/units/time.hpp"

namespace antherd::outbox {

enum class State { waiting, sending, in_doubt, sent, parked };

struct Item {
  std::int64_t id = 0;          // the store's, 0 before it is stored
  letters::Letter letter;
  State state = State::waiting;
  int attempts = 0;
  int doubts = 0;               // how often the answer after the last dot was lost
  Instant next_try;             // not before
  std::optional<Instant> first_try;
  std::optional<Instant> ended;  // sent or parked
  std::string answer;           // the last answer in one sentence, never a secret
};

/// How one conversation ended.
enum class Ending {
  accepted,          // 250 after the dot
  wait,              // 4xx, refused, no route, no name, lost while sending the body
  parked,            // 5xx for this recipient or content
  in_doubt,          // lost or silent after the last dot
  settings_trouble,  // login refused, no TLS, unknown CA, wrong name: keep all, retry hourly, say so
};

struct Receipt {
  std::int64_t item = 0;
  Ending ending = Ending::wait;
  int code = 0;               // the server's last reply code, 0 when there was none
  std::string sentence;       // one clear sentence for people
  Instant at;
};

/// The server's own clock: shared by all letters, kept with them.
struct Line {
  int failures = 0;                   // in a row
  std::optional<Instant> next_try;    // not before
  std::optional<Instant> last_success;
  std::string trouble;                // settings trouble, or empty
  bool operator==(const Line&) const = default;
};

/// The letter is handed to the mail edge.
Item take(Item item, Instant now);
/// The body has been read out; the last dot follows once this is stored.
Item doubt(Item item, Instant now);
/// The conversation has ended.
Item receive(Item item, const Receipt& receipt);
Line receive(Line line, const Receipt& receipt, double jitter01);
/// At start: what was `sending` when we died goes back to waiting; `in_doubt` waits 10 min.
Item recover(Item item, Instant now);
/// Back to waiting by a person's wish.
Item retry(Item item, Instant now);

/// What the carrier would do now: which item goes next (the gravest, then the oldest, that is due),
/// which have expired, and when to look again.
struct Plan {
  std::optional<std::int64_t> send;
  std::vector<std::int64_t> expired;
  std::optional<Instant> look_again;
};
Plan plan(std::span<const Item> items, const Line& line, Instant now);

/// The letter as it must go now: "[delayed 2 d 3 h]" in the subject when more than 30 min late,
/// whether the danger still held, and "You may already have this letter" after a doubt.
letters::Letter as_sent(const Item& item, Instant now);

/// Waiting time after so many failures in a row: 1, 2, 5, 10, 20, 30 min, then 30 min − 0…20 %.
Seconds retry_delay(int failures, double jitter01);

const char* name_of(State state);
std::optional<State> state_from(std::string_view word);

}  // namespace antherd::outbox
