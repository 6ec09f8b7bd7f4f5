// A whole CSV text: dialects, columns, refused rows.
#include "edge/station/support.hpp"

using namespace antherd;
using namespace antherd::station;

namespace {

void check_some_rows(const Readings& readings) {
  CHECK(readings.refused.empty());
  REQUIRE(readings.samples.size() == 3);
  CHECK(readings.samples[0].time == utc(2026, 6, 1, 10));
  CHECK(readings.samples[0].temperature == Celsius{21.5});
  CHECK(readings.samples[0].humidity == Percent{40});
  CHECK(readings.samples[2].time == utc(2026, 6, 1, 10, 10));
  CHECK(readings.samples[2].humidity == Percent{38.5});
  CHECK_FALSE(readings.samples[0].rain);
}

std::string replaced(std::string text, const std::string& what, const std::string& by) {
  for (std::size_t at = 0; (at = text.find(what, at)) != std::string::npos; at += by.size()) {
    text.replace(at, what.size(), by);
  }
  return text;
}

/// The one refusal of a row put between two good ones.
Refused refusal_of(const std::string& row, RecordForm form = plain_form()) {
  const Readings readings =
      read_all("time,temp,rh\n2026-06-01 10:00,1,2\n" + row + "\n2026-06-01 10:10,3,4\n", form);
  CHECK(readings.samples.size() == 2);
  INFO(row);
  REQUIRE(readings.refused.size() == 1);
  CHECK(readings.refused[0].file == "bench.csv");
  CHECK(readings.refused[0].line == 3);
  return readings.refused[0];
}

}  // namespace

TEST_CASE("every dialect of CSV gives the same samples") {
  const std::string text = some_rows;
  const RecordForm form = plain_form();
  check_some_rows(read_all(text, form));
  check_some_rows(read_all("\xEF\xBB\xBF" + text, form));
  check_some_rows(read_all(replaced(text, "\n", "\r\n"), form));
  check_some_rows(read_all(text.substr(0, text.size() - 1), form));
  check_some_rows(read_all(replaced(text, ",", "\t"), form));
  check_some_rows(read_all(replaced(replaced(text, ",", ";"), ".", ","), form));
  check_some_rows(read_all(replaced(text, ",", ";"), form));
  check_some_rows(read_all(replaced(text, ",", " , "), form));
  check_some_rows(read_all(replaced(text, "\n", "\n\n"), form));
  const std::string body = text.substr(0, text.size() - 1);
  const std::string quoted = replaced(replaced(body, ",", "\",\""), "\n", "\"\n\"");
  check_some_rows(read_all("\"" + quoted + "\"\n", form));
  check_some_rows(read_all(replaced(text, "time,temp,rh", " TIME , \"Temp\",RH"), form));
  check_some_rows(read_all(replaced(text, "\n", ",\n"), form));  // a comma too many
  check_some_rows(read_all(text + "time,temp,rh\n", form));      // the header again
}

TEST_CASE("an exact name goes before one that differs in case") {
  RecordForm form = plain_form();
  const Readings readings = read_all("time,Temp,temp,rh\n2026-06-01 10:00,1,2,3\n", form);
  REQUIRE(readings.samples.size() == 1);
  CHECK(readings.samples[0].temperature == Celsius{2});
}

TEST_CASE("units are converted on the way in") {
  RecordForm form = plain_form();
  form.temperature = ValueForm{"a", "degF"};
  form.humidity = ValueForm{"b", "1"};
  form.dew_point = ValueForm{"c", "K"};
  form.rain = ValueForm{"d", "in"};
  form.wind = ValueForm{"e", "mph"};
  form.solar = ValueForm{"f", "W/m2"};
  const Readings readings =
      read_all("time,a,b,c,d,e,f\n2026-06-01 10:00,95,0.45,283.15,0.5,10,812\n", form);
  REQUIRE(readings.samples.size() == 1);
  const weather::Sample& sample = readings.samples[0];
  CHECK(sample.temperature->value == 35.0);  // to the last bit: a threshold stands there
  CHECK(sample.humidity->value == Approx(45.0).epsilon(1e-12));
  CHECK(sample.dew_point->value == Approx(10.0).epsilon(1e-12));
  CHECK(sample.rain->value == Approx(12.7).epsilon(1e-12));
  CHECK(sample.wind->value == Approx(4.4704).epsilon(1e-12));  // NIST SP 811: 1 mph = 0.44704 m/s
  CHECK(sample.solar->value == 812.0);
}

