// Which addresses may stand in a header and an SMTP command.
#include "letters_for_tests.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::mail;

namespace {

std::string fault(const std::string& address) {
  const Outcome outcome = check_address(address);
  return outcome ? "" : outcome.failure().why;
}

}  // namespace

TEST_CASE("addresses that are good") {
  for (const char* address :
       {"owner@larkspur.example", "first.last+field@sub.larkspur.example", "a@b",
        "o'brien_2@xn--bcher-kva.example", "-dash@larkspur.example", "farm@localhost"}) {
    INFO(address);
    CHECK(fault(address).empty());
  }
  CHECK(fault(std::string(64, 'a') + "@larkspur.example").empty());
}

TEST_CASE("addresses that are not, and why") {
  CHECK(fault("") == "it is empty");
  CHECK(fault("owner") == "it has no @");
  CHECK(fault("a@b@c") == "it has more than one @");
  CHECK(fault("@larkspur.example") == "there is nothing before the @");
  CHECK(fault("owner@") == "there is nothing after the @");
  CHECK(fault("owner@lark\r\nRCPT TO:<x@y>") == "it holds a control character");
  CHECK(fault(std::string("owner\0@larkspur.example", 23)) == "it holds a control character");
  for (const char* more : {"Owner <owner@larkspur.example>", "a@b, c@d", "a b@c", "\"a b\"@c",
                           "<a@b>", "a@b;c@d", "a@b (home)"}) {
    INFO(more);
    CHECK(fault(more).starts_with("it is more than one bare mailbox"));
  }
  CHECK(fault("dueño@larkspur.example").starts_with("it is not ASCII"));
  CHECK(fault("a..b@larkspur.example").find("dot") != std::string::npos);
  CHECK(fault(".a@larkspur.example").find("dot") != std::string::npos);
  CHECK(fault("a@larkspur..example").find("dot") != std::string::npos);
  CHECK(fault("a@larkspur.example.").find("dot") != std::string::npos);
  CHECK(fault("a@-larkspur.example").find("hyphen") != std::string::npos);
  CHECK(fault("a@lark_spur.example").find("\"_\"") != std::string::npos);
  CHECK(fault("a@[127.0.0.1]").find("\"[\"") != std::string::npos);
  CHECK(fault(std::string(65, 'a') + "@b").find("64") != std::string::npos);
  CHECK(fault("a@" + std::string(64, 'b')).find("63") != std::string::npos);
  std::string far = "a@b";
  while (far.size() <= 254) far += ".example";
  CHECK(fault(far).find("254") != std::string::npos);
}

TEST_CASE("the failure names the address without its control characters") {
  const Outcome outcome = check_address("owner@lark\x1B[31mspur");
  REQUIRE_FALSE(outcome);
  CHECK(outcome.failure().sentence().find('\x1B') == std::string::npos);
  CHECK(outcome.failure().sentence().find("owner@lark") != std::string::npos);
}
