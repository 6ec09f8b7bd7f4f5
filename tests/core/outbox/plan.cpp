// Which letter goes next, and a server that is away for two days.
#include <map>
#include <random>
#include <vector>

#include "letters_for_tests.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::outbox;
using alerts::Severity;
using std::chrono::hours;
using std::chrono::minutes;

namespace {

/// A carrier without a thread: asks the plan, lets `server` answer at once, keeps the changes.
struct Carrier {
  std::vector<Item> items;
  Line line;
  std::vector<std::int64_t> accepted;    // in order of acceptance
  std::map<std::int64_t, Instant> when;  // of acceptance
  int conversations = 0;
  std::mt19937 dice{20260714};

  Item& item(std::int64_t id) {
    for (Item& each : items) {
      if (each.id == id) return each;
    }
    throw std::out_of_range("no such letter");
  }

  /// Everything that is to be done at `now`. @return when to look again
  std::optional<Instant> turn(Instant now, auto&& server) {
    while (true) {
      const Plan next = plan(items, line, now);
      for (std::int64_t id : next.expired) item(id) = expire(item(id), now);
      if (!next.send) return next.look_again;
      ++conversations;
      Item& goes = item(*next.send);
      goes = take(goes, now);
      const Receipt receipt = server(goes, now);
      goes = receive(goes, receipt);
      line = receive(line, receipt, std::uniform_real_distribution<>(0, 1)(dice));
      if (goes.state == State::sent) {
        accepted.push_back(goes.id);
        when[goes.id] = now;
      }
    }
  }

  /// Turns from event to event until `end`, as the service's loop would.
  void run(Instant from, Instant end, auto&& server) {
    for (Instant now = from; now <= end;) {
      const std::optional<Instant> next = turn(now, server);
      now = next ? std::max(*next, now + Seconds(1)) : end + Seconds(1);
    }
  }
};

Receipt accepts(const Item& item, Instant now) {
  return receipt_of(item.id, Ending::accepted, now);
}
Receipt away(const Item& item, Instant now) { return receipt_of(item.id, Ending::wait, now); }

}  // namespace

TEST_CASE("the gravest goes first, then the oldest, then the first stored") {
  Carrier carrier;
  carrier.items = {item_of(1, Severity::minor, afternoon - hours(5)),
                   item_of(2, Severity::severe, afternoon),
                   item_of(3, Severity::extreme, afternoon),
                   item_of(4, Severity::severe, afternoon - hours(1)),
                   item_of(5, Severity::severe, afternoon),
                   item_of(6, Severity::moderate)};
  CHECK_FALSE(carrier.turn(afternoon, accepts));
  CHECK(carrier.accepted == std::vector<std::int64_t>{3, 4, 2, 5, 6, 1});
}

TEST_CASE("nothing goes before its time, while one is under way, or when it has ended") {
  std::vector items{item_of(1), item_of(2)};
  items[0].next_try = afternoon + minutes(3);
  items[1].state = State::parked;
  CHECK_FALSE(plan(items, Line{}, afternoon).send);
  CHECK(plan(items, Line{}, afternoon).look_again == afternoon + minutes(3));
  CHECK(plan(items, Line{}, afternoon + minutes(3)).send == 1);
  items[1] = take(item_of(2), afternoon);
  CHECK_FALSE(plan(items, Line{}, afternoon + minutes(3)).send);
  CHECK_FALSE(plan({}, Line{}, afternoon).look_again);
}

TEST_CASE("while the line fails only the gravest probes; on acceptance the rest follow at once") {
  Carrier carrier;
  for (int id = 1; id <= 6; ++id) carrier.items.push_back(item_of(id, Severity::moderate));
  carrier.items.push_back(item_of(7, Severity::extreme));
  const auto next = carrier.turn(afternoon, away);
  CHECK(carrier.conversations == 1);
  CHECK(carrier.item(7).attempts == 1);
  CHECK(carrier.item(1).attempts == 0);
  CHECK(next == afternoon + minutes(1));
  carrier.turn(*next, away);
  CHECK(carrier.conversations == 2);
  carrier.turn(*next + minutes(2), accepts);
  CHECK(carrier.accepted == std::vector<std::int64_t>{7, 1, 2, 3, 4, 5, 6});
}

