// Sends one letter through a mail server and prints how it went and what the outbox makes of it.
// For the scripts beside it. Everything comes by the environment, the password by a file, so that
// no process list shows it:
//   MAIL_URL MAIL_USER MAIL_PASSWORD_FILE MAIL_CA_FILE MAIL_FROM MAIL_TO MAIL_ID
//   MAIL_RECORDER=1  instead of MAIL_URL: a server of its own without STARTTLS that writes down
//                    every byte it gets; they are printed as "wire:" lines
#include <cstdlib>
#include <ctime>
#include <fstream>
#include <iostream>
#include <memory>
#include <sstream>

#include "core/outbox/outbox.hpp"
#include "edge/mail/mail.hpp"
#include "support/smtp_server.hpp"

using namespace antherd;

namespace {

std::string given(const char* name, const char* otherwise = "") {
  const char* value = std::getenv(name);
  return value == nullptr ? otherwise : value;
}

std::string first_line_of(const std::string& path) {
  std::ifstream file(path);
  std::string line;
  std::getline(file, line);
  return line;
}

outbox::Ending ending_of(mail::How how) {
  switch (how) {
    case mail::How::accepted:
      return outbox::Ending::accepted;
    case mail::How::wait:
      return outbox::Ending::wait;
    case mail::How::refused:
      return outbox::Ending::parked;
    case mail::How::in_doubt:
      return outbox::Ending::in_doubt;
    case mail::How::settings_trouble:
      return outbox::Ending::settings_trouble;
  }
  return outbox::Ending::wait;
}

outbox::Concern concern_of(mail::About about) {
  switch (about) {
    case mail::About::server:
      return outbox::Concern::server;
    case mail::About::recipient:
      return outbox::Concern::recipient;
    case mail::About::letter:
      return outbox::Concern::letter;
  }
  return outbox::Concern::server;
}

outbox::Item item_of(Instant now) {
  outbox::Item item;
  item.id = 1;
  item.letter.id = given("MAIL_ID", "heat-north-bench");
  item.letter.recipient = given("MAIL_TO");
  item.letter.subject = "HEAT Severe: north bench 96 °F at 3 pm, flower not seen";
  item.letter.body =
      "north bench, flower not seen: 96 °F at 3 pm ± 1.\n"
      ".a line that begins with a dot\nNo water tonight.\n";
  item.letter.severity = alerts::Severity::severe;
  item.letter.decided = now;
  return item;
}

}  // namespace

int main() {
  const Instant now{Seconds(std::time(nullptr))};
  std::unique_ptr<testing::SmtpServer> recorder;
  if (!given("MAIL_RECORDER").empty()) recorder = std::make_unique<testing::SmtpServer>();

  mail::Server server;
  server.url = recorder ? recorder->url() : given("MAIL_URL");
  server.user = given("MAIL_USER");
  server.password = first_line_of(given("MAIL_PASSWORD_FILE"));
  server.ca_file = given("MAIL_CA_FILE");
  server.from = given("MAIL_FROM", "alerts@larkspur.example");
  server.response_timeout = Seconds(60);

  outbox::Item item = outbox::take(item_of(now), now);
  const std::atomic<bool> stop{false};
  const mail::Spoken spoken = mail::send(
      server, outbox::as_sent(item, now),
      [&] {
        item = outbox::doubt(item, now);
        return true;
      },
      stop);
  item = outbox::receive(item, {item.id, ending_of(spoken.how), concern_of(spoken.about),
                                spoken.code, spoken.sentence, now});
  std::cout << "state: " << outbox::name_of(item.state) << "\ncode: " << spoken.code
            << "\nwaits: " << (item.next_try - now).count() << " s\nsentence: " << spoken.sentence
            << "\n";
  std::istringstream talk(spoken.transcript);
  for (std::string line; std::getline(talk, line);) std::cout << "talk: " << line << "\n";
  if (recorder) {
    std::istringstream wire(recorder->wire());
    for (std::string line; std::getline(wire, line);) std::cout << "wire: " << line << "\n";
  }
}
