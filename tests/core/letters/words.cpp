// Figures, times, lists and lines.
#include "core/letters/words.hpp"

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"
#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::letters;

namespace {

std::string us(double celsius) {
  const Desk desk = scene::desk();
  return unglued(Words(desk).temperature(Celsius(celsius)));
}

std::string metric(double celsius) {
  Desk desk = scene::desk();
  desk.units = Units::metric;
  return unglued(Words(desk).temperature(Celsius(celsius)));
}

}  // namespace

TEST_CASE("a temperature never prints as a threshold that it did not reach") {
  // By hand: 35 °C = 95 °F, 34.8 °C = 94.64 °F, 34.98 °C = 94.964 °F, 32.2 °C = 89.96 °F.
  CHECK(us(35.0) == "95 °F");
  CHECK(us(34.8) == "94.6 °F");
  CHECK(us(34.98) == "94.9 °F");
  CHECK(us(34.4) == "94 °F");
  CHECK(us(32.2) == "90 °F");
  CHECK(us(32.19) == "89.9 °F");
  CHECK(us(38.0) == "100.4 °F");
  CHECK(us(37.9) == "100 °F");
  CHECK(us(-40) == "-40 °F");
  CHECK(metric(36.14) == "36.1 °C");
  CHECK(metric(34.96) == "34.9 °C");
  CHECK(metric(-0.01) == "0.0 °C");
}

TEST_CASE("thresholds print as people set them") {
  const Desk desk = scene::desk();
  const Words words(desk);
  CHECK(unglued(words.threshold(Celsius(32.2))) == "90 °F");
  CHECK(unglued(words.threshold(Celsius(35))) == "95 °F");
  CHECK(unglued(words.threshold(Celsius(38))) == "100.4 °F");
  CHECK(unglued(words.one_degree()) == "2 °F (1 °C)");
  CHECK(unglued(words.depth(Millimetre(12.7))) == "0.50 in");
}

TEST_CASE("times stand on the farm's clock") {
  const Desk desk = scene::desk();
  const Words words(desk);
  CHECK(unglued(words.clock(scene::at(14, 15))) == "3 pm");
  CHECK(unglued(words.clock(scene::at(14, 0, 5))) == "12:05 am");
  CHECK(unglued(words.clock(scene::at(14, 12, 30))) == "12:30 pm");
  CHECK(words.clock(scene::at(14, 12)) == "noon");
  CHECK(words.clock(scene::at(14, 0)) == "midnight");
  CHECK(unglued(words.when(scene::at(13, 9, 30))) == "Mon 13 Jul 9:30 am");
  CHECK(unglued(words.when(scene::at(14, 9))) == "9 am");
  CHECK(unglued(words.closing(scene::at(14, 0))) == "Mon 13 Jul midnight");
  CHECK(unglued(words.about(scene::july(21), 2.2)) == "Tue 21 Jul ± 3 d");
  CHECK(unglued(words.about(scene::july(21), 0)) == "Tue 21 Jul ± 1 d");
  CHECK(unglued(words.ahead(scene::at(14, 19))) == "tonight at 7 pm");
  CHECK(unglued(words.ahead(scene::at(15, 6))) == "tomorrow at 6 am");
  CHECK(unglued(words.ahead(scene::at(20, 6))) == "on Mon at 6 am");
  CHECK(words.iso(scene::july(4)) == "2026-07-04");
}

TEST_CASE("lists, counts and shares") {
  CHECK(list({}) == "");
  CHECK(list({"a"}) == "a");
  CHECK(list({"a", "b"}) == "a and b");
  CHECK(list({"a", "b", "c"}) == "a, b and c");
  CHECK(unglued(count(1, "hour")) == "1 hour");
  CHECK(unglued(count(0, "hour")) == "0 hours");
  CHECK(plain_count(1, "letter") == "1 letter");
  CHECK(plain_count(2, "letter") == "2 letters");
  CHECK(unglued(duration(Seconds{45 * 60})) == "45 min");
  CHECK(unglued(duration(Seconds{24 * 3600})) == "24 h");
  CHECK(unglued(duration(Seconds{51 * 3600})) == "2 d 3 h");
  CHECK(unglued(in_hundred(0.124)) == "about 12 in 100");
  CHECK(unglued(in_hundred(0.001)) == "fewer than 1 in 100");
  CHECK(in_hundred(0) == "none");
  CHECK(unglued(in_ten(0.64)) == "about 6 in 10");
  CHECK(unglued(in_ten(0.99)) == "more than 9 in 10");
}

TEST_CASE("lines break by code points and never inside a figure") {
  CHECK(columns("± 3 °F") == 6);
  CHECK(wrap("aa bb cc", 5) == std::vector<std::string>{"aa bb", "cc"});
  CHECK(wrap("it was 97 °F then", 9) == std::vector<std::string>{"it was", "97 °F", "then"});
  CHECK(wrap("over 3 h.", 6) == std::vector<std::string>{"over", "3 h."});
  CHECK(wrap("ééééé", 3) == std::vector<std::string>{"ééé", "éé"});
  CHECK(wrap("a b c", 4, 2, 3) == std::vector<std::string>{"  a", "   b", "   c"});
  CHECK(wrap("", 10).empty());
}

TEST_CASE("names are made harmless") {
  CHECK(plain("a\r\nBcc: x") == "a Bcc: x");
  CHECK(plain("\x1b[31mred\x7f") == "[31mred");
  CHECK(plain("caf\xc3\xa9 \xff") == "café ?");
  CHECK(plain("\xe2\x80\xaegnol") == "gnol");  // right-to-left override
  CHECK(plain("a\xc2\x85z") == "a z");         // next line, C1
  CHECK(plain("\xed\xa0\x80") == "???");       // a surrogate is not UTF-8
  CHECK(plain("  two   words ") == "two words");
  CHECK(clip("über alles", 5) == "über…");
  CHECK(clip("short", 5) == "short");
}

TEST_CASE("a field's name is quoted for the shell where it needs it") {
  CHECK(quoted("north") == "north");
  CHECK(quoted("north bench") == "\"north bench\"");
  CHECK(quoted("joe's $x") == "'joe'\\''s $x'");
  CHECK(quoted("-rf") == "\"-rf\"");
}

TEST_CASE("a mildew letter says where leaf wetness comes from, unless it is the usual rule") {
  const auto said = [](int sensor_hours, risk::Film film) {
    Desk desk = scene::desk();
    season::FieldStatus status = scene::north();
    status.humid.sensor_hours_24 = sensor_hours;
    status.humid.film = film;
    return unglued(data_paragraph(status, Words(desk), false));
  };
  const auto ends = [](const std::string& text, const char* with) {
    INFO(text);
    CHECK(text.ends_with(with));
  };
  CHECK(said(0, risk::Film::humidity).find("etness") == std::string::npos);
  ends(said(0, risk::Film::dew_point), " Leaf wetness is estimated from the dew point.");
  ends(said(0, risk::Film::energy), " Leaf wetness is estimated from a leaf's energy balance.");
  ends(said(24, risk::Film::energy), " Leaf wetness: by sensor in the last 24 h.");
  ends(said(20, risk::Film::humidity),
       " Leaf wetness: by sensor in 20 of the last 24 h, else estimated from humidity.");
}
