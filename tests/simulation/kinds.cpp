// See kinds.hpp.
#include "kinds.hpp"

#include <algorithm>
#include <array>
#include <cmath>

#include "support/weather_generator.hpp"

namespace simulation {

const std::vector<Kind>& kinds() {
  static const std::vector<Kind> all = [] {
    std::vector<Kind> made;
    Kind kind;
    kind.name = "dry valley";
    kind.climate = {14, 29, 2, 0.08, 9, 0.05, 0.02, 0};
    kind.interval = 30;
    made.push_back(kind);

    kind = {};
    kind.name = "fog coast";
    kind.latitude = 44.6;
    kind.longitude = -123.9;
    kind.climate = {11, 18, 1, 0.01, 8, 0.6, 0.15, 0};
    kind.days = 60;
    kind.sets_in_ten = 6;
    kind.fields = 2;
    made.push_back(kind);

    kind = {};
    kind.name = "furnace";
    kind.climate = {19, 34, 2, 0.2, 7, 0.0, 0.0, 0};
    kind.fields = 3;
    kind.recipients = 3;
    kind.at_most_per_day = 5;
    made.push_back(kind);

    kind = {};
    kind.name = "wet plateau";
    kind.zone = "America/Denver";
    kind.latitude = 38.5;
    kind.longitude = -106.2;
    kind.climate = {10, 24, 2, 0.05, 8, 0.5, 0.5, 0};
    kind.letters_to_folder = true;
    kind.recipients = 2;
    made.push_back(kind);

    kind = {};
    kind.name = "spring clock change";
    kind.zone = "Europe/Madrid";
    kind.latitude = 37.2;
    kind.longitude = -5.4;
    kind.sown = "2026-03-05";
    kind.climate = {12, 26, 2, 0.1, 9, 0.2, 0.1, 0};
    kind.local_stamps = true;
    made.push_back(kind);

    kind = {};
    kind.name = "autumn clock change";
    kind.latitude = 33.1;
    kind.longitude = -115.5;
    kind.sown = "2026-09-20";
    kind.climate = {16, 31, 2, 0.1, 7, 0.1, 0.05, 0};
    kind.local_stamps = true;
    kind.recipients = 2;
    made.push_back(kind);

    kind = {};
    kind.name = "over new year in the south";
    kind.zone = "America/Santiago";
    kind.latitude = -34.2;
    kind.longitude = -71.0;
    kind.sown = "2026-11-20";
    kind.climate = {13, 29, 2, 0.1, 7, 0.15, 0.05, 0};
    kind.irrigation = "furrow";
    made.push_back(kind);

    kind = {};
    kind.name = "two stations";
    kind.climate = {14, 28, 2, 0.1, 9, 0.2, 0.05, 0};
    kind.second_station = true;
    kind.fields = 3;
    kind.recipients = 2;
    made.push_back(kind);

    kind = {};
    kind.name = "on the threshold";
    kind.climate = {15, 32.2, 0.4, 0.15, 2.8, 0.3, 0.05, 32.2};
    kind.irrigation = "drip";
    made.push_back(kind);

    kind = {};
    kind.name = "leap year, half-hour clock change";
    kind.zone = "Australia/Lord_Howe";
    kind.latitude = -31.5;
    kind.longitude = 159.1;
    kind.sown = "2028-02-15";
    kind.climate = {16, 27, 1.5, 0.1, 8, 0.4, 0.2, 0};
    kind.interval = 30;
    kind.days = 55;
    made.push_back(kind);
    return made;
  }();
  return all;
}

std::string station_name(int number) { return number == 0 ? "bench" : "river"; }
std::string field_name(int number) {
  return std::array{"north bench", "creek field", "upper terrace"}.at(
      static_cast<std::size_t>(number));
}
std::string address_of(int recipient) {
  return std::array{"owner", "manager", "5095550100"}.at(static_cast<std::size_t>(recipient)) +
         std::string("@larkspur.example");
}

namespace {

std::string recipients_of(const Kind& kind, int variant) {
  std::string text;
  for (int r = 0; r < kind.recipients; ++r) {
    text += "[[recipient]]\naddress = \"" + address_of(r) + "\"\n";
    if (r == 1) text += variant == 2 ? "quiet = \"21:30-06:15\"\n" : "quiet = \"22:00-05:30\"\n";
    if (r == 1 && kind.fields > 1) text += "fields = [\"" + field_name(0) + "\"]\n";
    if (r == 2) text += "brief = true\n";
  }
  return text;
}

std::string stations_of(const Kind& kind) {
  const std::string place = "latitude = " + std::to_string(kind.latitude) +
                            "\nlongitude = " + std::to_string(kind.longitude) +
                            "\nelevation = \"300 m\"\ninterval = \"" +
                            std::to_string(kind.interval) + " min\"\n";
  std::string text = "[[station]]\nname = \"bench\"\n" + place + R"([station.drop]
folder = "drop"
files = "bench*.csv"
temperature = { column = "temp_c", unit = "degC" }
humidity = { column = "rh_pct", unit = "%" }
rain = { column = "rain_mm", unit = "mm", meaning = "since_last" }
time = { column = "time", form = "%Y-%m-%d %H:%M", zone = ")" +
                     (kind.local_stamps ? "farm" : "utc") + "\" }\n";
  if (!kind.second_station) return text;
  return text + "[[station]]\nname = \"river\"\n" + place + "[station.http]\nevery = \"" +
         std::to_string(kind.interval) + R"( min"
url = "http://127.0.0.1:8080/now.json"
form = "json"
time = { at = "/time", form = "unix" }
temperature = { at = "/t", unit = "degC" }
humidity = { at = "/rh", unit = "%" }
)";
}

std::string fields_of(const Kind& kind) {
  std::string text;
  for (int f = 0; f < kind.fields; ++f) {
    const bool on_river = kind.second_station && f == kind.fields - 1;
    const std::string both = on_river ? "[\"river\", \"bench\"]" : "[\"bench\", \"river\"]";
    text += "[[field]]\nname = \"" + field_name(f) +
            "\"\nstations = " + (kind.second_station ? both : "[\"bench\"]") +
            "\ncrop_type = \"quick\"\nirrigation = \"" + kind.irrigation +
            "\"\nsown = " + kind.sown + "\n";
    if (f == 2) text += "offset = { day = \"+0.8 degC\", night = \"-0.5 degC\" }\n";
  }
  return text;
}

}  // namespace

std::string settings_of(const Kind& kind, int variant) {
  const std::string mail = kind.letters_to_folder
                               ? "folder = \"outgoing\"\n"
                               : "server = \"smtp://localhost:2525\"\nplain = true\n";
  return "[farm]\nname = \"Larkspur Bench\"\ntime_zone = \"" + kind.zone +
         "\"\n[store]\nfolder = \"store\"\n[log]\nfile = \"antherd.log\"\n[mail]\nfrom = "
         "\"alerts@larkspur.example\"\nat_most_per_day = " +
         std::to_string(kind.at_most_per_day) + "\n" + mail + recipients_of(kind, variant) +
         "[alerts]\nremind_after = \"" + (variant == 1 ? "36 h" : "24 h") + "\"\n" +
         stations_of(kind) + R"([crop.quick]
emerged = "20 degC d"
buds = "80 degC d"
first_anthers = "220 degC d"
full_flower = "320 degC d"
flowers_done = "520 degC d"
ripe = "800 degC d"
[diary]
folder = "diary"
)" + fields_of(kind);
}