TEST_CASE("wind in other trade units") {
  RecordForm form = plain_form();
  form.temperature.reset();
  form.humidity.reset();
  for (const auto& [unit, expected] : {std::pair{"km/h", 10.0}, {"kn", 18.52}, {"m/s", 36.0}}) {
    form.wind = ValueForm{"w", unit};
    const Readings readings = read_all("time,w\n2026-06-01 10:00,36\n", form);
    // 36 km/h = 10 m/s; 36 kn = 36 × 1852/3600 m/s (BIPM, the nautical mile)
    CHECK(readings.samples.at(0).wind->value == Approx(expected).epsilon(1e-12));
  }
}

TEST_CASE("leaf wetness becomes minutes wet") {
  RecordForm form = plain_form();
  form.temperature.reset();
  form.humidity.reset();
  form.wetness_interval = Seconds{900};
  const auto minutes = [&](const char* unit, const char* cell) {
    form.wetness = ValueForm{"leaf", unit};
    return read_all(std::string("time,leaf\n2026-06-01 10:00,") + cell + "\n", form)
        .samples.at(0)
        .wet_minutes;
  };
  CHECK(minutes("min", "6") == 6.0);
  CHECK(minutes("1", "0.4") == 6.0);
  CHECK(*minutes("h", "0.1") == Approx(6.0).epsilon(1e-12));
  form.wet_when = WetWhen{">=", 7};
  CHECK(minutes("", "7") == 15.0);
  CHECK(minutes("", "6.9") == 0.0);
  form.wet_when = WetWhen{"<", 300};
  CHECK(minutes("", "299") == 15.0);
  CHECK(minutes("", "300") == 0.0);
}

TEST_CASE("impossible wetness is named and the rest of its row used") {
  RecordForm form = plain_form();
  form.wetness = ValueForm{"leaf", "min"};
  const Readings readings = read_all("time,temp,rh,leaf\n2026-06-01 10:00,20,50,16\n", form);
  REQUIRE(readings.samples.size() == 1);
  CHECK(readings.samples[0].temperature == Celsius{20});
  CHECK_FALSE(readings.samples[0].wet_minutes);
  REQUIRE(readings.refused.size() == 1);
  CHECK(says(readings.refused[0].reason, {"wetness", "16"}));
}

TEST_CASE("missing is what the form lists, and an empty cell") {
  RecordForm form = plain_form();
  form.missing = {"NA", "-9999", "NaN"};
  const Readings readings = read_all(
      "time,temp,rh\n2026-06-01 10:00,NA,40\n2026-06-01 10:05,20,\n"
      "2026-06-01 10:10,-9999.0,\"NA\"\n2026-06-01 10:15,NaN,41\n",
      form);
  CHECK(readings.refused.empty());
  REQUIRE(readings.samples.size() == 3);  // a row with nothing but missing values gives none
  CHECK_FALSE(readings.samples[0].temperature);
  CHECK(readings.samples[0].humidity == Percent{40});
  CHECK_FALSE(readings.samples[1].humidity);
  CHECK(readings.samples[2].humidity == Percent{41});
  form.missing = {"-9999"};
  CHECK(refusal_of("2026-06-01 10:05,NA,40", form).reason == "temperature: 'NA' is not a number");
}

