// Every event from every state, by a table drawn by hand from the rules of delivery; and the
// server's own clock.
#include <array>
#include <functional>
#include <set>
#include <vector>

#include "letters_for_tests.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::outbox;
using std::chrono::hours;
using std::chrono::minutes;

namespace {

constexpr Instant later = afternoon + minutes(7);
constexpr std::array all_states{State::waiting, State::sending, State::in_doubt, State::sent,
                                State::parked,  State::held,    State::merged};

Item in_state(State state, int doubts) {
  Item item = item_of(5);
  item.state = state;
  item.doubts = doubts;
  item.attempts = 1;
  item.next_try = afternoon;
  const bool over = state == State::sent || state == State::parked || state == State::merged;
  if (over) item.ended = afternoon;
  return item;
}

struct Event {
  const char* name;
  std::function<Item(Item)> happen;
};

std::function<Item(Item)> ends(Ending ending) {
  return [ending](Item item) { return receive(item, receipt_of(5, ending, later)); };
}

const std::vector<Event>& all_events() {
  static const std::vector<Event> events{
      {"take", [](Item item) { return take(item, later); }},
      {"doubt", [](Item item) { return doubt(item, later); }},
      {"accepted", ends(Ending::accepted)},
      {"wait", ends(Ending::wait)},
      {"refused", ends(Ending::parked)},
      {"answer lost", ends(Ending::in_doubt)},
      {"settings trouble", ends(Ending::settings_trouble)},
      {"recover", [](Item item) { return recover(item, later); }},
      {"expire", [](Item item) { return expire(item, later); }},
      {"retry", [](Item item) { return retry(item, later); }},
      {"merge", [](Item item) { return merge(item, "digest-1", later); }},
      {"recipient gone", [](Item item) { return give_up_recipient(item, later); }}};
  return events;
}

/// One arrow: where an event leads, and what becomes of the doubts.
struct Arrow {
  const char* event;
  State from, to;
  int doubts_before, doubts_after;
};

using enum State;
// All arrows that lead somewhere; every pair that is not listed stays exactly as it was.
const std::vector<Arrow> arrows{
    {"take", waiting, sending, 0, 0},
    {"take", in_doubt, sending, 1, 1},
    {"doubt", sending, in_doubt, 0, 1},
    {"doubt", sending, in_doubt, 1, 2},
    {"accepted", waiting, sent, 0, 0},
    {"accepted", sending, sent, 0, 0},
    {"accepted", in_doubt, sent, 1, 0},
    {"accepted", parked, sent, 0, 0},
    {"wait", sending, waiting, 1, 1},
    {"wait", in_doubt, waiting, 1, 0},  // a clear answer takes this try's doubt back
    {"wait", in_doubt, waiting, 2, 1},  // …but not the earlier one
    {"refused", sending, parked, 0, 0},
    {"refused", in_doubt, parked, 1, 0},
    {"answer lost", sending, in_doubt, 0, 1},
    {"answer lost", sending, parked, 1, 2},
    {"answer lost", in_doubt, in_doubt, 1, 1},
    {"answer lost", in_doubt, parked, 2, 2},
    {"settings trouble", sending, waiting, 0, 0},
    {"settings trouble", in_doubt, waiting, 1, 0},
    {"recover", sending, waiting, 1, 1},
    {"recover", in_doubt, in_doubt, 1, 1},
    {"recover", in_doubt, parked, 2, 2},
    {"expire", waiting, parked, 0, 0},
    {"expire", in_doubt, parked, 1, 1},
    {"retry", waiting, waiting, 0, 0},
    {"retry", in_doubt, waiting, 1, 1},
    {"retry", parked, waiting, 2, 1},  // may come into doubt once more
    {"retry", held, waiting, 0, 0},
    {"merge", held, merged, 0, 0},
    {"recipient gone", waiting, parked, 0, 0},
    {"recipient gone", sending, parked, 0, 0},
    {"recipient gone", in_doubt, parked, 1, 1},
    {"recipient gone", held, parked, 0, 0},
    {"accepted", held, sent, 0, 0},
    {"accepted", merged, sent, 0, 0},
};

const Event& event_named(std::string_view name) {
  for (const Event& event : all_events()) {
    if (name == event.name) return event;
  }
  FAIL("no event " << name);
  return all_events().front();
}

bool same(const Item& one, const Item& other) {
  return one.state == other.state && one.attempts == other.attempts && one.doubts == other.doubts &&
         one.next_try == other.next_try && one.first_try == other.first_try &&
         one.ended == other.ended && one.answer == other.answer && one.digest == other.digest &&
         one.letter.valid_until == other.letter.valid_until;
}

}  // namespace

