// When the mail is in trouble: worked out by hand from what became of a few letters.
#include <vector>

#include "letters_for_tests.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::outbox;
using std::chrono::hours;
using std::chrono::minutes;

namespace {

Instant at(int hour) { return afternoon + hours(hour); }

Delivery gone(int decided, State state, int ended) { return {at(decided), state, at(ended)}; }
Delivery open_since(int decided, State state = State::waiting) {
  return {at(decided), state, std::nullopt};
}

/// "opened@6 closed@30 " in hours after the afternoon, of all episodes.
std::string told(const std::vector<Delivery>& deliveries, int now) {
  std::string text;
  for (const alerts::Episode& episode : mail_troubles(deliveries, at(now))) {
    CHECK(episode.kind == alerts::Kind::mail_trouble);
    CHECK(episode.subject == "antherd");
    CHECK(episode.peak == alerts::Level::moderate);
    CHECK(episode.changes.back().at == episode.closed.value_or(episode.changes.back().at));
    for (const alerts::Change& change : episode.changes) {
      text += std::string(alerts::name_of(change.phase)) + "@" +
              std::to_string((change.at - afternoon).count() / 3600) + " ";
    }
  }
  return text;
}

}  // namespace

TEST_CASE("a letter that waits 6 h is trouble, from then on until it is accepted") {
  CHECK(told({}, 100).empty());
  CHECK(told({open_since(0)}, 5).empty());
  CHECK(mail_troubles(std::vector{open_since(0)}, at(6) - minutes(1)).empty());
  CHECK(told({open_since(0)}, 6) == "opened@6 ");
  CHECK(told({open_since(0, State::in_doubt)}, 60) == "opened@6 ");
  CHECK(told({gone(0, State::sent, 30)}, 40) == "opened@6 closed@30 ");
  CHECK(told({gone(0, State::sent, 5)}, 40).empty());
  CHECK(mail_troubles(std::vector{open_since(3)}, at(12)).front().start == at(3));
}

TEST_CASE("several letters that wait are one trouble, over when the last of them has gone") {
  CHECK(told({gone(0, State::sent, 50), gone(10, State::sent, 51), gone(45, State::sent, 52)},
             60) == "opened@6 closed@52 ");
  CHECK(told({gone(0, State::sent, 50), open_since(10)}, 60) == "opened@6 ");
  CHECK(told({gone(0, State::sent, 10), gone(40, State::sent, 50)}, 60) ==
        "opened@6 closed@10 opened@46 closed@50 ");
}

TEST_CASE("giving a letter up is no recovery: the next acceptance is") {
  CHECK(told({gone(0, State::parked, 72)}, 100) == "opened@6 ");
  CHECK(told({gone(0, State::parked, 72), gone(90, State::sent, 91)}, 100) ==
        "opened@6 closed@91 ");
  CHECK(told({gone(0, State::parked, 1)}, 100).empty());  // refused at once: no long wait
}

TEST_CASE("what waits for a digest on purpose is no trouble of the mail") {
  CHECK(told({open_since(0, State::held), gone(0, State::merged, 12)}, 40).empty());
}
