// Settings that are right, read whole: the two files of config/, and each key's value.
#include <algorithm>
#include <filesystem>
#include <fstream>
#include <sstream>

#include "farm.hpp"
#include "run/settings/plan.hpp"
#include "support/catch.hpp"
#include "support/paths.hpp"

using namespace antherd;
using settings::Settings;

namespace {

std::string text_of(const std::string& name) {
  std::ifstream file(paths::source() + "/config/" + name);
  std::ostringstream text;
  text << file.rdbuf();
  return text.str();
}

CivilDay day(int y, unsigned m, unsigned d) {
  return std::chrono::local_days(std::chrono::year{y} / std::chrono::month{m} /
                                 std::chrono::day{d});
}

}  // namespace

TEST_CASE("the complete example says what it means") {
  const Settings all = test::settings_of(text_of("antherd.toml"));
  CHECK(all.path == "/etc/antherd/farm.toml");
  CHECK(all.farm == "Larkspur Bench");
  CHECK(all.calendar.name() == "America/Los_Angeles");
  CHECK(all.units == letters::Units::us);
  CHECK_FALSE(all.exercise);
  CHECK(all.store_folder == "/var/lib/antherd");
  CHECK(all.keep_samples == Seconds{400LL * 86400});
  CHECK(all.log.file == "/etc/antherd/antherd.log");
  CHECK(all.diary_folder == "/etc/antherd/diary");
  REQUIRE(all.mail);
  REQUIRE(all.mail->server);
  CHECK(all.mail->server->url == "smtps://mail.larkspur.example:465");
  CHECK(all.mail->server->user == "alerts@larkspur.example");
  CHECK(all.mail->server->from == "alerts@larkspur.example");
  CHECK(all.mail->server->password.empty());  // the disk was not asked
  CHECK(all.mail->weekly.weekday == 1);
  CHECK(all.mail->weekly.minute == 360);
  CHECK(all.mail->daily_minute == 1140);
  CHECK(all.mail->at_most_per_day == 12);
  REQUIRE(all.recipients.size() == 2);
  CHECK(all.recipients[0].fields.empty());
  CHECK(all.recipients[1].brief);
  CHECK(all.recipients[1].quiet == std::pair(1320, 330));
  CHECK(all.policy.min_level == risk::Level::moderate);
  CHECK(all.policy.remind_after == Seconds{86400});
}

TEST_CASE("the complete example's stations") {
  const Settings all = test::settings_of(text_of("antherd.toml"));
  const settings::Station* const bench = all.station("bench");
  REQUIRE(bench);
  REQUIRE(bench->drop);
  CHECK_FALSE(bench->http);
  CHECK(bench->source() == "files bench-*.csv in /etc/antherd/drop");
  CHECK(bench->station.place.elevation == Metre(780));
  CHECK(bench->station.silent_after == Seconds{3600});
  CHECK(bench->station.shield == weather::Shield::plain);
  CHECK(bench->station.rain_meaning == weather::RainMeaning::since_last);
  CHECK(bench->station.rain_zone.name() == "America/Los_Angeles");
  CHECK(bench->station.wind_height == Metre(3));
  CHECK(bench->station.radiation_coefficient == 0.16);
  CHECK(bench->station.measures_wetness);
  const station::RecordForm& record = bench->drop->record;
  CHECK(record.time.at == std::vector<std::string>{"time"});
  CHECK(record.time.form == "%Y-%m-%d %H:%M");
  CHECK(record.temperature->at == "temp_f");
  CHECK(record.temperature->unit == "degF");
  CHECK(record.wetness_interval == Seconds{900});
  CHECK(record.missing == std::vector<std::string>{"", "NA", "-9999"});
  const settings::Station* const river = all.station("river");
  REQUIRE(river);
  REQUIRE(river->http);
  CHECK(river->source() == "http://192.168.1.20/now.json");
  CHECK(river->http->every == Seconds{300});
  CHECK(river->http->record.humidity->at == "/obs/rh");
  CHECK(river->station.place.elevation.value == Approx(749.808).margin(1e-6));  // 2460 · 0.3048
  CHECK_FALSE(river->station.measures_rain);
  CHECK(all.station("brook") == nullptr);
}

