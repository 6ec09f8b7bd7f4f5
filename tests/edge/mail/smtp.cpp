// Each row of what a mail server can do, against a scripted one in the clear on loopback.
#include "conversations_for_tests.hpp"

using namespace antherd;
using namespace antherd::mail;

TEST_CASE("an accepted letter arrives byte for byte") {
  const SmtpServer server;
  letters::Letter letter = letter_for_tests();
  SECTION("UTF-8") {}
  SECTION("lines that begin with dots") { letter.body = ".one\n..two\n.\nend .\n.\n"; }
  SECTION("no end of line") { letter.body = "short"; }
  SECTION("a weekly log of 200 kB") {
    for (int n = 0; n < 5000; ++n) letter.body += ".a line of the week, 96 °F, number …\n";
  }
  const Spoken spoken = speak(settings_for(server), letter);
  check(spoken, How::accepted, 250, About::letter, "accepted the letter to");
  REQUIRE(server.letters().size() == 1);
  CHECK(server.letters().front() == *as_rfc5322(letter, "alerts@larkspur.example"));
  const std::string wire = server.wire();
  CHECK(wire.find("MAIL FROM:<alerts@larkspur.example>") != std::string::npos);
  CHECK(wire.find("RCPT TO:<owner@larkspur.example>\r\n") != std::string::npos);
  CHECK(wire.ends_with("QUIT\r\n"));
  CHECK(wire.find("AUTH") == std::string::npos);
}

TEST_CASE("rows of the table: what the server answers") {
  check(when("dot", "451 4.3.0 later"), How::wait, 451, About::letter, "(451 4.3.0 later)");
  check(when("dot", "421 4.3.2 closing"), How::wait, 421, About::server, "(421 4.3.2 closing)");
  check(when("dot", "554 5.6.0 spam"), How::refused, 554, About::letter, "(554 5.6.0 spam)");
  check(when("RCPT", "550 5.1.1 nobody"), How::refused, 550, About::recipient, "5.1.1 nobody");
  check(when("RCPT", "450 4.2.0 later"), How::wait, 450, About::recipient, "(450 4.2.0 later)");
  check(when("RCPT", "421 4.3.2 closing"), How::wait, 421, About::server, "4.3.2 closing");
  // Without a login a server may take letters to some: the others need not wait for this one.
  check(when("RCPT", "554 5.7.1 no relaying"), How::settings_trouble, 554, About::recipient,
        "does not relay to owner@larkspur.example without a login");
  check(when("RCPT", "530 5.7.0 log in"), How::settings_trouble, 530, About::recipient,
        "is kept and tried once an hour");
  check(when("MAIL", "451 4.3.0 later"), How::wait, 451, About::server, "takes no letters now");
  check(when("MAIL", "530 5.7.0 Must issue STARTTLS"), How::settings_trouble, 530, About::server,
        "wants a login or an encrypted line");
  check(when("MAIL", "550 5.7.1 not yours"), How::settings_trouble, 550, About::server,
        "refuses the sender alerts@larkspur.example");
  check(when("MAIL", "552 5.3.4 too big"), How::refused, 552, About::letter, "too large");
  check(when("DATA", "451 4.3.0 later"), How::wait, 451, About::letter, "puts the letter off");
  check(when("DATA", "554 5.5.1 no"), How::refused, 554, About::letter, "refuses the letter");
}

TEST_CASE("rows of the table: losses before the last dot wait") {
  check(when("MAIL", hang_up), How::wait, 250, About::server, "broke before it had");
  check(when("RCPT", hang_up), How::wait, 250, About::server, "broke before it had");
  check(when("DATA", hang_up), How::wait, 250, About::server, "broke before it had");
  SECTION("in the middle of the body") {
    const SmtpServer server({.hang_up_in_body = true});
    letters::Letter letter = letter_for_tests();
    letter.body.assign(4'000'000, 'x');  // more than the line's buffers hold
    check(speak(settings_for(server), letter), How::wait, 354, About::server,
          "broke before it had the whole letter");
    CHECK(server.letters().empty());
  }
  SECTION("at the greeting") {
    const SmtpServer server({.greeting = "554 5.3.2 no mail here"});
    check(speak(settings_for(server)), How::settings_trouble, 554, About::server, "turns antherd");
    const SmtpServer busy({.greeting = "421 4.3.2 too many"});
    check(speak(settings_for(busy)), How::wait, 421, About::server, "no time for mail now");
    const SmtpServer rude({.greeting = hang_up});
    check(speak(settings_for(rude)), How::wait, 0, About::server, "broke before it had");
  }
  SECTION("nobody listens") {
    Server settings;
    {
      const SmtpServer gone;
      settings = settings_for(gone);
    }
    check(speak(settings), How::wait, 0, About::server, "cannot be reached");
  }
}

