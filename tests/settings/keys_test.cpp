// Addresses, time forms, and the list of known keys.
#include "run/settings/keys.hpp"

#include <algorithm>
#include <fstream>
#include <sstream>

#include "run/settings/document.hpp"
#include "run/settings/time_form.hpp"
#include "run/settings/url.hpp"
#include "support/catch.hpp"
#include "support/paths.hpp"

using namespace antherd;
using namespace antherd::settings;

TEST_CASE("addresses are taken apart") {
  const auto url = parse_url("HTTPS://station.example:8443/a/b?key=k");
  REQUIRE(url);
  CHECK(url->scheme == "https");
  CHECK(url->host == "station.example");
  CHECK(url->port == 8443);
  CHECK(url->path == "/a/b?key=k");
  CHECK(parse_url("smtp://[::1]:25")->host == "[::1]");
  CHECK(parse_url("http://192.168.1.20")->port == 0);
  for (const char* text :
       {"", "host", "://host", "http://", "http://a b/", "http://a\r\n/", "http://me:pw@host/",
        "http://host:0/", "http://host:65536/", "http://host:8x/", "http://[::1/", "http://[::1]x/",
        "http://h/#a", "http://h\u00F6f/", "http://a:b:c/", "http://h%41/"}) {
    INFO(text);
    CHECK_FALSE(parse_url(text));
  }
}

TEST_CASE("loopback hosts") {
  for (const char* host : {"localhost", "127.0.0.1", "127.1.2.3", "[::1]"}) {
    CHECK(is_loopback(host));
  }
  for (const char* host : {"127.evil.example", "localhost.example", "128.0.0.1",
                           "127.0.0.1.example", "", "0.0.0.0", "[::2]"}) {
    INFO(host);
    CHECK_FALSE(is_loopback(host));
  }
}

TEST_CASE("time forms need a date, an hour and known letters") {
  for (const char* form : {"%Y-%m-%d %H:%M", "%F %T", "%d.%m.%y %H:%M:%S", "%Y %j %H",
                           "%b %e %Y %I:%M %p", "%Y-%m-%dT%H:%M:%S%z", "iso", "unix", "unix_ms"}) {
    INFO(form);
    CHECK_FALSE(fault_of_time_form(form));
  }
  for (const char* form : {"", "%H:%M", "%Y-%m-%d", "%Y-%m %H", "%Y-%m-%d %I:%M", "%Y-%m-%d %Q",
                           "%Y-%m-%d %H %", "%s", "%F %H %I %p", "time"}) {
    INFO(form);
    CHECK(fault_of_time_form(form));
  }
}

TEST_CASE("zones by name and by offset") {
  const Calendar farm = Calendar::fixed(Seconds{3600}, "farm");
  CHECK(zone_of("farm", farm)->name() == "farm");
  CHECK(zone_of("UTC", farm)->name() == "UTC");
  CHECK(zone_of("-03:30", farm)->offset_at(Instant{}) == Seconds{-12600});
  CHECK(zone_of("+14:00", farm)->offset_at(Instant{}) == Seconds{50400});
  for (const char* name : {"+14:01", "+8", "-08", "08:00", "+08:00x", "", "local", "PDT"}) {
    INFO(name);
    CHECK_FALSE(zone_of(name, farm));
  }
}

TEST_CASE("the complete example shows every key of the plain tables, used or commented out") {
  std::ifstream file(paths::source() + "/config/antherd.toml");
  std::ostringstream stream;
  stream << file.rdbuf();
  const std::string text = stream.str();
  for (const KnownTable& table : known_tables()) {
    if (table.name == "the file") continue;
    for (const std::string& key : table.keys) {
      if (table.name == "[alerts]" && key == "folder") continue;  // not in this version
      if (table.name == "[[station]]" && (key == "drop" || key == "http")) continue;  // headers
      INFO(table.name << " " << key);
      CHECK(text.find(key + " = ") != std::string::npos);
    }
  }
}

TEST_CASE("texts are made visible and cut between characters") {
  CHECK(in_quotes("a\tb\x7F") == "\"a\\x09b\\x7F\"");
  CHECK(in_quotes("\u202Ex") == "\"\\u202Ex\"");
  CHECK(in_quotes("\u00E9t\u00E9") == "\"\u00E9t\u00E9\"");
  CHECK(visible("\u00E9\u00E9\u00E9", 2) == "\u00E9\u00E9…");
  CHECK(visible("ab", 2) == "ab");
}
