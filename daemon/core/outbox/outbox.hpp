// The life of a letter between decision and acceptance (see DEVELOPERS.md, "outbox"):
//
//   waiting ──take──▶ sending ──last dot──▶ in_doubt ──250──▶ sent
//      ▲                 │ 4xx, no line        │ no answer: 10 min, then once more, marked
//      └─────────────────┘                     └─ a second doubt, 5xx, too old ──▶ parked
//
//   held ──named in a digest──▶ merged     past the limits of an address; the digest is a letter of
//                                          its own and goes the way above
//
// Pure: states and arrows, and the timetable of tries. It must not know SMTP nor a database.
#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "core/letters/letter.hpp"
#include "core/units/time.hpp"

namespace antherd::outbox {

/// How long a letter rests after its answer was lost, before it goes once more.
constexpr Seconds doubt_rest{10 * 60};
/// How long the line rests after trouble that only a person can mend; where the trouble is with one
/// recipient, the letter alone.
constexpr Seconds trouble_rest{60 * 60};
/// Later than this after its decision a letter says so.
constexpr Seconds late_after{30 * 60};
/// How long an alert is of use, given anew by retry().
constexpr Seconds alert_validity{72 * 3600};

enum class State { waiting, sending, in_doubt, sent, parked, held, merged };

struct Item {
  std::int64_t id = 0;  // the store's, 0 before it is stored
  letters::Letter letter;
  State state = State::waiting;
  int attempts = 0;
  int doubts = 0;    // how often the answer after the last dot was lost
  Instant next_try;  // not before; waits of the server's are the Line's
  std::optional<Instant> first_try;
  std::optional<Instant> ended;  // sent or parked
  std::string answer;            // the last answer in one sentence, never a secret
  std::string digest;            // merged: the identity of the letter that names it
};

/// How one conversation ended.
enum class Ending {
  accepted,          // 250 after the dot
  wait,              // 4xx, refused, no route, no name, lost while sending the body
  parked,            // 5xx for this recipient or content
  in_doubt,          // lost or silent after the last dot
  settings_trouble,  // login refused, no TLS, unknown CA, wrong name: keep all, retry hourly, say
                     // so
};

/// Whom the server's answer was about. A 450 at RCPT says "not this mailbox now": the line is fine
/// and the others go on. A refused connection or a 421 says "not now, any of you".
enum class Concern {
  server,     // no line, greeting, login, sender, 421, no answer
  recipient,  // the answer to RCPT; a server without login may relay to some and not to others
  letter,     // the answer after the body was read: mostly the server's trouble, at times this text
};

struct Receipt {
  std::int64_t item = 0;
  Ending ending = Ending::wait;
  Concern concern = Concern::server;
  int code = 0;          // the server's last reply code, 0 when there was none
  std::string sentence;  // one clear sentence for people
  Instant at;
};

/// The server's own clock: shared by all letters, kept with them.
struct Line {
  int failures = 0;                 // in a row
  std::optional<Instant> next_try;  // not before
  std::optional<Instant> last_success;
  std::string trouble;  // settings trouble, or empty
  bool operator==(const Line&) const = default;
};

// The arrows are total: an event that has no arrow from the item's state leaves it as it is, so a
// late receipt or a doubled wish can do no harm. An acceptance is a fact and leads to `sent` from
// everywhere; nothing leads out of `sent`.

/// The letter is handed to the mail edge. From `waiting`, and from `in_doubt` once its rest is
/// over.
Item take(Item item, Instant now);
/// The body has been read out; the last dot follows once this is stored. Counts one doubt, which a
/// clear answer takes back.
Item doubt(Item item, Instant now);
/// The conversation has ended.
Item receive(Item item, const Receipt& receipt);
/// @param jitter01  0…1, see retry_delay
Line receive(Line line, const Receipt& receipt, double jitter01);
/// At start: what was `sending` when we died had no last dot and goes back to waiting; `in_doubt`
/// waits out its 10 min, or is parked when that was its second doubt. Many starts are as one.
Item recover(Item item, Instant now);
/// At start and after new settings: the line may be tried at once, whatever it waited for.
Line reopen(Line line);
/// Too old to be of use (see Plan::expired): parked, with the sentence that names it.
Item expire(Item item, Instant now);
/// Its address is no longer among the recipients: parked, with the sentence that names it. From
/// `held` too; not from `merged`, whose digest is given up itself.
Item give_up_recipient(Item item, Instant now);
/// A letter that is waiting and was never tried waits for the digest of its address instead.
Item hold(Item item);
/// A letter that was never tried waits for the end of its reader's quiet hours, however long, and
/// says so.
Item rest_quietly(Item item, Instant until);
/// Whether it waits so, and was not yet tried.
bool rests_quietly(const Item& item);
/// A held letter was named in a digest, which takes its place: it is never sent itself.
Item merge(Item item, const std::string& digest, Instant now);
/// Back to waiting by a person's wish, due now; of a held letter too. An expired letter gets 72 h
/// again; a doubtful one stays marked and may come into doubt once more. Of a merged letter its
/// digest is to be sent again.
Item retry(Item item, Instant now);

/// What the carrier would do now: which item goes next (the gravest, then the oldest, that is due),
/// which have expired, and when to look again.
struct Plan {
  std::optional<std::int64_t> send;
  std::vector<std::int64_t> expired;
  std::optional<Instant> look_again;
};
/// One conversation at a time: while an item is `sending` nothing else goes. An item that the mail
/// edge holds between doubt() and receive() looks like any other in doubt, so the carrier must not
/// ask while its worker is busy. Waits longer than the timetable knows (an hour; a day for quiet
/// hours) come from a clock that was set since; they count as over.
Plan plan(std::span<const Item> items, const Line& line, Instant now);

/// The letter as it must go now: "[delayed 2 d 3 h]" in the subject when more than 30 min late,
/// whether the danger still held, and "You may already have this letter" after a doubt. The subject
/// stays ≤ 70 characters; identity, and with it the Message-ID, stays the same.
letters::Letter as_sent(const Item& item, Instant now);

/// Waiting time after so many failures in a row: 1, 2, 5, 10, 20, 30 min, then 30 min − 0…20 %.
/// @param failures  ≥ 1; below that nothing is waited
/// @param jitter01  0…1, beyond is cut; 1 takes the whole 20 % off
Seconds retry_delay(int failures, double jitter01);

/// What is remembered of a letter's way when only the mail's health is asked for.
struct Delivery {
  Instant decided;
  State state = State::waiting;
  std::optional<Instant> ended;
};
/// How long a letter may wait before that is trouble of its own.
constexpr Seconds trouble_after{6 * 3600};
/// Episodes of mail_trouble: from the decision of a letter that waited 6 h until all such letters
/// were accepted. One that was parked after so long a wait counts until the next acceptance of any
/// letter: giving up is no recovery. Letters held for a digest wait on purpose and do not count.
/// @param deliveries  of the last days, any order; what is older is not seen
std::vector<alerts::Episode> mail_troubles(std::span<const Delivery> deliveries, Instant now);

const char* name_of(State state);
std::optional<State> state_from(std::string_view word);

}  // namespace antherd::outbox
