// One JSON answer by pointers.
#include "edge/station/support.hpp"

using namespace antherd;
using namespace antherd::station;

namespace {

const Instant now = utc(2026, 7, 4, 12);

RecordForm json_form() {
  RecordForm form;
  form.time.at = {"/obs/time"};
  form.time.form = "unix";
  form.temperature = ValueForm{"/obs/t", "degC"};
  form.humidity = ValueForm{"/obs/rh", "%"};
  return form;
}

std::string answer(const std::string& values) {
  return R"({"obs":{"time":1783166400)" + (values.empty() ? "" : "," + values) + "}}";
}

Readings read(const std::string& text, const RecordForm& form = json_form(), Instant at = now) {
  const Result<Readings> readings = read_json(text, "http://bench/now.json", form, at);
  INFO((readings ? "" : readings.failure().sentence()));
  REQUIRE(readings);
  return *readings;
}

std::string failure(const std::string& text, const RecordForm& form = json_form(),
                    Instant at = now) {
  return failure_of(read_json(text, "http://bench/now.json", form, at));
}

}  // namespace

TEST_CASE("an answer's values are read by their pointers") {
  const Readings readings = read(answer(R"("t":21.5,"rh":"40")"));
  CHECK(readings.refused.empty());
  REQUIRE(readings.samples.size() == 1);
  CHECK(readings.samples[0].time == now);  // 1783166400 = 2026-07-04 12:00 UTC (GNU date)
  CHECK(readings.samples[0].temperature == Celsius{21.5});
  CHECK(readings.samples[0].humidity == Percent{40});
}

TEST_CASE("pointers follow RFC 6901") {
  RecordForm form = json_form();
  form.time.arrival = true;
  form.humidity.reset();
  // the document and pointers of RFC 6901 §5
  const std::string document =
      R"({"foo":["bar","baz"],"":0,"a/b":1,"c%d":2,"e^f":3,"g|h":4,"i\\j":5,)"
      R"("k\"l":6," ":7,"m~n":8})";
  const std::pair<const char*, double> expected[] = {{"/", 0},     {"/a~1b", 1}, {"/c%d", 2},
                                                     {"/e^f", 3},  {"/g|h", 4},  {"/i\\j", 5},
                                                     {"/k\"l", 6}, {"/ ", 7},    {"/m~0n", 8}};
  for (const auto& [pointer, value] : expected) {
    INFO(pointer);
    form.temperature->at = pointer;
    CHECK(read(document, form).samples.at(0).temperature == Celsius{value});
  }
  form.temperature->at = "/list/1/t";
  CHECK(read(R"({"list":[{"t":1},{"t":2}]})", form).samples.at(0).temperature == Celsius{2});
  for (const char* pointer : {"/list/01/t", "/list/2/t", "/list/x", "/list/0/t/u"}) {
    form.temperature->at = pointer;
    CHECK(says(failure(R"({"list":[{"t":1},{"t":2}]})", form), {"nothing at", pointer}));
  }
  for (const char* pointer : {"", "list", "/list/-", "/a~2b", "/a~"}) {
    form.temperature->at = pointer;
    CHECK(says(failure("{}", form), {"RFC 6901"}));
  }
}

TEST_CASE("null, missing words and absent members") {
  RecordForm form = json_form();
  form.missing = {"--", "-9999"};
  CHECK_FALSE(read(answer(R"("t":null,"rh":40)"), form).samples.at(0).temperature);
  CHECK_FALSE(read(answer(R"("t":"--","rh":40)"), form).samples.at(0).temperature);
  CHECK_FALSE(read(answer(R"("t":-9999,"rh":40)"), form).samples.at(0).temperature);
  const Readings absent = read(answer(R"("rh":40)"));
  CHECK(absent.samples.at(0).humidity == Percent{40});
  REQUIRE(absent.refused.size() == 1);
  CHECK(says(absent.refused[0].reason, {"temperature: nothing at /obs/t"}));
  CHECK(says(failure(answer(R"("t":null,"rh":null)")), {"every value is missing"}));
}

