// Bytes of letters against the worked examples of the standards.
#include "edge/mail/encoding.hpp"

#include <sstream>

#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::mail;

namespace {

std::size_t longest_line(const std::string& text) {
  std::istringstream stream(text);
  std::size_t longest = 0;
  for (std::string line; std::getline(stream, line);) {
    longest = std::max(longest, line.size() - (line.ends_with('\r') ? 1 : 0));
  }
  return longest;
}

}  // namespace

TEST_CASE("base64 of RFC 4648 §10") {
  CHECK(base64("").empty());
  CHECK(base64("f") == "Zg==");
  CHECK(base64("fo") == "Zm8=");
  CHECK(base64("foo") == "Zm9v");
  CHECK(base64("foob") == "Zm9vYg==");
  CHECK(base64("fooba") == "Zm9vYmE=");
  CHECK(base64("foobar") == "Zm9vYmFy");
}

TEST_CASE("quoted-printable of RFC 2045 §6.7") {
  // "°" is U+00B0, UTF-8 C2 B0 (Unicode code chart, Latin-1 Supplement)
  CHECK(as_quoted_printable("96 °F = hot\n") == "96 =C2=B0F =3D hot\r\n");
  CHECK(as_quoted_printable("blank at the end \n") == "blank at the end=20\r\n");  // rule 3
  CHECK(as_quoted_printable("tab\t\nx") == "tab=09\r\nx\r\n");
  CHECK(as_quoted_printable("a\r\nb\rc\n") == "a\r\nb=0Dc\r\n");
  CHECK(as_quoted_printable("").empty());
  CHECK(as_quoted_printable("\n\n") == "\r\n\r\n");
}

TEST_CASE("quoted-printable lines are at most 76 long, soft breaks included") {
  const std::string line(76, 'x');
  CHECK(as_quoted_printable(line + "\n") == line + "\r\n");
  CHECK(as_quoted_printable(line + "x\n") == std::string(75, 'x') + "=\r\nxx\r\n");
  for (std::size_t shift = 0; shift < 4; ++shift) {
    std::string wide(shift, 'x');
    for (int n = 0; n < 200; ++n) wide += "°";
    const std::string encoded = as_quoted_printable(wide + "\n");
    CHECK(longest_line(encoded) <= 76);
    CHECK(longest_line(encoded) >= 74);
  }
}

TEST_CASE("plain ASCII goes as it is, anything else does not") {
  CHECK(as_seven_bit("one\n.two\n") == "one\r\n.two\r\n");
  CHECK(as_seven_bit("no end") == "no end\r\n");
  CHECK_FALSE(as_seven_bit("96 °F\n"));
  CHECK_FALSE(as_seven_bit(std::string(79, 'x') + "\n"));
  CHECK(as_seven_bit(std::string(78, 'x') + "\n"));
  CHECK_FALSE(as_seven_bit(std::string("nul\0nul\n", 8)));
  CHECK_FALSE(as_seven_bit("lone\rreturn\n"));
}

TEST_CASE("header lines") {
  CHECK(header_line("Subject", "HEAT Severe: north bench") ==
        "Subject: HEAT Severe: north bench\r\n");
  // RFC 2047 §4.2: "_" is the space, other special bytes are "=" and two digits
  CHECK(header_line("Subject", "96 °F, hot") == "Subject: =?UTF-8?Q?96_=C2=B0F=2C_hot?=\r\n");
  // what looks like an encoded word must not be read as one
  CHECK(header_line("Subject", "=?UTF-8?Q?x?=").starts_with("Subject: =?UTF-8?Q?=3D=3FUTF=2D8"));
  CHECK(header_line("Subject", std::string(30, 'x') + " " + std::string(60, 'y')) ==
        "Subject: " + std::string(30, 'x') + "\r\n " + std::string(60, 'y') + "\r\n");
}

TEST_CASE("encoded words are at most 75 long, in lines of at most 76, and hold whole characters") {
  for (std::size_t shift = 0; shift < 6; ++shift) {
    std::string value(shift, 'x');
    for (int n = 0; n < 70; ++n) value += "€";  // three bytes: E2 82 AC
    const std::string lines = header_line("Subject", value);
    CHECK(longest_line(lines) <= 76);
    std::istringstream stream(lines);
    int words = 0;
    for (std::string line; std::getline(stream, line); ++words) {
      if (words > 0) CHECK(line.starts_with(" =?UTF-8?Q?"));
      CHECK(line.ends_with("?=\r"));
      std::size_t escapes = 0;
      for (char byte : line) escapes += byte == '=' ? 1 : 0;
      CHECK((escapes - 2) % 3 == 0);  // the word's own two, then whole characters
    }
    CHECK(words > 7);
  }
}

TEST_CASE("dates of RFC 5322") {
  // RFC 5322 appendix A.1.1: Fri, 21 Nov 1997 09:55:06 -0600 is 15:55:06 UTC
  CHECK(date_text(Instant(Seconds(880127706))) == "Fri, 21 Nov 1997 15:55:06 +0000");
  CHECK(date_text(Instant(Seconds(0))) == "Thu, 01 Jan 1970 00:00:00 +0000");
  // date -u -d @1709210096
  CHECK(date_text(Instant(Seconds(1709210096))) == "Thu, 29 Feb 2024 12:34:56 +0000");
}

TEST_CASE("broken UTF-8 is replaced, sound UTF-8 is kept") {
  CHECK(repaired_utf8("°F € 🌱") == "°F € 🌱");
  const std::string mark = "\xEF\xBF\xBD";
  CHECK(repaired_utf8("a\xC2") == "a" + mark);
  CHECK(repaired_utf8("\xB0") == mark);
  CHECK(repaired_utf8("\xC0\xAF") == mark + mark);             // overlong
  CHECK(repaired_utf8("\xED\xA0\x80") == mark + mark + mark);  // a surrogate
  CHECK(repaired_utf8("\xF4\x90\x80\x80") == mark + mark + mark + mark);
  CHECK(repaired_utf8("\xE2\x82x") == mark + mark + "x");
}

TEST_CASE("text of a server becomes fit for people") {
  CHECK(tidy("550 5.1.1  no\tsuch\r\nuser\r\n", 100) == "550 5.1.1 no such user");
  CHECK(tidy("\x1B[31mred\x07", 100) == "[31mred");
  CHECK(tidy("\xC2\x9B"
             "31m",
             100) == "?31m");  // U+009B, a terminal's command
  CHECK(tidy("\xFF", 100) == "?");
  CHECK(tidy(std::string(1000, 'x'), 10) == std::string(10, 'x') + "…");
}
