// The arrows between a letter's states, and those of the server's own clock. See outbox.hpp.
#include <algorithm>
#include <array>
#include <cmath>

#include "core/outbox/outbox.hpp"

namespace antherd::outbox {
namespace {

constexpr std::array<int, 6> first_waits_min{1, 2, 5, 10, 20, 30};
constexpr double longest_cut = 0.2;
constexpr int doubts_allowed = 2;
// A letter that the server has read and put off more often than this steps aside while the line
// fails, one minute longer than the line's longest wait: a text that a server chokes on must not
// stand for ever in front of all others.
constexpr int tries_in_front = 3;
constexpr Seconds step_aside{31 * 60};
// Stored with the letter, and shown: what tells such a wait from one of another clock.
constexpr const char* quiet_hours = "waits for the end of the quiet hours";

Item park(Item item, Instant at, std::string sentence) {
  item.state = State::parked;
  item.ended = at;
  item.answer = std::move(sentence);
  return item;
}

/// A clear answer came: this try, at least, is not in doubt.
void take_back_doubt(Item& item) {
  if (item.state == State::in_doubt) item.doubts = std::max(0, item.doubts - 1);
}

Item put_off(Item item, const Receipt& receipt) {
  take_back_doubt(item);
  item.state = State::waiting;
  item.next_try = receipt.at;
  if (receipt.ending == Ending::settings_trouble && receipt.concern == Concern::recipient) {
    item.next_try = receipt.at + trouble_rest;  // its own hour: the others are asked for at once
  } else if (receipt.ending == Ending::wait) {
    if (receipt.concern == Concern::recipient) {
      item.next_try = receipt.at + retry_delay(item.attempts, 0.0);
    } else if (receipt.concern == Concern::letter && item.attempts > tries_in_front) {
      item.next_try = receipt.at + step_aside;
    }
  }
  return item;
}

Item rest_in_doubt(Item item, const Receipt& receipt) {
  if (item.state == State::sending) ++item.doubts;
  item.state = State::in_doubt;
  item.next_try = receipt.at + doubt_rest;
  if (item.doubts < doubts_allowed) return item;
  return park(std::move(item), receipt.at,
              receipt.sentence + "; twice no answer came, so it is not sent again: \"" +
                  item.letter.subject + "\" to " + item.letter.recipient +
                  " may have arrived once, twice or not at all");
}

}  // namespace

Item take(Item item, Instant now) {
  if (item.state != State::waiting && item.state != State::in_doubt) return item;
  item.state = State::sending;
  ++item.attempts;
  if (!item.first_try) item.first_try = now;
  return item;
}

Item doubt(Item item, Instant now) {
  if (item.state != State::sending) return item;
  item.state = State::in_doubt;
  ++item.doubts;
  item.next_try = now + doubt_rest;
  return item;
}

Item receive(Item item, const Receipt& receipt) {
  if (item.state == State::sent) return item;
  if (receipt.ending == Ending::accepted) {
    take_back_doubt(item);
    item.state = State::sent;
    item.ended = receipt.at;
    item.answer = receipt.sentence;
    return item;
  }
  if (item.state != State::sending && item.state != State::in_doubt) return item;
  item.answer = receipt.sentence;
  switch (receipt.ending) {
    case Ending::parked:
      take_back_doubt(item);
      return park(std::move(item), receipt.at, receipt.sentence);
    case Ending::in_doubt:
      return rest_in_doubt(std::move(item), receipt);
    case Ending::accepted:
    case Ending::wait:
    case Ending::settings_trouble:
      break;
  }
  return put_off(std::move(item), receipt);
}

Line receive(Line line, const Receipt& receipt, double jitter01) {
  const bool troubled = receipt.ending == Ending::settings_trouble;
  const bool about_server =
      receipt.ending == Ending::in_doubt ||
      ((troubled || receipt.ending == Ending::wait) && receipt.concern != Concern::recipient);
  if (receipt.ending == Ending::accepted) line.last_success = receipt.at;
  if (!about_server) {  // it heard us out: the rest follow at once
    line.failures = 0;
    line.next_try.reset();
    line.trouble = troubled ? receipt.sentence : std::string();
    return line;
  }
  ++line.failures;
  line.next_try = receipt.at + retry_delay(line.failures, jitter01);
  if (troubled) {
    line.next_try = receipt.at + trouble_rest;
    line.trouble = receipt.sentence;
  } else if (receipt.ending == Ending::in_doubt || receipt.concern == Concern::letter) {
    line.trouble.clear();  // it came as far as the body: login and certificate are right
  }
  return line;
}

Item recover(Item item, Instant now) {
  if (item.state == State::sending) {
    item.state = State::waiting;
    item.next_try = now;
    item.answer = "antherd was stopped while it was being sent, before the last dot";
  } else if (item.state == State::in_doubt) {
    const std::string sentence = "antherd was stopped before the server's answer was known";
    const Receipt lost{item.id, Ending::in_doubt, Concern::server, 0, sentence, now};
    const Instant rest_over = item.next_try;
    item.answer = sentence;
    item = rest_in_doubt(std::move(item), lost);
    // It rests from its doubt, not from the start: many starts must not put it off for ever.
    item.next_try = std::min(rest_over, item.next_try);
  }
  return item;
}

Line reopen(Line line) {
  line.next_try.reset();
  return line;
}

Item expire(Item item, Instant now) {
  if (item.state != State::waiting && item.state != State::in_doubt) return item;
  const Seconds lived = item.letter.valid_until.value_or(now) - item.letter.decided;
  const auto hours = std::chrono::floor<std::chrono::hours>(lived).count();
  std::string sentence = "expired after " + std::to_string(hours) + " h: \"" + item.letter.subject +
                         "\" to " + item.letter.recipient;
  sentence += item.doubts > 0 ? " may or may not have arrived" : " was not accepted in that time";
  if (!item.answer.empty()) sentence += "; last answer: " + item.answer;
  return park(std::move(item), now, std::move(sentence));
}

Item give_up_recipient(Item item, Instant now) {
  if (item.state == State::sent || item.state == State::parked || item.state == State::merged) {
    return item;
  }
  std::string sentence = item.letter.recipient + " is no longer among the recipients: \"" +
                         item.letter.subject + "\" ";
  sentence += item.doubts > 0 ? "may or may not have arrived" : "was not sent";
  return park(std::move(item), now, std::move(sentence));
}

Item rest_quietly(Item item, Instant until) {
  if (item.state != State::waiting || item.attempts > 0) return item;
  item.next_try = until;
  item.answer = quiet_hours;
  return item;
}

bool rests_quietly(const Item& item) {
  return item.state == State::waiting && item.attempts == 0 && item.answer == quiet_hours;
}

Item hold(Item item) {
  if (item.state != State::waiting || item.attempts > 0) return item;
  item.state = State::held;
  return item;
}

Item merge(Item item, const std::string& digest, Instant now) {
  if (item.state != State::held) return item;
  item.state = State::merged;
  item.digest = digest;
  item.ended = now;
  return item;
}

Item retry(Item item, Instant now) {
  if (item.state == State::sending || item.state == State::sent || item.state == State::merged) {
    return item;
  }
  if (item.letter.valid_until && *item.letter.valid_until <= now) {
    item.letter.valid_until = now + alert_validity;
  }
  item.state = State::waiting;
  item.next_try = now;
  item.ended.reset();
  item.doubts = std::min(item.doubts, doubts_allowed - 1);
  return item;
}

Seconds retry_delay(int failures, double jitter01) {
  if (failures < 1) return Seconds{0};
  const auto step = static_cast<std::size_t>(failures - 1);
  if (step < first_waits_min.size()) return std::chrono::minutes(first_waits_min.at(step));
  const double cut = jitter01 > 0.0 ? std::min(jitter01, 1.0) * longest_cut : 0.0;
  const double longest = 60.0 * first_waits_min.back();
  return Seconds{static_cast<std::int64_t>(std::lround(longest * (1.0 - cut)))};
}

const char* name_of(State state) {
  switch (state) {
    case State::waiting:
      return "waiting";
    case State::sending:
      return "sending";
    case State::in_doubt:
      return "in_doubt";
    case State::sent:
      return "sent";
    case State::parked:
      return "parked";
    case State::held:
      return "held";
    case State::merged:
      return "merged";
  }
  return "";
}

std::optional<State> state_from(std::string_view word) {
  for (State state : {State::waiting, State::sending, State::in_doubt, State::sent, State::parked,
                      State::held, State::merged}) {
    if (word == name_of(state)) return state;
  }
  return std::nullopt;
}

}  // namespace antherd::outbox
