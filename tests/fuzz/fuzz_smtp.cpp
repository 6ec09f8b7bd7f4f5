// Fuzzes a mail server's replies, one line of the bytes for each command of ours. Whatever it says,
// a letter counts as accepted only after a 2xx reply to the last dot, as in doubt only after the
// last dot, and the password is in no sentence and no transcript.
#include <atomic>
#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>

#include "core/failures/result.hpp"
#include "edge/mail/mail.hpp"
#include "fuzz/loopback.hpp"

using namespace antherd;

namespace {

std::string replies;          // of the run under way
std::string after_dot;        // what was answered to the last dot
std::atomic<bool> dot_heard;  // the last dot arrived

/// The next reply: up to a newline that is not followed by a line of the same reply.
std::string next_reply(std::size_t& at) {
  std::string reply;
  while (at < replies.size()) {
    const std::size_t end = std::min(replies.find('\n', at), replies.size());
    const std::string line = replies.substr(at, end - at);
    at = std::min(end + 1, replies.size());
    reply += line + "\r\n";
    if (line.size() < 4 || line[3] != '-') break;
  }
  return reply;
}

void talk(int line) {
  std::size_t at = 0;
  std::string heard;
  bool in_body = false;
  fuzzing::write_all(line, next_reply(at));
  char bytes[4096];
  for (;;) {
    const ssize_t got = ::recv(line, bytes, sizeof bytes, 0);
    if (got <= 0) return;
    heard.append(bytes, static_cast<std::size_t>(got));
    for (;;) {
      const std::size_t end = heard.find(in_body ? "\r\n.\r\n" : "\r\n");
      if (end == std::string::npos) break;
      const bool data = !in_body && heard.compare(0, 4, "DATA") == 0;
      heard.erase(0, end + (in_body ? 5 : 2));
      if (at >= replies.size()) return;  // nothing more to say: hang up
      const std::string reply = next_reply(at);
      if (in_body) {
        after_dot = reply;
        dot_heard = true;
      }
      in_body = data && reply[0] == '3';
      fuzzing::write_all(line, reply);
    }
  }
}

}  // namespace

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  static fuzzing::Loopback line(talk);
  replies.assign(reinterpret_cast<const char*>(data), size);
  after_dot.clear();
  dot_heard = false;
  mail::Server server;
  server.url = "smtp://127.0.0.1:" + line.port();
  server.user = "farm";
  server.password = "canary-7f3a";
  server.from = "alerts@larkspur.example";
  server.plain = true;
  server.response_timeout = Seconds{1};
  letters::Letter letter;
  letter.id = "heat-opened-severe-1";
  letter.recipient = "owner@larkspur.example";
  letter.subject = "Heat Severe: north bench";
  letter.body = "north bench: in flower.\n.\nend\n";
  letter.decided = Instant{Seconds{1783166400}};
  const std::atomic<bool> stop{false};
  bool at_dot = false;
  const mail::Spoken spoken = mail::send(
      server, letter,
      [&] {
        at_dot = true;
        return true;
      },
      stop);
  if (spoken.how == mail::How::accepted) {
    ANTHERD_CHECK(dot_heard);
    ANTHERD_CHECK(after_dot.find('2') != std::string::npos);
  }
  if (spoken.how == mail::How::in_doubt) ANTHERD_CHECK(at_dot);
  for (const std::string* text : {&spoken.sentence, &spoken.transcript}) {
    ANTHERD_CHECK(text->find("canary-7f3a") == std::string::npos);
    ANTHERD_CHECK(text->find("Y2FuYXJ5LTdmM2E") == std::string::npos);  // base64 of it
  }
  return 0;
}