TEST_CASE("one recipient who is put off or refused does not stop the others") {
  Carrier carrier;
  carrier.items = {item_of(1, Severity::extreme), item_of(2, Severity::extreme), item_of(3)};
  const auto server = [](const Item& item, Instant now) {
    if (item.id == 1) return receipt_of(1, Ending::wait, now, Concern::recipient);
    if (item.id == 2) return receipt_of(2, Ending::parked, now, Concern::recipient);
    return accepts(item, now);
  };
  const auto next = carrier.turn(afternoon, server);
  CHECK(carrier.accepted == std::vector<std::int64_t>{3});
  CHECK(carrier.item(2).state == State::parked);
  CHECK(next == afternoon + minutes(1));
  carrier.turn(*next, accepts);
  CHECK(carrier.accepted == std::vector<std::int64_t>{3, 1});
}

TEST_CASE("a text that the server chokes on does not stand in front of the others for ever") {
  Carrier carrier;
  carrier.items = {item_of(1, Severity::extreme), item_of(2), item_of(3)};
  carrier.run(afternoon, afternoon + hours(3), [](const Item& item, Instant now) {
    return item.id == 1 ? receipt_of(1, Ending::wait, now, Concern::letter) : accepts(item, now);
  });
  CHECK(carrier.accepted == std::vector<std::int64_t>{2, 3});
  CHECK(carrier.when[3] <= afternoon + minutes(1 + 2 + 5 + 10 + 1));
  CHECK(carrier.item(1).state == State::waiting);
}

TEST_CASE("two days offline: all arrive within 31 min of the return, gravest first, then oldest") {
  for (unsigned seed = 1; seed <= 200; ++seed) {
    INFO("seed " << seed);
    Carrier carrier;
    carrier.dice.seed(seed);
    const Instant back = afternoon + hours(48) + minutes(seed);
    // a letter an hour, of changing severity; those decided in the time away
    for (int id = 1; id <= 48; ++id) {
      carrier.items.push_back(
          item_of(id, static_cast<Severity>(id % 4), afternoon + hours(id - 1)));
    }
    // decided letters come in one by one: before their hour they are not there
    std::vector<Item> coming = std::move(carrier.items);
    carrier.items.clear();
    for (const Item& item : coming) {
      carrier.items.push_back(item);
      carrier.run(item.letter.decided, item.letter.decided + hours(1) - Seconds(1), away);
    }
    const int tries_away = carrier.conversations;
    CHECK(tries_away < 48 * 60 / 24 + 7);  // the line's clock, not each letter's
    CHECK(tries_away > 48 * 60 / 30);
    carrier.run(afternoon + hours(48), back + hours(1), [&](const Item& item, Instant now) {
      return now < back ? away(item, now) : accepts(item, now);
    });
    REQUIRE(carrier.accepted.size() == 48);
    CHECK(carrier.when[carrier.accepted.front()] >= back);
    CHECK(carrier.when[carrier.accepted.back()] <= back + minutes(31));
    for (std::size_t n = 1; n < carrier.accepted.size(); ++n) {
      const letters::Letter& before = carrier.item(carrier.accepted[n - 1]).letter;
      const letters::Letter& after = carrier.item(carrier.accepted[n]).letter;
      CHECK(before.severity >= after.severity);
      if (before.severity == after.severity) CHECK(before.decided < after.decided);
    }
  }
}

TEST_CASE("settings trouble keeps all letters and asks once an hour") {
  Carrier carrier;
  carrier.items = {item_of(1), item_of(2), item_of(3, Severity::severe)};
  carrier.run(afternoon, afternoon + hours(24), [](const Item& item, Instant now) {
    return receipt_of(item.id, Ending::settings_trouble, now, Concern::server, "login refused");
  });
  CHECK(carrier.conversations == 25);  // at once, then at each full hour after it
  CHECK(carrier.line.trouble == "login refused");
  for (const Item& item : carrier.items) CHECK(item.state == State::waiting);
}

