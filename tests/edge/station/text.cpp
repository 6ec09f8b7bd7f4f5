// Numbers, visible text and the content hash.
#include "edge/station/text.hpp"

#include "edge/station/support.hpp"

using namespace antherd::station;

namespace {
NumberFault fault_of(const char* text, bool comma = false) {
  double number = 0;
  return read_number(text, comma, number);
}
double number_of(const char* text, bool comma = false) {
  double number = -1e300;
  CHECK(read_number(text, comma, number) == NumberFault::none);
  return number;
}
}  // namespace

TEST_CASE("a number is the whole text or nothing") {
  CHECK(number_of("21.5") == 21.5);
  CHECK(number_of("-0.25") == -0.25);
  CHECK(number_of("+3") == 3.0);
  CHECK(number_of("1e3") == 1000.0);
  CHECK(number_of("12,5", true) == 12.5);
  CHECK(number_of("12.5", true) == 12.5);
  for (const char* text :
       {"", "abc", "1.2.3", "12,5", "0x1A", "+-3", "++3", "1 2", "21.5C", "--1", "1e", "-", "+"}) {
    INFO(text);
    CHECK(fault_of(text) == NumberFault::not_a_number);
  }
  CHECK(fault_of("1.234,5", true) == NumberFault::not_a_number);
  CHECK(fault_of("1,2,3", true) == NumberFault::not_a_number);
}

TEST_CASE("what is not finite or beyond measuring is told apart") {
  for (const char* text : {"nan", "NaN", "inf", "-inf", "INFINITY"}) {
    INFO(text);
    CHECK(fault_of(text) == NumberFault::not_finite);
  }
  for (const char* text : {"1e308", "-1e308", "1e309", "1e99999", "1000000001"}) {
    INFO(text);
    CHECK(fault_of(text) == NumberFault::too_large);
  }
  CHECK(say(NumberFault::not_a_number, "abc") == "'abc' is not a number");
  CHECK(say(NumberFault::not_finite, "nan") == "'nan' is not a finite number");
}

TEST_CASE("foreign bytes are made visible") {
  CHECK(visible("plain, text") == "plain, text");
  CHECK(visible("a\r\nb\tc") == "a\\x0d\\x0ab\\x09c");
  CHECK(visible(std::string("a\0b", 3)) == "a\\x00b");
  CHECK(visible("21\xC2\xB0") == "21\xC2\xB0");         // a degree sign in UTF-8 stays
  CHECK(visible("21\xB0") == "21\\xb0");                // in Latin-1 it is shown as its byte
  CHECK(visible("\xC2\x85") == "\\xc2\\x85");           // a control character of ISO 6429
  CHECK(visible("\xC0\xAF") == "\\xc0\\xaf");           // overlong (RFC 3629 §3)
  CHECK(visible("\xED\xA0\x80") == "\\xed\\xa0\\x80");  // a surrogate
  CHECK(visible("\xE2\x82\xAC", 2) == "");              // never cut inside a character
  CHECK(visible(std::string(500, 'x')).size() == 200);
}

TEST_CASE("the hash is FNV-1a of 64 bits") {
  // draft-eastlake-fnv, test vectors (from memory)
  CHECK(hash_hex("") == "cbf29ce484222325");
  CHECK(hash_hex("a") == "af63dc4c8601ec8c");
  CHECK(hash_hex("foobar") == "85944171f73967e8");
}