TEST_CASE("a bad row is refused with its reason, its neighbours are used") {
  CHECK(refusal_of("2026-06-01 10:05,abc,40").reason == "temperature: 'abc' is not a number");
  CHECK(refusal_of("2026-06-01 10:05,abc,40").text == "2026-06-01 10:05,abc,40");
  CHECK(refusal_of("2026-06-01 10:05,21,inf").reason == "humidity: 'inf' is not a finite number");
  CHECK(says(refusal_of("2026-06-01 10:05,1e308,40").reason, {"temperature: '1e308'"}));
  CHECK(says(refusal_of("2026-06-01 10:05,21").reason, {"2 cells"}));
  CHECK(refusal_of("2026-13-01 10:05,21,40").reason == "time: month 13 is not in 1 to 12");
  CHECK(says(refusal_of("2026-06-01 24:00,21,40").reason, {"hour 24"}));
  CHECK(says(refusal_of("1970-01-01 10:00,21,40").reason, {"year 1970"}));
  CHECK(says(refusal_of("2106-01-01 10:00,21,40").reason, {"year 2106"}));
  CHECK(says(refusal_of(std::string("2026-06-01 10:05,2\0001,40", 24)).reason, {"NUL"}));
  CHECK(says(refusal_of("2026-06-01 10:05,\"21\"x,40").reason, {"closing quote"}));
  CHECK(says(refusal_of("2026-06-01 10:05,\"21,40").reason, {"quote"}));
  CHECK(says(refusal_of("garbage").reason, {"1 cells"}));
  const Refused longest = refusal_of("2026-06-01 10:05,21,40" + std::string(70'000, '1'));
  CHECK(says(longest.reason, {"64 KiB"}));
  CHECK(longest.text.size() <= 200);
}

TEST_CASE("a row with more cells than the header is refused, empty ones at its end are none") {
  // A decimal comma: 21,5 °C and 40 % would be read as 21 °C and 5 %.
  CHECK(refusal_of("2026-06-01 10:05,21,5,40").reason == "it has 4 cells, the header has 3");
  CHECK(refusal_of("2026-06-01 10:05,21,40,,x").reason == "it has 5 cells, the header has 3");
  const Readings readings =
      read_all("time,temp,rh\n2026-06-01 10:00,20,50,\n2026-06-01 10:05,21,51,, \n", plain_form());
  CHECK(readings.refused.empty());
  REQUIRE(readings.samples.size() == 2);
  CHECK(readings.samples[1].humidity == Percent{51});
  // A longer header further down is a header, not a bad row.
  const Readings longer = read_all(
      "time,temp,rh\n2026-06-01 10:00,20,50\ntime,rain,temp,rh\n2026-06-01 10:05,0,21,51\n",
      plain_form());
  CHECK(longer.refused.empty());
  REQUIRE(longer.samples.size() == 2);
  CHECK(longer.samples[1].temperature == Celsius{21});
}

TEST_CASE("nan is missing only where the form lists it") {
  RecordForm form = plain_form();
  form.missing = {""};
  CHECK(refusal_of("2026-06-01 10:05,nan,40", form).reason ==
        "temperature: 'nan' is not a finite number");
}

TEST_CASE("a 10 MB line costs one row and little memory") {
  std::string text = "time,temp,rh\n2026-06-01 10:00,1,2\n";
  text += std::string(10'000'000, '7') + "\n2026-06-01 10:10,3,4\n";
  const Readings readings = read_all(text, plain_form());
  CHECK(readings.samples.size() == 2);
  REQUIRE(readings.refused.size() == 1);
  CHECK(readings.refused[0].line == 3);
}

TEST_CASE("rubbish without end is counted, not listed") {
  std::string text = "time,temp,rh\n";
  for (int i = 0; i < 5000; ++i) text += "x\n";
  const Readings readings = read_all(text, plain_form());
  REQUIRE(readings.refused.size() == 1001);
  CHECK(says(readings.refused.back().reason, {"4000 more rows"}));
}

TEST_CASE("quoted cells may hold separators, quotes and line breaks") {
  RecordForm form = plain_form();
  const Readings readings = read_all(
      "time,\"note, long\",temp,rh\n"
      "2026-06-01 10:00,\"wind, \"\"gusts\"\"\",1,2\n"
      "2026-06-01 10:05,\"two\nlines\",3,4\n"
      "2026-06-01 10:10,\"never closed,5,6\n"
      "2026-06-01 10:15,5\" of rain,7,8\n",
      form);
  REQUIRE(readings.samples.size() == 3);
  CHECK(readings.samples[1].temperature == Celsius{3});
  CHECK(readings.samples[2].temperature == Celsius{7});
  REQUIRE(readings.refused.size() == 1);
  CHECK(readings.refused[0].line == 5);  // the row with the line break has two lines
}

TEST_CASE("rows of another station are passed over") {
  RecordForm form = plain_form();
  form.where = {{"origin", "EWR"}};
  const Readings readings = read_all(
      "origin,time,temp,rh\nEWR,2026-06-01 10:00,1,2\nJFK,nonsense,3\nEWR,2026-06-01 11:00,5,6\n",
      form);
  CHECK(readings.refused.empty());
  REQUIRE(readings.samples.size() == 2);
  CHECK(readings.samples[1].temperature == Celsius{5});
}

TEST_CASE("the time may stand in several columns") {
  RecordForm form = plain_form();
  form.time.at = {"year", "month", "day", "hour"};
  form.time.form = "%Y %m %d %H";
  const Readings readings = read_all("year,month,day,hour,temp,rh\n2026,6,1,9,1,2\n", form);
  CHECK(readings.samples.at(0).time == utc(2026, 6, 1, 9));
}

TEST_CASE("a later header with other columns is followed, one that does not fit is named") {
  const Readings followed =
      read_all("time,temp,rh\n2026-06-01 10:00,1,2\nid,time,rh,temp\n7,2026-06-01 10:05,4,3\n",
               plain_form());
  CHECK(followed.refused.empty());
  REQUIRE(followed.samples.size() == 2);
  CHECK(followed.samples[1].temperature == Celsius{3});
  const Readings lost =
      read_all("time,temp,rh\n2026-06-01 10:00,1,2\ntime,rh,pressure\n2026-06-01 10:05,4,990\n",
               plain_form());
  CHECK(lost.samples.size() == 1);  // 990 is never taken for a humidity, nor 4 for a temperature
  REQUIRE(lost.refused.size() == 2);
  CHECK(says(lost.refused[0].reason, {"'temp'"}));
}

TEST_CASE("a file that does not fit the form says what is missing and what it has") {
  const auto failure = [](const std::string& text, const RecordForm& form = plain_form()) {
    return failure_of(read_csv(text, "bench.csv", form, std::nullopt));
  };
  CHECK(says(failure("when,temp_f,rh\n"),
             {"'time' (time)", "'temp' (temperature)", "when, temp_f, rh", "bench.csv"}));
  CHECK(says(failure("time,temp,temp,rh\n"), {"more than one column 'temp'"}));
  CHECK(says(failure(""), {"no header line"}));
  CHECK(says(failure(std::string("\xFF\xFEt\0i\0", 6)), {"UTF-16"}));
  CHECK(says(failure(std::string("\xFE\xFF\0t\0i", 6)), {"UTF-16"}));
  CHECK(says(failure(std::string("t\0i\0m\0e\0\n\0", 10)), {"NUL"}));
  CHECK(says(failure("time,temp,rh\r2026-06-01 10:00,1,2\r"), {"CR alone"}));
  CHECK(says(failure(std::string(70'000, 'x') + "\n"), {"64 KiB"}));
  RecordForm form = plain_form();
  form.solar = ValueForm{"s", "MJ/m2"};
  CHECK(says(failure("time,temp,rh,s\n", form), {"MJ/m2", "interval"}));
  form = plain_form();
  form.temperature->unit = "mm";
  CHECK(says(failure("time,temp,rh\n", form), {"'mm'", "degC, degF, K"}));
  form = plain_form();
  form.time.arrival = true;
  CHECK(says(failure("time,temp,rh\n", form), {"time column"}));
}

TEST_CASE("a file of any size is read as its text would be") {
  const Folder folder;
  std::string text = "time,temp,rh\n";
  for (int day = 1; day <= 28; ++day) {
    for (int minute = 0; minute < 1440; ++minute) {
      char row[120];
      std::snprintf(row, sizeof row, "2026-02-%02d %02d:%02d:00,%d.25,%d.125\n", day, minute / 60,
                    minute % 60, minute % 40, day);
      text += row;
    }
  }
  REQUIRE(text.size() > 1024 * 1024);  // more than one piece
  folder.write("bench.csv", text);
  RecordForm form = plain_form();
  form.time.form = "%F %T";
  const Result<Readings> readings = read_csv_file(folder / "bench.csv", form, std::nullopt);
  REQUIRE(readings);
  CHECK(readings->refused.empty());
  CHECK(readings->samples.size() == 28u * 1440u);
  CHECK(readings->samples == read_all(text, form).samples);
  CHECK(says(failure_of(read_csv_file(folder / "none.csv", plain_form(), std::nullopt)),
             {"No such file"}));
  CHECK_FALSE(read_csv_file(folder.path(), plain_form(), std::nullopt));
}
