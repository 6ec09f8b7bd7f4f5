// Quantities as people write them. Factors: 1 in = 25.4 mm, 1 ft = 0.3048 m (international yard
// and pound agreement, 1959); °C = (°F − 32) · 5/9.
#include "run/settings/quantities.hpp"

#include <clocale>
#include <optional>
#include <string>

#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::settings;

namespace {

template <class T>
std::optional<double> value(const Result<T>& result) {
  if (!result) return {};
  return (*result).value;
}
std::optional<long long> seconds(std::string_view text) {
  const auto result = parse_duration(text);
  if (!result) return {};
  return result->count();
}

}  // namespace

TEST_CASE("temperatures in four spellings; Fahrenheit to a tenth of a degree Celsius") {
  CHECK(value(parse_temperature("35 degC")) == 35.0);
  CHECK(value(parse_temperature("35.04 °C")) == 35.04);
  CHECK(value(parse_temperature("90 degF")) == 32.2);
  CHECK(value(parse_temperature("95 degF")) == 35.0);
  CHECK(value(parse_temperature("100.4 °F")) == 38.0);
  CHECK(value(parse_temperature("-40 degF")) == -40.0);
  CHECK(value(parse_temperature("300 K")).value() == Approx(26.85).margin(1e-9));
  CHECK(value(parse_temperature("  7degC ")) == 7.0);
}

TEST_CASE("temperatures that are none") {
  for (const char* text :
       {"", "35", "degC", "35 C", "35 degc", "35 deg C", "35,5 degC", "nan degC", "inf degC",
        "-300 degC", "-1 K", "35 degC x", "+-3 degC", "0x10 degC", "1e999 degC", "35 degC degC"}) {
    INFO(text);
    CHECK_FALSE(parse_temperature(text));
  }
}

TEST_CASE("differences have a sign and no zero point") {
  CHECK(value(parse_difference("+0.8 degC")) == 0.8);
  CHECK(value(parse_difference("-0.5 degC")) == -0.5);
  CHECK(value(parse_difference("-9 degF")) == -5.0);
  CHECK(value(parse_difference("2 K")) == 2.0);
  CHECK_FALSE(parse_difference("0.8"));
}

TEST_CASE("lengths, depths, humidities and thermal times") {
  CHECK(value(parse_length("780 m")) == 780.0);
  CHECK(value(parse_length("1000 ft")).value() == Approx(304.8).margin(1e-9));
  CHECK(value(parse_length("1.2 km")) == 1200.0);
  CHECK(value(parse_length("-86 m")) == -86.0);
  CHECK(value(parse_depth("6 mm")) == 6.0);
  CHECK(value(parse_depth("0.5 in")) == 12.7);
  CHECK(value(parse_depth("2 cm")) == 20.0);
  CHECK_FALSE(parse_depth("-1 mm"));
  CHECK_FALSE(parse_depth("6"));
  CHECK_FALSE(parse_length("780 mm"));
  CHECK(value(parse_humidity("90 %")) == 90.0);
  CHECK(value(parse_humidity("90%")) == 90.0);
  CHECK_FALSE(parse_humidity("101 %"));
  CHECK(value(parse_thermal_time("700 degC d")) == 700.0);
  CHECK(value(parse_thermal_time("1260 degF d")).value() == Approx(700).margin(1e-9));
  CHECK_FALSE(parse_thermal_time("700 d"));
}

TEST_CASE("durations, alone and put together from large to small") {
  CHECK(seconds("90 s") == 90);
  CHECK(seconds("5 min") == 300);
  CHECK(seconds("24 h") == 86400);
  CHECK(seconds("400 d") == 34560000);
  CHECK(seconds("1 h 30 min") == 5400);
  CHECK(seconds("1h30min") == 5400);
  CHECK(seconds("1.5 h") == 5400);
  CHECK(seconds("0 s") == 0);
  for (const char* text : {"", "5", "min", "-5 min", "5 minutes", "5 min 1 h", "1 h 1 h", "0.5 s",
                           "1e300 d", "999999999 d", "5 min,", "1 h -5 min", "5 m"}) {
    INFO(text);
    CHECK_FALSE(seconds(text));
  }
}

TEST_CASE("clock times, days and civil times") {
  CHECK(*parse_clock("22:00") == 1320);
  CHECK(*parse_clock("00:00") == 0);
  CHECK(*parse_clock("23:59") == 1439);
  for (const char* text : {"24:00", "7:00", "07:60", "0700", "07:00:00", "", "07:00 pm", "-1:00"}) {
    INFO(text);
    CHECK_FALSE(parse_clock(text));
  }
  using namespace std::chrono;
  CHECK(*parse_day("2028-02-29") == local_days(2028y / February / 29));
  for (const char* text : {"2026-02-29", "2026-13-01", "2026-7-14", "14.07.2026", "2026-07-14x",
                           "1969-12-31", "2107-01-01", ""}) {
    INFO(text);
    CHECK_FALSE(parse_day(text));
  }
  const CivilTime evening = local_days(2026y / July / 14) + hours{20};
  CHECK(*parse_civil_time("2026-07-14 20:00") == evening);
  CHECK(*parse_civil_time("2026-07-14T20:00") == evening);
  CHECK(*parse_civil_time("2026-07-14 20:00:30") == evening + Seconds{30});
  for (const char* text : {"2026-07-14", "2026-07-14 24:00", "2026-07-14 20:00Z", "20:00",
                           "2026-07-14 20:00:60", "2026-07-14  20:00", "2026-07-14 20:00 x"}) {
    INFO(text);
    CHECK_FALSE(parse_civil_time(text));
  }
}

TEST_CASE("plain numbers are whole, finite and written with a point") {
  CHECK(*parse_number("12.5") == 12.5);
  CHECK(*parse_number("-0.25") == -0.25);
  CHECK(*parse_number("+3") == 3.0);
  CHECK(*parse_number("1e3") == 1000.0);
  CHECK(*parse_number(".5") == 0.5);
  for (const char* text : {"", " 1", "1 ", "1,5", "nan", "inf", "-inf", "1e999", "0x10", "1.2.3",
                           "--1", "+-1", "1e", "-", "+"}) {
    INFO(text);
    CHECK_FALSE(parse_number(text));
  }
}

TEST_CASE("a failure says what is wrong and how to write it") {
  CHECK(parse_length("780").failure().sentence() ==
        "could not read the length (780): it has no unit; write it like \"780 m\" or \"2560 ft\"");
  CHECK(parse_depth("0,5 in").failure().why == "numbers are written with a decimal point");
  CHECK(parse_duration("5 minutes").failure().why ==
        "the unit \"minutes\" is not known, or comes after a smaller one");
}

TEST_CASE("a failure holds no control character of the text it refuses") {
  const std::string text("5 m\0in\x1B[2J", 10);
  CHECK(parse_duration(text).failure().sentence() ==
        "could not read the duration (5 m\\x00in\\x1B[2J): the unit \"m\\x00in\\x1B[\" is not "
        "known, or comes after a smaller one; write it like \"5 min\", \"24 h\" or \"1 h 30 min\"");
  CHECK(parse_length("5 \n").failure().why == "the unit \"\\x0A\" is not known");
}

TEST_CASE("the machine's locale changes nothing") {
  const std::string before = std::setlocale(LC_ALL, nullptr);
  for (const char* locale : {"de_DE.UTF-8", "C.UTF-8"}) {
    std::setlocale(LC_ALL, locale);  // where it is installed
    CHECK(*parse_number("12.5") == 12.5);
    CHECK_FALSE(parse_number("12,5"));
  }
  std::setlocale(LC_ALL, before.c_str());
}
