// One who is no longer among the recipients gets no letter that still waited.
#include <algorithm>

#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant noon = farm_time("2026-07-14 12:05");
constexpr const char* hand = "hand@larkspur.example";

Farm with_hand(bool there) {
  Farm farm;
  farm.mail = "server = \"smtp://localhost:2525\"\nplain = true\n";
  if (there) farm.recipients += "[[recipient]]\naddress = \"hand@larkspur.example\"\n";
  return farm;
}

outbox::Item letter_to(const std::string& address, const std::string& id, outbox::State state) {
  outbox::Item item;
  item.letter.id = id;
  item.letter.recipient = address;
  item.letter.subject = "Heat Severe: " + id;
  item.letter.body = "north bench\n";
  item.letter.kind = "heat";
  item.letter.severity = alerts::Severity::severe;
  item.letter.decided = item.next_try = noon;
  item.letter.valid_until = noon + hours{72};
  item.letter.still = "It held.";
  item.state = state;
  return item;
}

}  // namespace

TEST_CASE("letters that wait for a former recipient are parked, and a return revives none") {
  Bench bench(with_hand(true));
  bench.open(noon);
  bench.turn(noon);
  std::vector<std::string> handed;
  bench.desk->on_send([&](mail::Server, std::int64_t, letters::Letter letter) {
    handed.push_back(letter.recipient);
  });
  store::Decision decision;
  decision.letters = {letter_to(hand, "one", outbox::State::waiting),
                      letter_to(hand, "two", outbox::State::held),
                      letter_to("owner@larkspur.example", "three", outbox::State::waiting)};
  REQUIRE(bench.desk->store().save(decision));
  const bool by_reload = GENERATE(true, false);
  const auto settle = [&](bool there, Instant at) {
    bench.settings = settings_in(bench.folder, with_hand(there));
    if (by_reload) {
      bench.desk->reload(at);
      return;
    }
    bench.close(at);
    bench.open(at);
    bench.desk->on_send([&](mail::Server, std::int64_t, letters::Letter letter) {
      handed.push_back(letter.recipient);
    });
  };
  const auto state_of = [&](const std::string& id) {
    for (const auto& item : bench.letters()) {
      if (item.letter.id == id) return item;
    }
    FAIL("no letter " << id);
    return outbox::Item{};
  };
  settle(false, noon + minutes{1});
  for (const char* id : {"one", "two"}) {
    CHECK(state_of(id).state == outbox::State::parked);
    CHECK(state_of(id).answer.find("no longer among the recipients") != std::string::npos);
  }
  CHECK(bench.folder.read("antherd.log").find("no longer among") != std::string::npos);
  bench.turn(noon + minutes{1});
  CHECK(handed == std::vector<std::string>{"owner@larkspur.example"});
  bench.desk->mail_spoken(state_of("three").id,
                          {mail::How::accepted, mail::About::server, 250, "ok", ""},
                          noon + minutes{2});

  settle(true, noon + minutes{3});
  bench.turn(noon + minutes{3});
  CHECK(handed.size() == 1);
  // A person's wish does.
  const auto line = bench.desk->store().line();
  REQUIRE(line);
  REQUIRE(bench.desk->store().update(outbox::retry(state_of("one"), noon + minutes{4}), *line));
  bench.turn(noon + minutes{4});
  REQUIRE(handed.size() == 2);
  CHECK(handed[1] == hand);
  const auto review = bench.letters();
  CHECK(std::count_if(review.begin(), review.end(),
                      [](const auto& item) { return item.letter.kind == "digest"; }) == 0);
}