TEST_CASE("the complete example's fields") {
  const Settings all = test::settings_of(text_of("antherd.toml"));
  const settings::FieldPlan* const north = all.field("north bench");
  REQUIRE(north);
  CHECK(north->field.stations == std::vector<std::string>{"bench", "river"});
  CHECK(north->field.sown == day(2026, 4, 20));
  CHECK_FALSE(north->field.harvested);
  CHECK(north->field.irrigation == field::Method::overhead);
  CHECK(north->field.sets == 2);
  CHECK(north->field.soil == "silt loam");
  CHECK_FALSE(north->field.soil_water_at_sowing);
  REQUIRE(north->field.offset);
  CHECK(north->field.offset->day.value == 0.8);
  CHECK(north->field.offset->night.value == -0.5);
  CHECK(north->traits.name == "coastal");
  CHECK(north->rules.heat.sustained == Celsius(32.2));
  CHECK(north->rules.heat.severe == Celsius(35.0));
  CHECK(north->rules.heat.extreme == Celsius(38.0));
  const settings::FieldPlan* const river = all.field("river flat");
  REQUIRE(river);
  CHECK(river->field.latitude == Degree(46.71));  // the station's
  CHECK(river->field.elevation.value == Approx(749.808).margin(1e-6));
  CHECK(river->field.photoperiod);
  CHECK(river->traits.name == "ours");
  CHECK(river->traits.needs.first_anthers == ThermalTime(720));
  CHECK(river->traits.photoperiod.critical_hours == 13.0);
  const risk::HumidRules usual;
  CHECK(river->rules.humid.film_humidity == usual.film_humidity);
  CHECK(river->rules.humid.film == usual.film);
  CHECK(river->rules.humid.bucket_mm == usual.bucket_mm);
  CHECK(river->rules.humid.t_best == usual.t_best);
  CHECK(river->rules.humid.w_max == usual.w_max);
}

TEST_CASE("the rule for films has three words, and an older form of one") {
  const auto settings_with = [](const std::string& humid) {
    return test::settings_of(test::farm_with("irrigation = \"overhead\"",
                                             "irrigation = \"overhead\"\nhumid = " + humid));
  };
  const auto film_of = [&](const std::string& humid) {
    return settings_with(humid).fields.front().rules.humid.film;
  };
  CHECK(film_of("{ film = \"humidity\" }") == risk::Film::humidity);
  CHECK(film_of("{ film = \"dew_point\" }") == risk::Film::dew_point);
  CHECK(film_of("{ film = \"energy\" }") == risk::Film::energy);
  CHECK(film_of("{ bucket = \"0.2 mm\" }") == risk::Film::humidity);
  CHECK(film_of("{ dew_point_film = true }") == risk::Film::dew_point);
  CHECK(film_of("{ dew_point_film = false }") == risk::Film::humidity);
  CHECK(film_of("{ film = \"energy\", dew_point_film = false }") == risk::Film::energy);
  const auto plan = describe(settings_with("{ film = \"energy\" }"));
  CHECK(plan.find("leaf wetness: by a leaf's energy balance wherever no sensor tells") !=
        std::string::npos);
}

TEST_CASE("the energy balance without wind and sun is remarked on") {
  const auto remarked = [](const std::string& measures) {
    const std::string text =
        test::farm_with("humidity = { column = \"rh_pct\", unit = \"%\" }",
                        "humidity = { column = \"rh_pct\", unit = \"%\" }\n" + measures);
    const std::string field = "irrigation = \"overhead\"";
    std::string whole = text;
    whole.replace(whole.find(field), field.size(), field + "\nhumid = { film = \"energy\" }");
    const auto reading = settings::read_text(whole, "/etc/antherd/farm.toml", false);
    return std::any_of(reading.remarks.begin(), reading.remarks.end(), [](const auto& remark) {
      return remark.find("wants wind and solar") != std::string::npos;
    });
  };
  CHECK(remarked(""));
  CHECK(remarked("wind = { column = \"wind\", unit = \"m/s\" }"));
  CHECK_FALSE(
      remarked("wind = { column = \"wind\", unit = \"m/s\" }\n"
               "solar = { column = \"sun\", unit = \"W/m2\" }"));
}

