// Mail that does not go: seen in the log, on the screen and in the review, told when it recovers.
#include <algorithm>
#include <deque>

#include "ground.hpp"
#include "run/service/front_page.hpp"
#include "run/service/review.hpp"
#include "support/catch.hpp"

using namespace ground;
using outbox::State;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant noon = farm_time("2026-07-12 12:05");

/// A farm whose folder for letters is blocked by a file from noon on.
struct Blocked {
  Bench bench;
  Blocked() {
    bench.open(sown);
    bench.drop("bench.csv", readings(Weather{}, sown, noon));
    bench.turn(noon);
    std::filesystem::rename(bench.folder / "outgoing", bench.folder / "earlier");
    bench.folder.write("outgoing", "a file stands where the folder should be");
  }
  void open_again() const { std::filesystem::remove(bench.folder / "outgoing"); }
  std::string log() const { return bench.folder.read("antherd.log"); }
  bool in_trouble() const {
    return std::any_of(bench.episodes().begin(), bench.episodes().end(), [](const auto& e) {
      return e.kind == alerts::Kind::mail_trouble && e.open();
    });
  }
  letters::Review review(Instant now) const {
    return service::make_review(bench.desk->keeper().lookout(), bench.desk->store(),
                                service::Period{"a week", farm_day(now) - days{6}, farm_day(now)},
                                now);
  }
  page::PageContent page(Instant now) const {
    return service::page_content(bench.desk->keeper().lookout(), bench.desk->store(), now);
  }
  CivilDay farm_day(Instant now) const { return bench.settings->calendar.day_of(now); }
};

bool has(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

}  // namespace

TEST_CASE(
    "a letter that waits 6 h is mail trouble: log, review, and a letter when mail goes again") {
  Blocked farm;
  Bench& bench = farm.bench;
  bench.live(Weather{}, noon, farm_time("2026-07-12 18:00"), minutes{15});
  REQUIRE(!bench.letters_of("heat").empty());
  const Instant decided = bench.letters_of("heat").front().letter.decided;
  CHECK_FALSE(farm.in_trouble());
  bench.live(Weather{}, farm_time("2026-07-12 18:05"), decided + hours{6} + minutes{10},
             minutes{15});
  CHECK(farm.in_trouble());
  CHECK(has(farm.log(), "mail trouble: a letter has waited more than 6 h"));
  CHECK(bench.letters_of("mail_trouble").empty());  // it could not go either
  CHECK(farm.review(decided + hours{7}).mail_troubles.size() == 1);
  // The page says what the screen says; no visitor of it must take the watch for healthy.
  const auto page = farm.page(decided + hours{7});
  CHECK(has(page.now_text, "ATTENTION"));
  CHECK(has(page.now_text, "Mail trouble since 2026-07-12"));
  CHECK(has(page.now_text, "1 letter has waited more than 6 h: see antherd letters."));
  CHECK(has(page.json, "\"attention\":[\"Mail trouble since 2026-07-12"));
  // A restart forgets nothing of it and says nothing twice.
  bench.close(decided + hours{7});
  bench.open(decided + hours{7} + minutes{1});
  bench.turn(decided + hours{7} + minutes{2});
  CHECK(farm.in_trouble());

  farm.open_again();
  Instant now = decided + hours{7} + minutes{3};
  for (const Instant end = now + minutes{40}; now < end; now += minutes{1}) bench.turn(now);
  CHECK_FALSE(farm.in_trouble());
  CHECK_FALSE(has(farm.page(now).now_text, "Mail trouble"));
  CHECK(has(farm.log(), "mail trouble is over"));
  REQUIRE(bench.letters_of("mail_trouble").size() == 1);
  const auto told = bench.letters_of("mail_trouble").front();
  CHECK(told.state == State::sent);
  CHECK(has(told.letter.subject, "Mail works again"));
  for (int n = 0; n < 50; ++n) bench.turn(now += hours{1});
  CHECK(bench.letters_of("mail_trouble").size() == 1);
  const auto review = farm.review(now);
  REQUIRE(review.mail_troubles.size() == 1);
  CHECK(review.mail_troubles[0].closed);
  const std::string text =
      letters::compose_review(review, bench.desk->keeper().lookout().desk(now));
  CHECK(has(text, "mail: letters waited from Sun 12 Jul"));
}