namespace {

/// What a solar day is made of.
struct Day {
  double low = 0, high = 0, dew = 0;
  bool wet_evening = false;
};

Day day_of(const Kind& kind, std::uint64_t seed, long number) {
  const Climate& climate = kind.climate;
  // A hot spell of three days begins on its own day's dice, so that each day can be made alone.
  bool hot = false;
  for (long back = 0; back < 3; ++back) {
    synthetic::Dice begins(seed * 7919 + static_cast<std::uint64_t>(number - back + 100'000));
    hot = hot || begins.uniform() < climate.wave;
  }
  synthetic::Dice dice(seed * 104'729 + static_cast<std::uint64_t>(number + 200'000));
  const double shift = climate.day_to_day * dice.normal() + (hot ? climate.wave_rise : 0);
  const bool damp = dice.uniform() < climate.humid;
  Day day;
  day.low = climate.low + 0.7 * shift;
  day.high = std::min(climate.high + shift - (damp ? 4 : 0), 46.0);
  day.high = std::max(day.high, day.low + 2);
  if (climate.pinned > 0) day.high = climate.pinned + (hot ? climate.wave_rise : 0);
  day.dew = damp ? day.low + 1 : day.low - 5;
  day.wet_evening = dice.uniform() < climate.rain;
  return day;
}

}  // namespace

weather::Sample air_at(const Kind& kind, std::uint64_t seed, int station, Instant at) {
  const double hour = synthetic::solar_hours(at, Degree(kind.longitude));
  const auto shift = Seconds(std::llround(kind.longitude * 240.0));
  const auto number =
      static_cast<long>(std::chrono::floor<days>(at + shift).time_since_epoch().count());
  // From noon to noon one day passes into the next.
  const long first = hour < 12 ? number - 1 : number;
  const double part = (hour < 12 ? hour + 12 : hour - 12) / 24.0;
  const Day one = day_of(kind, seed, first), other = day_of(kind, seed, first + 1);
  const auto mix = [&](double a, double b) { return a + (b - a) * part; };
  const double seconds = static_cast<double>(at.time_since_epoch().count());
  const double ripple =
      (kind.climate.pinned > 0 ? 0.12 : 0.25) * std::sin(seconds / 1300 + station);
  const double low = mix(one.low, other.low), high = mix(one.high, other.high);
  const double t = low + (high - low) * synthetic::course(hour) + ripple - 0.4 * station;
  weather::Sample sample;
  sample.time = at;
  sample.temperature = Celsius(std::round(t * 100) / 100);
  const double td = std::min(mix(one.dew, other.dew) + 0.5 * std::sin(seconds / 2900), t - 0.1);
  sample.humidity = Percent(std::round(synthetic::humidity_of(t, td) * 10) / 10);
  const Day& today = hour < 12 ? other : one;
  const bool raining = today.wet_evening && hour >= 17 && hour < 20;
  sample.rain = Millimetre(raining && kind.interval >= 20 ? 0.6 : 0);
  return sample;
}

}  // namespace simulation