TEST_CASE("what is no number refuses the answer by name") {
  for (const auto& [values, reason] :
       {std::pair{R"("t":"abc","rh":40)", "temperature: 'abc' is not a number"},
        {R"("t":"nan","rh":40)", "temperature: 'nan' is not a finite number"},
        {R"("t":1e308,"rh":40)", "beyond any value"},
        {R"("t":[21],"rh":40)", "an array, not a number"},
        {R"("t":{"v":21},"rh":40)", "an object, not a number"},
        {R"("t":true,"rh":40)", "true or false, not a number"},
        {R"("t":"21,5","rh":40)", "'21,5' is not a number"}}) {
    RecordForm form = json_form();
    form.missing = {""};
    const Readings readings = read(answer(values), form);
    CHECK(readings.samples.empty());
    REQUIRE(readings.refused.size() == 1);
    CHECK(says(readings.refused[0].reason, {reason}));
  }
}

TEST_CASE("times of an answer") {
  RecordForm form = json_form();
  form.time.form = "iso";
  const auto with = [](const std::string& time) {
    return R"({"obs":{"time":)" + time + R"(,"t":1,"rh":2}})";
  };
  CHECK(read(with("\"2026-07-04T11:55:00Z\""), form).samples.at(0).time == utc(2026, 7, 4, 11, 55));
  CHECK(says(failure(with("\"yesterday\""), form), {"time:"}));
  CHECK(says(failure(with("\"2026-07-04T15:00:00Z\""), form), {"3 h ahead"}));
  CHECK(says(failure(with("null"), form), {"no text or number at /obs/time"}));
  CHECK(says(failure("{}", form), {"nothing at /obs/time"}));
  form.time.form = "unix_ms";
  CHECK(read(with("1783166400999"), form).samples.at(0).time == now);
  form.time.form = "unix";
  CHECK(read(with("1.7831664005e9"), form).samples.at(0).time == now);
  CHECK(says(failure(with("0"), form), {"2000 to 2099"}));
  form.time.arrival = true;
  CHECK(read(with("0"), form).samples.at(0).time == now);
  CHECK(says(failure(with("0"), form, utc(1970, 1, 1)), {"clock is not set"}));
}

TEST_CASE("of two meanings of a local time the one near the arrival counts") {
  RecordForm form = json_form();
  form.time.form = "iso";
  form.time.zone = new_york();
  const std::string text = R"({"obs":{"time":"2013-11-03T01:30:00","t":1,"rh":2}})";
  CHECK(read(text, form, utc(2013, 11, 3, 5, 31)).samples.at(0).time == utc(2013, 11, 3, 5, 30));
  CHECK(read(text, form, utc(2013, 11, 3, 6, 31)).samples.at(0).time == utc(2013, 11, 3, 6, 30));
}

TEST_CASE("what is no JSON fails with one clear sentence") {
  CHECK(says(failure(""), {"no JSON"}));
  CHECK(says(failure("<html>login</html>"), {"no JSON", "<html>login</html>"}));
  CHECK(says(failure(R"({"obs":)"), {"no JSON", "byte"}));
  CHECK(says(failure("{\"a\":\"\xB0\"}"), {"no JSON"}));
  CHECK(says(failure(std::string("\xFF\xFE{\0}\0", 6)), {"no JSON"}));
  CHECK(says(failure(answer(R"("t":1e999,"rh":1)")), {"beyond what can be measured"}));
  CHECK(says(failure(answer(R"("t":NaN,"rh":1)")), {"no JSON"}));
  CHECK(says(failure(std::string(100'000, '[')), {"nested deeper"}));
  CHECK(says(failure(std::string(2'000'000, ' ')), {"longer than 1 MiB"}));
  CHECK(failure("<html>\r\n").find('\n') == std::string::npos);
}
