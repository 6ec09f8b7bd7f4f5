// Each row of what a mail server can do, from the outbox through the carrier and one real
// conversation with a scripted server to what is stored: what the letter becomes, when it goes
// again, and what the grower's log is told.
#include <atomic>
#include <deque>

#include "ground.hpp"
#include "support/catch.hpp"
#include "support/smtp_server.hpp"

using namespace ground;
using antherd::testing::hang_up;
using antherd::testing::keep_silent;
using antherd::testing::SmtpScript;
using antherd::testing::SmtpServer;
using outbox::State;

namespace {

const Instant noon = farm_time("2026-07-12 12:05");

outbox::Item item_of(const std::string& id, const std::string& recipient,
                     alerts::Severity severity = alerts::Severity::severe) {
  outbox::Item item;
  item.letter.id = id;
  item.letter.recipient = recipient;
  item.letter.subject = "Heat Severe: north bench 97 °F by 4 pm";
  item.letter.body = "north bench: 97 °F by 4 pm.\nTonight: no water.\n";
  item.letter.kind = "heat";
  item.letter.severity = severity;
  item.letter.decided = noon;
  item.letter.valid_until = noon + hours{72};
  item.letter.still = "It held at noon.";
  item.next_try = noon;
  return item;
}

/// A desk's carrier whose letters go through libcurl to a server of the test's own.
struct Courier {
  SmtpServer server;
  Bench bench;
  std::unique_ptr<service::Carrier> carrier;
  std::deque<std::tuple<mail::Server, std::int64_t, letters::Letter>> handed;
  std::vector<std::string> said;

  explicit Courier(SmtpScript script = {}, const std::string& more = "plain = true\n")
      : server(std::move(script)), bench(farm_of(server, more)) {
    bench.open(noon - days{1});
    store::Decision decision;
    decision.letters = {item_of("one", "owner@larkspur.example"),
                        item_of("two", "foreman@larkspur.example", alerts::Severity::moderate)};
    REQUIRE(bench.desk->store().save(decision));
    restart(noon);
  }
  static Farm farm_of(const SmtpServer& server, const std::string& more) {
    Farm farm;
    farm.mail = "server = \"" + server.url() + "\"\n" + more;
    return farm;
  }
  void restart(Instant now) {
    handed.clear();
    carrier = std::make_unique<service::Carrier>(
        bench.settings, bench.desk->store(),
        [this](mail::Server to, std::int64_t item, letters::Letter letter) {
          handed.emplace_back(std::move(to), item, std::move(letter));
        });
    REQUIRE(carrier->load(now));
  }
  /// Everything that is due, one conversation after the other. @return how many there were
  int carry(Instant now) {
    const std::atomic<bool> stop{false};
    int conversations = 0;
    for (carrier->carry(now); !handed.empty(); carrier->carry(now)) {
      auto [to, item, letter] = handed.front();
      handed.pop_front();
      to.response_timeout = Seconds{1};
      ++conversations;
      const std::int64_t id = item;
      const auto spoken = mail::send(
          to, letter, [&] { return carrier->before_dot(id, now); }, stop);
      said.push_back(carrier->received(id, spoken, now));
    }
    return conversations;
  }
  outbox::Item stored(const std::string& id) const {
    for (const auto& item : bench.letters()) {
      if (item.letter.id == id) return item;
    }
    FAIL("no letter " << id);
    return {};
  }
};

SmtpScript when(const std::string& step, const std::string& answer) {
  SmtpScript script;
  script.answers[step] = answer;
  return script;
}

}  // namespace

TEST_CASE("row: 250 after the dot: sent, and nothing goes twice") {
  Courier courier;
  CHECK(courier.carry(noon) == 2);
  for (const char* id : {"one", "two"}) {
    CHECK(courier.stored(id).state == State::sent);
    CHECK(courier.stored(id).ended == noon);
    CHECK(courier.stored(id).doubts == 0);
  }
  CHECK(courier.server.letters().size() == 2);
  courier.restart(noon + minutes{1});
  CHECK(courier.carry(noon + hours{1}) == 0);
}

