// One conversation with a scripted mail server, and what is checked of every one.
#pragma once

#include "letters_for_tests.hpp"
#include "support/catch.hpp"
#include "support/smtp_server.hpp"

namespace antherd::mail {

using testing::hang_up;
using testing::keep_silent;
using testing::SmtpScript;
using testing::SmtpServer;

inline const std::string password = "s3cret-of-the-farm";

inline Server settings_for(const SmtpServer& server) {
  Server settings;
  settings.url = server.url();
  settings.from = "alerts@larkspur.example";
  settings.plain = true;
  settings.response_timeout = Seconds(20);
  return settings;
}

inline bool go_on() { return true; }

inline Spoken speak(const Server& settings, const letters::Letter& letter = letter_for_tests()) {
  const std::atomic<bool> stop{false};
  return send(settings, letter, go_on, stop);
}

/// One conversation with a server that answers one command so.
inline Spoken when(const std::string& command, const std::string& reply) {
  const SmtpServer server({.answers = {{command, reply}}});
  return speak(settings_for(server));
}

inline void check(const Spoken& spoken, How how, int code, About about, const std::string& part) {
  INFO(spoken.sentence << "\n" << spoken.transcript);
  CHECK(spoken.how == how);
  CHECK(spoken.code == code);
  CHECK(spoken.about == about);
  CHECK(spoken.sentence.find(part) != std::string::npos);
  CHECK(spoken.sentence.find("127.0.0.1:") != std::string::npos);
  CHECK(spoken.sentence.find("owner@larkspur.example") != std::string::npos);
  CHECK(spoken.sentence.find('\n') == std::string::npos);
}

}  // namespace antherd::mail