TEST_CASE("the shortest example is whole, with the documented defaults") {
  const Settings all = test::settings_of(text_of("shortest.toml"));
  CHECK(all.units == letters::Units::metric);
  CHECK(all.store_folder == "/var/lib/antherd");
  CHECK(all.log.file.empty());
  CHECK(all.mail->folder == "/etc/antherd/outgoing");
  CHECK_FALSE(all.mail->server);
  CHECK(all.mail->weekly.weekday == 1);
  CHECK(all.mail->daily_minute == 1140);
  CHECK(all.diary_folder.empty());
  REQUIRE(all.fields.size() == 1);
  CHECK(all.fields[0].field.stations == std::vector<std::string>{"bench"});
  CHECK(all.fields[0].field.latitude == Degree(46.73));
  CHECK(all.stations[0].drop->files == "*");
  CHECK(all.stations[0].station.shield == weather::Shield::unknown);
}

TEST_CASE("silence waits for three intervals and for the next batch when nothing is said") {
  const auto silent = [](const std::string& rhythm) {
    return test::settings_of(test::farm_with("interval = \"5 min\"", rhythm))
        .stations[0]
        .station.silent_after.count();
  };
  CHECK(silent("interval = \"5 min\"") == 3600);
  CHECK(silent("interval = \"60 min\"") == 3 * 3600);
  CHECK(silent("interval = \"15 min\"\narrives_every = \"6 h\"") == 6 * 3600 + 45 * 60);
  CHECK(silent("interval = \"5 min\"\nsilent_after = \"15 min\"") == 900);
}

TEST_CASE("zones, stamps and other manners of a station") {
  const auto station = [](const std::string& passage, const std::string& other) {
    return test::settings_of(test::farm_with(passage, other)).stations[0];
  };
  const std::string form = "form = \"%Y-%m-%d %H:%M\"";
  const auto zone = [&](const std::string& name) {
    return station(form, form + ", zone = \"" + name + "\"").drop->record.time.zone;
  };
  CHECK(zone("utc").name() == "UTC");
  CHECK(zone("farm").name() == "America/Los_Angeles");
  CHECK(zone("-08:00").offset_at(Instant{}) == Seconds{-28800});
  CHECK(zone("+05:45").offset_at(Instant{}) == Seconds{20700});
  CHECK(zone("Asia/Kathmandu").name() == "Asia/Kathmandu");
  const auto coast = station("interval", "near_coast = true\nstamp = \"end\"\ninterval").station;
  CHECK(coast.near_coast());
  CHECK(coast.stamp == weather::Stamp::end);
  const auto counts = station(
      "folder", "wetness = { column = \"w\", wet_when = \"<7.5\", interval = \"10 min\" }\nfolder");
  REQUIRE(counts.drop->record.wet_when);
  CHECK(counts.drop->record.wet_when->comparison == "<");
  CHECK(counts.drop->record.wet_when->threshold == 7.5);
  CHECK(counts.drop->record.wetness_interval == Seconds{600});
}

TEST_CASE("a station without its own time and a plain server on this computer") {
  std::string text = test::farm_with("[station.drop]\nfolder = \"drop\"",
                                     "[station.http]\nurl = \"https://station.example/now?key=k\"");
  const auto put = [&](const std::string& passage, const std::string& other) {
    text.replace(text.find(passage), passage.size(), other);
  };
  put("time = { column = \"time\", form = \"%Y-%m-%d %H:%M\" }", "time = \"arrival\"");
  put("column = \"temp_f\"", "at = \"/t\"");
  put("column = \"rh_pct\"", "at = \"/a~1b/0\"");
  put("smtps://mail.larkspur.example:465\"", "smtp://localhost\"\nplain = true");
  const Settings all = test::settings_of(text);
  CHECK(all.stations[0].http->record.time.arrival);
  CHECK(all.stations[0].http->url == "https://station.example/now?key=k");
  CHECK(all.stations[0].source() == "https://station.example/now");  // no key for people
  CHECK(all.mail->server->plain);
  CHECK(all.mail->server->url == "smtp://localhost:25");
}

TEST_CASE("a server without a port gets the usual one") {
  const auto url = [](const std::string& server) {
    return test::settings_of(test::farm_with("smtps://mail.larkspur.example:465", server))
        .mail->server->url;
  };
  CHECK(url("smtps://mail.larkspur.example") == "smtps://mail.larkspur.example:465");
  CHECK(url("smtp://mail.larkspur.example") == "smtp://mail.larkspur.example:587");
  CHECK(url("smtp://[::1]:2525") == "smtp://[::1]:2525");
}
