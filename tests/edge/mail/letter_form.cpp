// The letter in the form of RFC 5322, and what another implementation reads out of it.
#include <unistd.h>

#include <cstdio>
#include <fstream>

#include "letters_for_tests.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::mail;

namespace {

std::string formed(const letters::Letter& letter) {
  Result<std::string> text = as_rfc5322(letter, "alerts@larkspur.example");
  return text ? *text : "failed: " + text.failure().sentence();
}

/// What Python's strict parser makes of a message: its subject, then its body.
constexpr const char* reader = R"(
import email, email.policy, sys
message = email.message_from_binary_file(
    open(sys.argv[1], 'rb'), policy=email.policy.default.clone(raise_on_defect=True))
for name in message.keys():
    assert not message[name].defects, (name, message[name].defects)
assert message.get_content_type() == 'text/plain' and message.get_content_charset() == 'utf-8'
assert message['date'].datetime.utcoffset().total_seconds() == 0
sys.stdout.buffer.write((message['subject'] + '\n' + message.get_content()).encode())
)";

std::string read_by_python(const std::string& message) {
  const TemporaryFolder folder;
  const std::string script = folder.path() + "/reader.py", path = folder.path() + "/letter.eml";
  std::ofstream(script) << reader;
  std::ofstream(path, std::ios::binary) << message;
  const std::string command = "/usr/bin/python3 " + script + " " + path + " 2>&1";
  FILE* pipe = ::popen(command.c_str(), "r");
  REQUIRE(pipe != nullptr);
  std::string text;
  char bytes[4096];
  for (std::size_t count = 0; (count = std::fread(bytes, 1, sizeof bytes, pipe)) > 0;) {
    text.append(bytes, count);
  }
  ::pclose(pipe);
  return text;
}

}  // namespace

TEST_CASE("a letter byte for byte") {
  CHECK(formed(letter_for_tests()) ==
        "Date: Tue, 14 Jul 2026 22:05:00 +0000\r\n"
        "From: <alerts@larkspur.example>\r\n"
        "To: <owner@larkspur.example>\r\n"
        "Subject: =?UTF-8?Q?HEAT_Severe=3A_north_bench_96_=C2=B0F_at_3_pm=2C_flower?=\r\n"
        " =?UTF-8?Q?_not_seen?=\r\n"
        "Message-ID: <heat-north-bench-2026-07-14.owner@larkspur.example>\r\n"
        "Auto-Submitted: auto-generated\r\n"
        "MIME-Version: 1.0\r\n"
        "Content-Type: text/plain; charset=utf-8\r\n"
        "Content-Transfer-Encoding: quoted-printable\r\n"
        "\r\n"
        "north bench, flower not seen: 96 =C2=B0F at 3 pm =C2=B1 1.\r\n"
        "No water tonight.\r\n");
  letters::Letter plain = letter_for_tests();
  plain.body = "All ASCII.\n";
  CHECK(formed(plain).ends_with("Content-Transfer-Encoding: 7bit\r\n\r\nAll ASCII.\r\n"));
}

TEST_CASE("nothing can be smuggled into a header") {
  const auto refuses = [](auto change, const char* why) {
    letters::Letter letter = letter_for_tests();
    change(letter);
    const std::string text = formed(letter);
    INFO(text);
    CHECK(text.starts_with("failed: "));
    CHECK(text.find(why) != std::string::npos);
    CHECK(text.find('\n') == std::string::npos);
  };
  refuses([](auto& l) { l.subject = "a\r\nBcc: x@y"; }, "subject holds a control character");
  refuses([](auto& l) { l.subject = "a\nb"; }, "subject holds a control character");
  refuses([](auto& l) { l.subject = std::string("a\0b", 3); }, "control character");
  refuses([](auto& l) { l.subject = "\x7F"; }, "control character");
  refuses([](auto& l) { l.recipient = "owner@x\r\nBcc: x@y"; }, "control character");
  refuses([](auto& l) { l.id = "a\r\nb"; }, "id cannot be");
  refuses([](auto& l) { l.id = "../a"; }, "id cannot be");
  refuses([](auto& l) { l.id = "a/b"; }, "id cannot be");
  refuses([](auto& l) { l.id = ""; }, "id cannot be");
  refuses([](auto& l) { l.decided = Instant(Seconds(300'000'000'000)); }, "outside the years");
  CHECK_FALSE(as_rfc5322(letter_for_tests(), "alerts@x\r\nBcc: y@z"));
}

TEST_CASE("a header line in the body stays in the body") {
  letters::Letter letter = letter_for_tests();
  letter.body = "\nBcc: x@y.example\n";
  CHECK(formed(letter).find("\r\n\r\n\r\nBcc: x@y.example\r\n") != std::string::npos);
}

TEST_CASE("Python's parser reads the same words without a defect") {
  if (::access("/usr/bin/python3", X_OK) != 0) {
    WARN("skipped: no /usr/bin/python3 to read the letters with");
    return;
  }
  for (const char* subject :
       {"HEAT Severe: north bench", "HUMEDAD Moderate: “banco norte”, 18 °C = ±1 ¿flor?",
        "=?UTF-8?Q?not_a_word?=",
        "seventy characters of a subject that is as long as one may be here 70",
        "€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€€"}) {
    for (const char* body : {"ASCII only.\n.a dot first\n..\n.\nFrom the start\n",
                             "96 °F — ½ in = 13 mm \n.\n\n\tend\n",
                             "a line of more than seventy-eight columns that goes on and on and "
                             "on, and then ends.\n"}) {
      letters::Letter letter = letter_for_tests();
      letter.subject = subject;
      letter.body = body;
      CHECK(read_by_python(formed(letter)) == std::string(subject) + "\n" + body);
    }
  }
}
