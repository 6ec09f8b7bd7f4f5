// Finding fields, remarks, and the plan in words.
#include "farm.hpp"
#include "run/settings/plan.hpp"
#include "support/catch.hpp"

using namespace antherd;
using settings::Settings;

namespace {

std::string found(const Settings& all, const char* beginning) {
  const auto field = all.field_by_beginning(beginning);
  return field ? (*field)->field.name : field.failure().sentence();
}

std::vector<std::string> remarks_on(const std::string& text) {
  const settings::Reading reading = settings::read_text(text, "farm.toml", false);
  REQUIRE(reading.settings);
  return reading.remarks;
}

}  // namespace

TEST_CASE("a unique beginning finds a field, capitals or not") {
  std::string text = test::farm_text;
  text +=
      "[[field]]\nname = \"River flat east\"\nsown = 2026-04-28\n"
      "crop_type = \"early\"\nirrigation = \"none\"\n";
  const Settings all = test::settings_of(text);
  CHECK(found(all, "n") == "north bench");
  CHECK(found(all, "NORTH") == "north bench");
  CHECK(found(all, "river flat") == "river flat");  // whole, though another begins so too
  CHECK(found(all, "river flat e") == "River flat east");
  CHECK(found(all, "riv") ==
        "could not find the field (\"riv\"): several fields' names begin so; there are: \"river "
        "flat\", \"River flat east\"");
  CHECK(found(all, "south") ==
        "could not find the field (\"south\"): no field's name begins so; there are: \"north "
        "bench\", \"river flat\", \"River flat east\"");
  CHECK_FALSE(all.field_by_beginning(""));
  CHECK_FALSE(all.field_by_beginning("north bench and more"));
  CHECK(all.field("North Bench") == nullptr);
}

TEST_CASE("the only field is found by nothing at all") {
  std::string text = test::farm_text;
  text.resize(text.find("[[field]]\nname = \"river flat\""));
  CHECK(found(test::settings_of(text), "") == "north bench");
}

TEST_CASE("what is odd is remarked, what is usual is not") {
  CHECK(remarks_on(test::farm_text).empty());
  CHECK(remarks_on(test::farm_with("\"coastal\"", "\"highland\"")) ==
        std::vector<std::string>{
            "field \"north bench\": no flowering date can be promised for a highland type above "
            "40° latitude; long days may prevent seed whatever the weather"});
  CHECK(remarks_on(test::farm_with("latitude = 46.73", "latitude = 39.9")).empty());
  const auto east = remarks_on(test::farm_with("-117.18", "117.18"));
  REQUIRE(east.size() == 1);
  CHECK(east[0] ==
        "station \"bench\": its longitude does not fit the time zone America/Los_Angeles; west of "
        "Greenwich longitudes are negative");
  // 1° of latitude is 111.2 km on a sphere of 6371 km
  CHECK(remarks_on(test::farm_with("crop_type = \"coastal\"",
                                   "latitude = 47.73\ncrop_type = \"coastal\"")) ==
        std::vector<std::string>{"field \"north bench\": it lies 111 km from its station "
                                 "\"bench\"; check latitude and longitude of both"});
}

TEST_CASE("a field whose letters nobody gets is remarked") {
  const auto with = [](const std::string& more) {
    return remarks_on(
        test::farm_with("\"owner@larkspur.example\"", "\"owner@larkspur.example\"\n" + more));
  };
  CHECK(with("fields = [\"north bench\"]") ==
        std::vector<std::string>{"field \"river flat\": no recipient gets its letters; add it to "
                                 "the fields of a [[recipient]], or leave that list away"});
  CHECK(with("fields = [\"north bench\"]\n[[recipient]]\naddress = \"son@larkspur.example\"\n"
             "fields = [\"river flat\"]")
            .empty());
}

TEST_CASE("an unused station, an unused crop type and no mail are remarked") {
  std::string text = test::farm_text;
  const std::size_t mail = text.find("[mail]");
  text.erase(mail, text.find("[[station]]") - mail);
  text +=
      "[crop.ours]\nemerged = \"60 degC d\"\nbuds = \"400 degC d\"\n"
      "first_anthers = \"700 degC d\"\nfull_flower = \"810 degC d\"\n"
      "flowers_done = \"970 degC d\"\nripe = \"1300 degC d\"\n";
  text +=
      "[[station]]\nname = \"brook\"\nlatitude = 46.7\nlongitude = -117.2\n"
      "elevation = \"700 m\"\ninterval = \"1 min\"\n[station.drop]\nfolder = \"brook\"\n"
      "time = { column = \"t\", form = \"iso\" }\n"
      "temperature = { column = \"c\", unit = \"degC\" }\n"
      "dew_point = { column = \"d\", unit = \"degC\" }\n";
  for (const char* crop : {"\"coastal\"", "\"early\""}) {
    const std::size_t at = text.find(std::string("crop_type = ") + crop);
    text.insert(at, "station = \"bench\"\n");
  }
  CHECK(remarks_on(text) ==
        std::vector<std::string>{"there is no [mail] table: warnings go to the log only",
                                 "station \"brook\": no field uses it",
                                 "crop type \"ours\": no field uses it"});
}

TEST_CASE("the plan says who, what and where, and no secret") {
  Settings all =
      test::settings_of(test::farm_with("units = \"us\"", "units = \"us\"\nexercise = true"));
  all.mail->server->user = "alerts";
  all.mail->server->password = "correct horse";
  const std::string plan = describe(all);
  for (const char* words :
       {"farm Larkspur Bench (exercise): farm time America/Los_Angeles, letters in US units",
        "through smtps://mail.larkspur.example:465 (encrypted), login alerts",
        "told: owner@larkspur.example: all fields",
        "weekly review on Monday at 06:00; daily line in flower at 19:00",
        "station bench: 46.7300° N, 117.1800° W, 2559 ft, shield unknown",
        "a reading every 5 min; silent after 1 h",
        "time: time as %Y-%m-%d %H:%M, zone America/Los_Angeles; it says the moment of measuring",
        "temperature: temp_f (degF)", "not measured: rain (counted as none), wind (taken as 2 m/s)",
        "field north bench: ", "watched by bench",
        "sown 2026-04-20, crop type coastal (first anthers at 700 °C·d from sowing)",
        "irrigation: overhead; soil: not said; soil water at sowing: unknown",
        "leaf wetness: by humidity wherever no sensor tells",
        "heat counts from 90.0 °F, severe from 95.0 °F, extreme from 100.4 °F"}) {
    INFO(words);
    CHECK(plan.find(words) != std::string::npos);
  }
  CHECK(plan.find("correct horse") == std::string::npos);
}

TEST_CASE("durations in words") {
  using settings::duration_text;
  CHECK(duration_text(Seconds{300}) == "5 min");
  CHECK(duration_text(Seconds{5400}) == "1 h 30 min");
  CHECK(duration_text(Seconds{86400}) == "24 h");
  CHECK(duration_text(Seconds{34560000}) == "400 d");
  CHECK(duration_text(Seconds{0}) == "0 s");
  CHECK(settings::clock_text(330) == "05:30");
}