TEST_CASE("recipients that a server without login does not serve do not stop the others") {
  const auto server = [](const Item& item, Instant now) {
    return item.id >= 10 ? receipt_of(item.id, Ending::settings_trouble, now, Concern::recipient)
                         : accepts(item, now);
  };
  Carrier carrier;
  for (int id = 10; id < 16; ++id) carrier.items.push_back(item_of(id, Severity::extreme));
  carrier.items.push_back(item_of(1));
  carrier.items.push_back(item_of(2));
  const auto next = carrier.turn(afternoon, server);
  CHECK(carrier.accepted ==
        std::vector<std::int64_t>{1, 2});  // at once, though the others are graver
  CHECK(next == afternoon + hours(1));
  // Kept, not parked, and asked for each hour: the server may be told of them.
  carrier.run(*next, afternoon + hours(23), server);
  for (int id = 10; id < 16; ++id) {
    CHECK(carrier.item(id).state == State::waiting);
    CHECK(carrier.item(id).attempts == 24);
  }
  // What is decided later is not held up by them either.
  carrier.items.push_back(item_of(3, Severity::minor, afternoon + hours(23) + minutes(5)));
  carrier.turn(afternoon + hours(23) + minutes(5), server);
  CHECK(carrier.accepted.back() == 3);
}

TEST_CASE("what is too old is expired, never sent and never dropped") {
  Carrier carrier;
  carrier.items = {item_of(1, Severity::extreme), item_of(2)};
  carrier.items[1].letter.valid_until.reset();  // a weekly log has no end
  carrier.run(afternoon, afternoon + hours(80), away);
  CHECK(carrier.item(1).state == State::parked);
  CHECK(carrier.item(1).ended == afternoon + hours(72));
  CHECK(carrier.item(2).state == State::waiting);
  // the moment of expiry is looked for even while nothing is due
  std::vector items{item_of(1)};
  items[0].state = State::in_doubt;
  items[0].next_try = afternoon + hours(72) + minutes(5);
  const Line rests{8, afternoon + hours(72) + minutes(20), std::nullopt, ""};
  CHECK(plan(items, rests, afternoon + hours(72) - minutes(1)).look_again == afternoon + hours(72));
  CHECK(plan(items, rests, afternoon + hours(72)).expired == std::vector<std::int64_t>{1});
}

TEST_CASE("a wait written by a clock that was ahead is over") {
  std::vector items{item_of(1)};
  const Line years_ahead{8, afternoon + hours(24 * 365 * 20), std::nullopt, ""};
  CHECK(plan(items, years_ahead, afternoon).send == 1);
  items[0].next_try = afternoon + hours(24 * 365 * 20);
  CHECK(plan(items, Line{}, afternoon).send == 1);
  // an honest hour is waited out
  CHECK_FALSE(plan(items, Line{1, afternoon + hours(1), std::nullopt, ""}, afternoon).send);
}

TEST_CASE("quiet hours are waited out, all of them") {
  const Instant evening = afternoon + hours(7);  // 22:00 on the farm
  std::vector items{rest_quietly(item_of(1), evening + hours(9))};
  CHECK(rests_quietly(items[0]));
  // Nine hours, eight of them longer than any rest of the server's.
  for (int hour = 0; hour < 9; ++hour) {
    const Plan night = plan(items, Line{}, evening + hours(hour));
    CHECK_FALSE(night.send);
    CHECK(night.look_again == evening + hours(9));
  }
  CHECK(plan(items, Line{}, evening + hours(9)).send == 1);
  // The longest: all but a minute of the day on which the clock is put back.
  items[0] = rest_quietly(item_of(1), evening + hours(25) - minutes(1));
  CHECK_FALSE(plan(items, Line{}, evening).send);
  // Longer was written by a clock that was ahead.
  items[0] = rest_quietly(item_of(1), evening + hours(26));
  CHECK(plan(items, Line{}, evening).send == 1);
  // Once tried it waits by the timetable like any other; a person's wish ends its rest at once.
  items[0] = receive(take(rest_quietly(item_of(1), evening + hours(9)), evening + hours(9)),
                     receipt_of(1, Ending::wait, evening + hours(9)));
  CHECK_FALSE(rests_quietly(items[0]));
  CHECK(plan({{retry(rest_quietly(item_of(1), evening + hours(9)), evening)}}, Line{}, evening)
            .send == 1);
}

TEST_CASE("a letter in doubt goes once more after its rest") {
  std::vector items{doubt(take(item_of(1), afternoon), afternoon)};
  CHECK_FALSE(plan(items, Line{}, afternoon + minutes(9)).send);
  CHECK(plan(items, Line{}, afternoon + minutes(9)).look_again == afternoon + minutes(10));
  CHECK(plan(items, Line{}, afternoon + minutes(10)).send == 1);
}
