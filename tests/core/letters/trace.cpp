// From a letter back to the entries of the ledger that it was made of.
#include <algorithm>

#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;
using alerts::Kind;
using alerts::Saying;
using risk::Level;

namespace {

alerts::Telling southern(alerts::Telling telling) {
  telling.subject = "south bench";
  telling.episode += " south";
  return telling;
}

letters::Recipient only(const std::string& field) {
  letters::Recipient recipient = scene::owner();
  recipient.address = "foreman@larkspur.example";
  recipient.fields = {field};
  return recipient;
}

/// A farm's ledger, and the letters of one recipient by kind.
struct Told {
  letters::Desk desk = scene::desk();
  letters::Recipient recipient = scene::owner();
  std::vector<alerts::Said> ledger;
  std::vector<letters::Letter> made;

  void turn(const std::vector<alerts::Telling>& tellings, Instant now) {
    desk.now = now;
    for (const auto& telling : tellings) ledger.push_back(alerts::record_of(telling, now));
    for (auto& letter : letters::compose(tellings, std::vector{recipient}, desk)) {
      made.push_back(std::move(letter));
    }
  }
  /// Subjects and levels of what a letter spoke of.
  std::vector<std::pair<std::string, Level>> traced(const letters::Letter& letter) const {
    letters::Desk little;  // what a command knows
    little.farm = desk.farm;
    little.stations["bench"].fields = desk.stations.at("bench").fields;
    std::vector<std::pair<std::string, Level>> found;
    for (const auto& telling : letters::trace(letter, recipient, ledger, little)) {
      found.emplace_back(telling.subject, telling.level);
    }
    return found;
  }
};

using Spoken = std::vector<std::pair<std::string, Level>>;

}  // namespace

TEST_CASE("a letter is traced to the fields that its recipient gets, and to no other") {
  const std::vector tellings{southern(scene::heat(Saying::opened, Level::severe)),
                             scene::heat(Saying::raised, Level::extreme),
                             scene::humid(Saying::reminder, Level::moderate),
                             scene::silent(Saying::opened)};
  Told all, part;
  part.recipient = only("south bench");
  for (Told* told : {&all, &part}) told->turn(tellings, scene::at(14, 16, 5));
  REQUIRE(all.made.size() == 3);
  CHECK(all.traced(all.made[0]) ==
        Spoken{{"north bench", Level::extreme}, {"south bench", Level::severe}});
  CHECK(all.traced(all.made[1]) == Spoken{{"north bench", Level::moderate}});
  CHECK(all.traced(all.made[2]) == Spoken{{"bench", Level::severe}});
  REQUIRE(part.made.size() == 2);
  CHECK(part.traced(part.made[0]) == Spoken{{"south bench", Level::severe}});
  CHECK(part.traced(part.made[1]) == Spoken{{"bench", Level::severe}});
}

TEST_CASE("a letter that quiet hours held back is traced to its own moment, not to the last") {
  Told told;
  told.turn({scene::heat(Saying::opened, Level::severe)}, scene::at(14, 22, 30));
  told.turn({southern(scene::heat(Saying::opened, Level::moderate))}, scene::at(15, 1));
  for (auto& letter : told.made) letter.decided = scene::at(15, 6);
  CHECK(told.traced(told.made[0]) == Spoken{{"north bench", Level::severe}});
  CHECK(told.traced(told.made[1]) == Spoken{{"south bench", Level::moderate}});
}

TEST_CASE("two turns within one second are told apart") {
  Told told;
  const Instant now = scene::at(14, 16, 5);
  told.turn({scene::heat(Saying::opened, Level::severe)}, now);
  told.turn({southern(scene::heat(Saying::opened, Level::severe))}, now);
  REQUIRE(told.made.size() == 2);
  CHECK(told.traced(told.made[0]) == Spoken{{"north bench", Level::severe}});
  CHECK(told.traced(told.made[1]) == Spoken{{"south bench", Level::severe}});
}

TEST_CASE("late news and notices are traced as well") {
  Told told;
  alerts::Telling late = scene::heat(Saying::learned_late, Level::severe);
  late.late = true;
  late.changes = {{scene::at(12, 15), alerts::Phase::opened, Level::severe, {}, 36.0, ""}};
  alerts::Telling near = scene::notice(Kind::stage, "window-near");
  near.episode = "stage/north bench/window-near/2026-07-12";
  near.subject = "north bench";
  alerts::Telling opens = near;
  opens.key = "window-opens";
  opens.episode = "stage/north bench/window-opens/2026-07-14";
  near.late = true;
  const Instant now = scene::at(14, 16, 5);
  near.about = now - alerts::Policy{}.late_after - Seconds{1};
  opens.about = now - alerts::Policy{}.late_after;
  told.turn({late, near, opens}, now);
  REQUIRE(told.made.size() == 2);
  CHECK(told.traced(told.made[0]) == Spoken{{"north bench", Level::none}});
  CHECK(told.made[1].kind == "learned_late");
  CHECK(told.traced(told.made[1]) ==
        Spoken{{"north bench", Level::severe}, {"north bench", Level::none}});
}

TEST_CASE("what cannot be traced surely is not guessed at") {
  Told told;
  told.turn({scene::heat(Saying::opened, Level::severe),
             southern(scene::heat(Saying::opened, Level::severe))},
            scene::at(14, 16, 5));
  REQUIRE(told.made.size() == 1);
  Told changed = told;
  changed.desk.farm = "Camas Bench";
  CHECK(changed.traced(told.made[0]).empty());
  changed = told;
  changed.recipient.fields = {"south bench"};
  CHECK(changed.traced(told.made[0]).empty());
  changed = told;
  changed.ledger.pop_back();
  CHECK(changed.traced(told.made[0]).empty());
  changed = told;
  for (auto& entry : changed.ledger) entry.at += Seconds{60};  // said after the letter
  CHECK(changed.traced(told.made[0]).empty());
}