TEST_CASE("rows: 451 and 421 after the dot: the line waits and the gravest probes again") {
  const std::string answer = GENERATE("451 4.3.0 later", "421 4.3.2 closing");
  Courier courier(when("dot", answer));
  CHECK(courier.carry(noon) == 1);  // the other does not knock at a server that says "later"
  CHECK(courier.stored("one").state == State::waiting);
  CHECK(courier.stored("one").doubts == 0);
  CHECK(courier.carry(noon + Seconds{59}) == 0);
  CHECK(courier.carry(noon + Seconds{61}) == 1);
  courier.server.answer("dot", "250 2.0.0 ok");
  CHECK(courier.carry(noon + minutes{4}) == 2);
  CHECK(courier.stored("two").state == State::sent);
  // Nothing says "you may already have this": both answers were clear.
  for (const std::string& letter : courier.server.letters()) {
    CHECK(letter.find("already have") == std::string::npos);
  }
}

TEST_CASE("rows: 554 after the dot and 550 for a recipient park that letter, the others go") {
  SECTION("550 for one recipient") {
    Courier courier(when("RCPT owner@larkspur.example", "550 5.1.1 no such mailbox"));
    CHECK(courier.carry(noon) == 2);
    CHECK(courier.stored("one").state == State::parked);
    CHECK(courier.stored("one").answer.find("550 5.1.1 no such mailbox") != std::string::npos);
    CHECK(courier.stored("two").state == State::sent);
    CHECK(courier.carry(noon + hours{20}) == 0);
  }
  SECTION("554 after the dot") {
    Courier courier(when("dot", "554 5.6.0 not this"));
    CHECK(courier.carry(noon) == 2);
    CHECK(courier.stored("one").state == State::parked);
    CHECK(courier.stored("two").state == State::parked);  // this server says so of each
    CHECK(courier.carry(noon + hours{20}) == 0);
    CHECK(courier.server.letters().empty());
  }
}

TEST_CASE("row: 450 for a recipient: that one waits, the others go at once") {
  Courier courier(when("RCPT owner@larkspur.example", "450 4.2.0 mailbox busy"));
  CHECK(courier.carry(noon) == 2);
  CHECK(courier.stored("one").state == State::waiting);
  CHECK(courier.stored("one").next_try == noon + minutes{1});
  CHECK(courier.stored("two").state == State::sent);
  CHECK(courier.carrier->line().failures == 0);
}

TEST_CASE("row: a refused login keeps every letter, asks hourly and says so") {
  SmtpScript script = when("AUTH", "535 5.7.8 wrong");
  Courier courier(script);
  auto settings = *courier.bench.settings;
  settings.mail->server->user = "farm";
  settings.mail->server->password = "wrong-one";
  courier.bench.settings = std::make_shared<const settings::Settings>(settings);
  courier.restart(noon);
  CHECK(courier.carry(noon) == 1);
  CHECK(courier.said.back().find("refuses the login of farm") != std::string::npos);
  CHECK(courier.carrier->line().trouble.find("refuses the login") != std::string::npos);
  for (const char* id : {"one", "two"}) CHECK(courier.stored(id).state == State::waiting);
  CHECK(courier.carry(noon + minutes{59}) == 0);
  CHECK(courier.carry(noon + minutes{61}) == 1);
  courier.server.answer("AUTH", "235 2.7.0 welcome");
  CHECK(courier.carry(noon + minutes{122}) == 2);
  CHECK(courier.carrier->line().trouble.empty());
  CHECK(courier.server.letters().size() == 2);
}

TEST_CASE("row: no TLS on offer: settings trouble, and nothing goes in the clear") {
  Courier courier({}, "plain = false\n");
  CHECK(courier.carry(noon) == 1);
  CHECK(courier.carrier->line().trouble.find("offers no STARTTLS") != std::string::npos);
  CHECK(courier.stored("one").state == State::waiting);
  CHECK(courier.server.wire().find("north bench") == std::string::npos);
}

TEST_CASE(
    "rows: no answer after the dot: 10 min of rest, once more marked, then parked and named") {
  const std::string answer = GENERATE(as<std::string>{}, hang_up, keep_silent);
  Courier courier(when("dot", answer));
  CHECK(courier.carry(noon) == 1);
  CHECK(courier.stored("one").state == State::in_doubt);
  CHECK(courier.stored("one").doubts == 1);
  CHECK(courier.stored("one").next_try == noon + minutes{10});
  SECTION("the second time it is accepted") {
    courier.server.answer("dot", "250 2.0.0 ok");
    courier.restart(noon + minutes{5});  // and a restart in between changes nothing
    courier.carry(noon + minutes{5});
    CHECK(courier.stored("one").state == State::in_doubt);
    courier.carry(noon + minutes{11});
    CHECK(courier.stored("one").state == State::sent);
    REQUIRE(!courier.server.letters().empty());
    const std::string again = courier.server.letters().back();
    CHECK(again.find("Message-ID: <one@") != std::string::npos);
    CHECK(again.find("You may already have this letter") != std::string::npos);
  }
  SECTION("the second time the answer is lost too") {
    courier.carry(noon + minutes{11});
    CHECK(courier.stored("one").state == State::parked);
    CHECK(courier.stored("one").answer.find("may have arrived once, twice or not at all") !=
          std::string::npos);
    courier.carry(noon + hours{30});
    CHECK(courier.stored("one").state == State::parked);
  }
}