TEST_CASE("each arrow leads where it is drawn") {
  for (const Arrow& arrow : arrows) {
    INFO(arrow.event << " from " << name_of(arrow.from) << " with " << arrow.doubts_before);
    const Item after = event_named(arrow.event).happen(in_state(arrow.from, arrow.doubts_before));
    CHECK(std::string(name_of(after.state)) == name_of(arrow.to));
    CHECK(after.doubts == arrow.doubts_after);
    CHECK(after.ended.has_value() ==
          (arrow.to == sent || arrow.to == parked || arrow.to == merged));
    CHECK(after.digest == (arrow.to == merged ? "digest-1" : ""));
    CHECK(after.letter.id == "heat-5");
  }
}

TEST_CASE("every other pair of state and event changes nothing") {
  std::set<std::pair<std::string, State>> drawn;
  for (const Arrow& arrow : arrows) drawn.emplace(arrow.event, arrow.from);
  int pairs = 0, still = 0;
  for (State state : all_states) {
    for (const Event& event : all_events()) {
      ++pairs;
      if (drawn.contains({event.name, state})) continue;
      ++still;
      INFO(event.name << " from " << name_of(state));
      const Item before = in_state(state, 1);
      CHECK(same(event.happen(before), before));
    }
  }
  CHECK(pairs == 84);
  CHECK(still == 84 - static_cast<int>(drawn.size()));
  CHECK(still == 54);
}

TEST_CASE("only a letter that was never tried is held for a digest") {
  CHECK(hold(item_of(1)).state == State::held);
  CHECK(hold(in_state(waiting, 0)).state == waiting);  // tried once
  for (State state : {sending, in_doubt, sent, parked, merged}) {
    CHECK(hold(in_state(state, 0)).state == state);
  }
}

TEST_CASE("take counts the try and keeps the first") {
  const Item once = take(item_of(1), later);
  CHECK(once.attempts == 1);
  CHECK(once.first_try == later);
  const Item back = receive(once, receipt_of(1, Ending::wait, later));
  const Item twice = take(back, later + minutes(1));
  CHECK(twice.attempts == 2);
  CHECK(twice.first_try == later);
}

TEST_CASE("a lost answer rests 10 min, then the second one parks and names the letter") {
  Item item = doubt(take(item_of(1), afternoon), later);
  CHECK(item.next_try == later + minutes(10));
  item = receive(item, receipt_of(1, Ending::in_doubt, later + minutes(9)));
  CHECK(item.state == in_doubt);
  CHECK(item.next_try == later + minutes(19));
  item = doubt(take(item, later + minutes(19)), later + minutes(20));
  CHECK(item.doubts == 2);
  item = receive(item, receipt_of(1, Ending::in_doubt, later + minutes(30)));
  CHECK(item.state == parked);
  CHECK(item.ended == later + minutes(30));
  CHECK(item.answer.find("HEAT Severe: north bench") != std::string::npos);
  CHECK(item.answer.find("owner@larkspur.example") != std::string::npos);
}

TEST_CASE("after a start: sending goes back, a doubt rests from when it arose") {
  const Item cut = recover(take(item_of(1), afternoon), later);
  CHECK(cut.state == waiting);
  CHECK(cut.next_try == later);

  const Item doubtful = doubt(take(item_of(1), afternoon), afternoon);
  CHECK(recover(doubtful, afternoon + minutes(4)).next_try == afternoon + minutes(10));
  // many starts in a row do not put it off
  Item often = doubtful;
  for (int start = 1; start <= 30; ++start) often = recover(often, afternoon + minutes(start));
  CHECK(often.doubts == 1);
  CHECK(often.next_try == afternoon + minutes(10));
  // a clock that was ahead by years when the doubt arose does not hold it for years
  Item ahead = doubt(take(item_of(1), afternoon), afternoon + hours(24 * 365));
  CHECK(recover(ahead, afternoon).next_try == afternoon + minutes(10));
}

TEST_CASE("an expired letter is named, and a person's wish gives it 72 h again") {
  Item item = receive(take(item_of(1), afternoon),
                      receipt_of(1, Ending::wait, later, Concern::server, "no route"));
  const Instant end = afternoon + hours(72);
  item = expire(item, end);
  CHECK(item.state == parked);
  CHECK(item.answer.starts_with("expired after 72 h: \"HEAT Severe: north bench"));
  CHECK(item.answer.find("to owner@larkspur.example was not accepted") != std::string::npos);
  CHECK(item.answer.ends_with("last answer: no route"));
  item = retry(item, end + hours(1));
  CHECK(item.next_try == end + hours(1));
  CHECK(item.letter.valid_until == end + hours(73));
  CHECK_FALSE(item.ended);
  const std::vector items{item};
  CHECK(plan(items, Line{}, end + hours(1)).send == 1);
  // a letter in doubt does not claim that it never arrived
  CHECK(expire(doubt(take(item_of(2), afternoon), later), end)
            .answer.find("may or may not have arrived") != std::string::npos);
}