TEST_CASE(
    "a letter that expired in this week is named in its review, though decided the week before") {
  Blocked farm;
  Bench& bench = farm.bench;
  bench.live(Weather{}, noon, farm_time("2026-07-12 18:00"), minutes{15});  // a Sunday
  REQUIRE(!bench.letters_of("heat").empty());
  const std::string subject = bench.letters_of("heat").front().letter.subject;
  Instant now = farm_time("2026-07-12 18:10");
  for (; now < farm_time("2026-07-20 05:50"); now += minutes{30}) bench.turn(now);
  CHECK(bench.letters_of("heat").front().state == State::parked);
  farm.open_again();
  for (now = farm_time("2026-07-20 05:55"); now < farm_time("2026-07-20 08:00"); now += minutes{5})
    bench.turn(now);
  const auto weekly = bench.letters_of("weekly");
  REQUIRE(!weekly.empty());
  const auto& last = weekly.back();
  CHECK(last.state == State::sent);
  CHECK(farm_clock(last.letter.decided) == "2026-07-20 06:00");
  std::string flat = last.letter.body;
  std::replace(flat.begin(), flat.end(), '\n', ' ');
  for (std::size_t at; (at = flat.find("  ")) != std::string::npos;) flat.erase(at, 1);
  INFO(last.letter.body);
  CHECK(has(flat, "parked: owner@larkspur.example: " + subject));
  CHECK(has(flat, "expired after 72 h"));
}

TEST_CASE(
    "after two days without a server all letters arrive within 31 minutes, the gravest first") {
  Farm by_server;
  by_server.mail = "server = \"smtp://localhost:2525\"\nplain = true\n";
  Bench bench(by_server);
  bench.open(sown);
  bool down = true;
  Instant now = noon;
  std::vector<std::pair<Instant, letters::Letter>> arrived;
  std::deque<std::pair<std::int64_t, letters::Letter>> handed;
  bench.desk->on_send([&](mail::Server, std::int64_t item, letters::Letter letter) {
    handed.emplace_back(item, std::move(letter));
  });
  bench.drop("bench.csv", readings(Weather{}, sown, noon));
  const Instant back = noon + days{2};
  std::string rows = header;
  for (; now < back + hours{1}; now += minutes{1}) {
    down = now < back;
    if ((now - noon) % minutes{15} == Seconds{0}) {
      rows += rows_of(readings(Weather{}, now - minutes{15}, now));
      bench.folder.write("drop/bench-2.csv", rows);
    }
    bench.turn(now);
    for (; !handed.empty(); bench.turn(now)) {
      const auto [item, letter] = handed.front();
      handed.pop_front();
      if (down) {
        bench.desk->mail_spoken(item, {mail::How::wait, mail::About::server, 0, "down", ""}, now);
        break;
      }
      REQUIRE(bench.desk->before_dot(item, now));
      bench.desk->mail_spoken(item, {mail::How::accepted, mail::About::letter, 250, "ok", ""}, now);
      arrived.emplace_back(now, letter);
    }
  }
  std::size_t waited = 0;
  for (const auto& item : bench.letters()) {
    if (item.letter.decided >= back || item.state == State::parked) continue;
    ++waited;
    INFO(item.letter.subject);
    CHECK(item.state == State::sent);
    CHECK(item.ended.value_or(now) <= back + minutes{31});
  }
  REQUIRE(waited >= 3);
  REQUIRE(arrived.size() >= waited);
  for (std::size_t i = 1; i < waited; ++i) {
    const auto& [at, before] = arrived[i - 1];
    const auto& after = arrived[i].second;
    CHECK(static_cast<int>(before.severity) >= static_cast<int>(after.severity));
    if (before.severity == after.severity) CHECK(before.decided <= after.decided);
  }
  const auto& first = arrived.front().second;
  CHECK(has(first.subject, "[delayed "));
  CHECK(first.body.starts_with("Delayed "));
}