TEST_CASE("row: lost while the body goes: our own mark knows that it never went") {
  SmtpScript script;
  script.hang_up_in_body = true;
  Courier courier(script);
  store::Decision decision;
  decision.letters = {item_of("big", "owner@larkspur.example", alerts::Severity::extreme)};
  decision.letters[0].letter.body.clear();
  for (int n = 0; n < 60'000; ++n) {  // more than the line's buffers hold
    decision.letters[0].letter.body +=
        "a line of a very long letter, and one more of it, number …\n";
  }
  REQUIRE(courier.bench.desk->store().save(decision));
  REQUIRE(courier.carrier->refresh());
  CHECK(courier.carry(noon) == 1);
  CHECK(courier.stored("big").state == State::waiting);
  CHECK(courier.stored("big").doubts == 0);
}

TEST_CASE("row: refused connection: all wait, and arrive with their delay told") {
  int port = 0;
  {
    const SmtpServer gone;
    port = gone.port();
  }
  Courier courier;
  auto settings = *courier.bench.settings;
  const std::string url = settings.mail->server->url;
  settings.mail->server->url = "smtp://127.0.0.1:" + std::to_string(port);
  courier.bench.settings = std::make_shared<const settings::Settings>(settings);
  courier.restart(noon);
  CHECK(courier.carry(noon) == 1);
  CHECK(courier.said.back().find("cannot be reached") != std::string::npos);
  CHECK(courier.stored("one").state == State::waiting);
  settings.mail->server->url = url;
  courier.bench.settings = std::make_shared<const settings::Settings>(settings);
  courier.restart(noon + hours{51});
  CHECK(courier.carry(noon + hours{51}) == 2);
  REQUIRE(courier.server.letters().size() == 2);
  for (const std::string& letter : courier.server.letters()) {
    CHECK(letter.find("delayed_2_d_3_h") != std::string::npos);  // RFC 2047, Q
    CHECK(letter.find("Delayed 2 d 3 h. It held at noon.") != std::string::npos);
  }
  CHECK(courier.server.letters()[0].find("<one@") != std::string::npos);  // the graver first
}

TEST_CASE("the mark is stored before the dot: a store that fails holds the letter back") {
  Courier courier;
  courier.carrier->carry(noon);
  REQUIRE(courier.handed.size() == 1);
  const auto [to, item, letter] = courier.handed.front();
  const std::atomic<bool> stop{false};
  const auto spoken = mail::send(
      to, letter, [] { return false; }, stop);
  CHECK(spoken.how == mail::How::wait);
  CHECK(courier.server.letters().empty());
  courier.carrier->received(item, spoken, noon);
  CHECK(courier.stored("one").state == State::waiting);
}

TEST_CASE("a letter is handed to the line in the very turn that decides it") {
  SmtpServer server;
  Bench bench(Courier::farm_of(server, "plain = true\n"));
  const Instant sown = farm_time("2026-06-25 00:00");
  bench.open(sown);
  Instant now = sown;
  std::vector<std::pair<Instant, letters::Letter>> handed;
  bench.desk->on_send([&](mail::Server, std::int64_t item, letters::Letter letter) {
    handed.emplace_back(now, letter);
    REQUIRE(bench.desk->before_dot(item, now));
    bench.desk->mail_spoken(item, {mail::How::accepted, mail::About::letter, 250, "ok", ""}, now);
  });
  bench.drop("bench.csv", readings(Weather{}, sown, farm_time("2026-07-12 12:00")));
  std::string rows = header;
  for (now = farm_time("2026-07-12 12:00"); now < farm_time("2026-07-12 19:00");
       now += minutes{5}) {
    rows += rows_of(readings(Weather{}, now, now + Seconds{1}));
    bench.folder.write("drop/bench-2.csv", rows);
    bench.turn(now);
  }
  CHECK(!bench.letters_of("heat").empty());
  for (const auto& [at, letter] : handed) {
    if (letter.kind == "heat") CHECK(at - letter.decided <= Seconds{5});
  }
}