TEST_CASE("whose wait it is") {
  const Item taken = take(item_of(1), afternoon);
  const Receipt server = receipt_of(1, Ending::wait, later, Concern::server);
  const Receipt recipient = receipt_of(1, Ending::wait, later, Concern::recipient);
  const Receipt letter = receipt_of(1, Ending::wait, later, Concern::letter);

  SECTION("the server's: the line waits, the letter is due whenever the line is") {
    CHECK(receive(taken, server).next_try == later);
    CHECK(receive(Line{}, server, 0).next_try == later + minutes(1));
    CHECK(receive(Line{}, server, 0).failures == 1);
  }
  SECTION("the recipient's: the letter waits, the line is free") {
    CHECK(receive(taken, recipient).next_try == later + minutes(1));
    Item again = taken;
    again.attempts = 4;
    CHECK(receive(again, recipient).next_try == later + minutes(10));
    const Line line{4, later, std::nullopt, "old trouble"};
    CHECK(receive(line, recipient, 0) == Line{});
  }
  SECTION("trouble with one recipient: the letter waits its hour, the line is free and says so") {
    const Receipt trouble =
        receipt_of(1, Ending::settings_trouble, later, Concern::recipient, "no relay");
    CHECK(receive(taken, trouble).state == waiting);
    CHECK(receive(taken, trouble).next_try == later + minutes(60));
    const Line line{4, later, std::nullopt, "old trouble"};
    CHECK(receive(line, trouble, 0) == Line{0, std::nullopt, std::nullopt, "no relay"});
  }
  SECTION("a letter read and put off: the line's at first, then the letter steps aside") {
    Item again = taken;
    again.attempts = 3;
    CHECK(receive(again, letter).next_try == later);
    again.attempts = 4;
    CHECK(receive(again, letter).next_try == later + minutes(31));
    CHECK(receive(Line{}, letter, 0).next_try == later + minutes(1));
  }
}

TEST_CASE("the line's clock") {
  SECTION("acceptance and refusal of a letter both free it") {
    const Line down{9, later + minutes(30), afternoon, "login refused"};
    const Line up = receive(down, receipt_of(1, Ending::accepted, later), 0);
    CHECK(up == Line{0, std::nullopt, later, ""});
    const Line refused = receive(down, receipt_of(1, Ending::parked, later), 0);
    CHECK(refused == Line{0, std::nullopt, afternoon, ""});
  }
  SECTION("settings trouble: hourly, and it says so until the server shows otherwise") {
    Line line = receive(
        Line{}, receipt_of(1, Ending::settings_trouble, later, Concern::server, "bad login"), 1);
    CHECK(line.next_try == later + minutes(60));
    CHECK(line.trouble == "bad login");
    line = receive(line, receipt_of(1, Ending::wait, later + minutes(60)), 0);
    CHECK(line.trouble == "bad login");
    CHECK(line.next_try == later + minutes(62));
    const Line doubtful = receive(line, receipt_of(1, Ending::in_doubt, later), 0);
    CHECK(doubtful.trouble.empty());
    CHECK(receive(line, receipt_of(1, Ending::accepted, later), 0).trouble.empty());
  }
  SECTION("a lost answer is the server's failure too") {
    CHECK(receive(Line{}, receipt_of(1, Ending::in_doubt, later), 0).failures == 1);
  }
  SECTION("new settings are tried at once") {
    const Line rests{3, later + minutes(60), afternoon, "bad login"};
    CHECK(reopen(rests) == Line{3, std::nullopt, afternoon, "bad login"});
  }
}

TEST_CASE("the timetable: 1, 2, 5, 10, 20, 30 min, then 30 min − 0…20 %") {
  const std::array expected{0, 1, 2, 5, 10, 20, 30, 30, 30};
  for (int failures = 0; failures < 9; ++failures) {
    INFO("after " << failures << " failures");
    CHECK(retry_delay(failures, 0.0) == minutes(expected.at(static_cast<std::size_t>(failures))));
  }
  CHECK(retry_delay(6, 1.0) == minutes(30));  // jitter only after the drawn ones
  CHECK(retry_delay(7, 1.0) == minutes(24));  // 30 min − 20 %
  CHECK(retry_delay(7, 0.5) == minutes(27));
  CHECK(retry_delay(1000000, 0.0) == minutes(30));
  CHECK(retry_delay(7, 5.0) == minutes(24));
  CHECK(retry_delay(7, -5.0) == minutes(30));
  CHECK(retry_delay(-3, 0.0) == Seconds(0));
}

TEST_CASE("a state's word leads back to it") {
  for (State state : all_states) CHECK(state_from(name_of(state)) == state);
  CHECK_FALSE(state_from("delivered"));
  CHECK_FALSE(state_from(""));
}
