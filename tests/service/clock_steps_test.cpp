// A computer's clock that is put forward or back while the service runs, and is put right some
// hours later, each time by somebody whom the service believes: nothing is lost, nothing told
// twice, and no wait is frozen. (A clock that is not set: working_time_test.cpp.)
#include <algorithm>
#include <deque>
#include <set>

#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant from = farm_time("2026-07-12 00:00");  // the first of three hot days
const Instant stepped = farm_time("2026-07-12 11:05");
const Instant righted = farm_time("2026-07-12 16:05");
const Instant until = farm_time("2026-07-16 20:05");

Farm by_server() {
  Farm farm;
  farm.mail = "server = \"smtp://localhost:2525\"\nplain = true\n";
  return farm;
}

/// A farm whose station and mail server live by the true time, and whose service by another.
struct Stepped {
  Bench bench{by_server()};
  std::deque<std::int64_t> handed;
  std::vector<Instant> tries;  // true times at which a letter was handed to the server
  bool server_up = true;

  Stepped() {
    bench.open(sown);
    bench.drop("bench.csv", readings(Weather{}, sown, from));
    bench.desk->on_send([this](const mail::Server&, std::int64_t item, const letters::Letter&) {
      handed.push_back(item);
    });
  }
  void look(Instant now, Instant shown) {
    const auto quarter = std::chrono::floor<minutes>(now);
    if (quarter.time_since_epoch() % minutes{15} == Seconds{0}) {
      bench.folder.append("drop/bench.csv", row_of(reading_at(Weather{}, quarter)));
    }
    bench.turn(shown);
    while (!handed.empty()) {
      const auto item = handed.front();
      handed.pop_front();
      tries.push_back(now);
      if (server_up) CHECK(bench.desk->before_dot(item, shown));
      const auto how = server_up ? mail::How::accepted : mail::How::wait;
      bench.desk->mail_spoken(item, {how, mail::About::server, 0, "as the test says", ""}, shown);
      bench.turn(shown);
    }
  }
  /// Turns each 5 minutes of true time; the clock is wrong by `wrong` from `stepped` to `righted`.
  void live(Instant begin, Instant end, Seconds wrong) {
    for (Instant now = begin; now <= end; now += minutes{5}) {
      const bool off = now >= stepped && now < righted;
      look(now, off ? now + wrong : now);
    }
  }
};

std::vector<std::string> dates_of_lines(const Bench& bench, Instant since) {
  std::vector<std::string> times;
  for (const auto& item : bench.letters_of("daily")) {
    if (item.letter.decided >= since) times.push_back(farm_clock(item.letter.decided));
  }
  return times;
}

}  // namespace

TEST_CASE("a clock that is put wrong and right again loses nothing and tells nothing twice") {
  keep_in_memory();
  const Seconds wrong = GENERATE(Seconds{0}, hours{3}, hours{30}, -hours{3}, -days{2});
  INFO("wrong by " << wrong.count() / 3600 << " h");
  Stepped farm;
  farm.live(from, until, wrong);

  Bench at_once;
  at_once.open(sown);
  at_once.drop("bench.csv", readings(Weather{}, sown, until + Seconds{1}));
  at_once.turn(until);
  const std::string lived = told(farm.bench.episodes());
  INFO("lived\n" << lived << "at once\n" << told(at_once.episodes()));
  CHECK(farm.bench.stored_hours() == at_once.stored_hours());
  const auto of_fields = [](std::vector<alerts::Episode> episodes) {
    std::erase_if(episodes, [](const auto& e) { return e.subject != "north bench"; });
    return episodes;
  };
  CHECK(of_fields(farm.bench.episodes()) == of_fields(at_once.episodes()));

  const auto said = farm.bench.desk->store().said(Instant{});
  REQUIRE(said);
  std::map<std::string, int> sayings;
  for (const auto& entry : *said) {
    if (entry.saying == alerts::Saying::reminder) continue;
    const std::string what = std::string(alerts::name_of(entry.kind)) + " " + entry.episode + " " +
                             std::to_string(static_cast<int>(entry.saying)) + " " +
                             std::to_string(static_cast<int>(entry.level));
    INFO(what);
    CHECK(++sayings[what] == 1);
  }
  // The heat of the 12th is told on the 12th, by whatever clock, and that it eased on the 16th.
  const auto heat = farm.bench.letters_of("heat");
  REQUIRE(heat.size() >= 2);
  for (const auto& item : heat) {
    UNSCOPED_INFO(farm_clock(item.letter.decided) << " " << item.letter.subject);
    CHECK(item.state == outbox::State::sent);
  }
  CHECK(farm_clock(heat.back().letter.decided) == "2026-07-16 06:00");
  // From the evening on each farm day has its line again, once.
  CHECK(dates_of_lines(farm.bench, righted) ==
        std::vector<std::string>{"2026-07-12 19:00", "2026-07-13 19:00", "2026-07-14 19:00",
                                 "2026-07-15 19:00", "2026-07-16 19:00"});
  std::set<std::string> ids;
  for (const auto& id : farm.bench.letter_ids()) CHECK(ids.insert(id).second);
}

TEST_CASE("a mail server that is away while the clock is stepped goes on being tried") {
  keep_in_memory();
  const Seconds wrong = GENERATE(Seconds{hours{3}}, hours{30}, -hours{3}, -days{2}, -minutes{40});
  INFO("wrong by " << wrong.count() / 60 << " min");
  Stepped farm;
  farm.live(from, stepped - hours{4}, wrong);
  farm.server_up = false;
  // Something to carry: a review that a person put into the outbox.
  store::Decision decision;
  outbox::Item item;
  item.letter.id = "by hand";
  item.letter.recipient = "owner@larkspur.example";
  item.letter.subject = "A letter";
  item.letter.body = "A body.\n";
  item.letter.kind = "heat";
  item.letter.decided = item.next_try = stepped - hours{4};
  item.letter.valid_until = item.letter.decided + hours{72};
  decision.letters.push_back(item);
  REQUIRE(farm.bench.desk->store().save(decision));
  const auto tried_before = farm.tries.size();
  farm.live(stepped - hours{4} + minutes{5}, righted + hours{3}, wrong);
  farm.tries.push_back(righted + hours{3});
  REQUIRE(farm.tries.size() > tried_before + 8);
  for (std::size_t i = tried_before + 1; i < farm.tries.size(); ++i) {
    INFO(farm_clock(farm.tries[i - 1]) << " to " << farm_clock(farm.tries[i]));
    // 30 min between tries, and at most the hour that no wait outlasts after a step.
    CHECK(farm.tries[i] - farm.tries[i - 1] <= minutes{90});
  }
  farm.server_up = true;
  farm.live(righted + hours{3} + minutes{5}, righted + hours{4}, wrong);
  for (const auto& letter : farm.bench.letters()) CHECK(letter.state == outbox::State::sent);
}