TEST_CASE("rows of the table: no answer after the last dot is a doubt") {
  check(when("dot", hang_up), How::in_doubt, 354, About::server, "hung up without an answer");
  check(when("dot", "354 what?"), How::in_doubt, 354, About::server,
        "not known whether it arrived");
  SECTION("silence, within the time allowed") {
    const SmtpServer server({.answers = {{"dot", keep_silent}}});
    Server settings = settings_for(server);
    settings.response_timeout = Seconds(1);
    check(speak(settings), How::in_doubt, 354, About::server, "gave no answer in time");
  }
  SECTION("silence before it waits") {
    const SmtpServer server({.answers = {{"RCPT", keep_silent}}});
    Server settings = settings_for(server);
    settings.response_timeout = Seconds(1);
    check(speak(settings), How::wait, 250, About::server, "did not answer in time");
  }
}

TEST_CASE("an accepted letter is accepted even when the farewell goes wrong") {
  check(when("QUIT", hang_up), How::accepted, 250, About::letter, "accepted the letter");
  check(when("QUIT", "421 4.3.2 no"), How::accepted, 250, About::letter, "accepted the letter");
}

TEST_CASE("the hook is asked once, with the whole body on the wire and no last dot") {
  SmtpServer server;
  const Server settings = settings_for(server);
  const std::atomic<bool> stop{false};
  int asked = 0;
  SECTION("yes: the dot follows") {
    const Spoken spoken = send(
        settings, letter_for_tests(),
        [&] {
          ++asked;
          CHECK(server.wait_for_end("No water tonight.\r\n"));
          CHECK(server.wire().find("\r\n.\r\n") == std::string::npos);
          return true;
        },
        stop);
    CHECK(spoken.how == How::accepted);
    CHECK(server.wire().find("No water tonight.\r\n.\r\n") != std::string::npos);
  }
  SECTION("no: nothing is accepted") {
    const Spoken spoken = send(
        settings, letter_for_tests(),
        [&] {
          ++asked;
          return false;
        },
        stop);
    check(spoken, How::wait, 354, About::server, "held back");
    CHECK(server.wire().find("\r\n.\r\n") == std::string::npos);
    CHECK(server.letters().empty());
  }
  SECTION("a hook that throws is a no") {
    const Spoken spoken = send(
        settings, letter_for_tests(),
        [&]() -> bool {
          ++asked;
          throw std::runtime_error("disk");
        },
        stop);
    CHECK(spoken.how == How::wait);
    CHECK(server.letters().empty());
  }
  CHECK(asked == 1);
}

TEST_CASE("the hook is not asked for a recipient who is refused") {
  const SmtpServer server({.answers = {{"RCPT", "550 5.1.1 nobody"}}});
  const std::atomic<bool> stop{false};
  int asked = 0;
  send(
      settings_for(server), letter_for_tests(), [&] { return ++asked > 0; }, stop);
  CHECK(asked == 0);
}

TEST_CASE("told to stop, it stops") {
  SmtpServer server;
  const Server settings = settings_for(server);
  std::atomic<bool> stop{false};
  const auto stop_when = [&](const std::string& wire_end) {
    return std::thread([&stop, &server, wire_end] {
      server.wait_for_end(wire_end);
      stop = true;
    });
  };
  const auto begin = std::chrono::steady_clock::now();
  SECTION("while a server is silent before the dot") {
    server.answer("RCPT", keep_silent);
    std::thread other = stop_when("RCPT TO:<owner@larkspur.example>\r\n");
    check(send(settings, letter_for_tests(), go_on, stop), How::wait, 250, About::server,
          "antherd stopped before");
    other.join();
  }
  SECTION("while a server is silent after the dot") {
    server.answer("dot", keep_silent);
    std::thread other = stop_when("\r\n.\r\n");
    check(send(settings, letter_for_tests(), go_on, stop), How::in_doubt, 354, About::server,
          "had not answered when antherd stopped");
    other.join();
  }
  SECTION("before it begins") {
    stop = true;
    CHECK(send(settings, letter_for_tests(), go_on, stop).how == How::wait);
    CHECK(server.letters().empty());
  }
  // 0.2 s promised; the bound leaves room for a busy machine, and is far below the silence of 20 s
  CHECK(std::chrono::steady_clock::now() - begin < std::chrono::seconds(1));
}

TEST_CASE("a server that is silent at the farewell does not hold the letter's answer for long") {
  SmtpServer server({.answers = {{"QUIT", keep_silent}}});
  const auto begin = std::chrono::steady_clock::now();
  SECTION("after acceptance") { CHECK(speak(settings_for(server)).how == How::accepted); }
  SECTION("after a refusal") {
    server.answer("RCPT", "550 5.1.1 nobody");
    CHECK(speak(settings_for(server)).code == 550);
  }
  CHECK(std::chrono::steady_clock::now() - begin < std::chrono::seconds(4));
}
