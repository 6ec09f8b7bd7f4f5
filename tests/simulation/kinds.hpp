// Ten kinds of season: an invented farm, its stations and its weather. All of it is the same for
// the same seed on every machine.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

#include "core/units/time.hpp"
#include "core/weather/sample.hpp"

namespace simulation {

using namespace antherd;
using std::chrono::days;
using std::chrono::hours;
using std::chrono::minutes;

/// A climate: the means of its nights and afternoons and what may happen to a day.
struct Climate {
  double low = 13, high = 27;  // °C
  double day_to_day = 1.5;     // sd of the day's shift, °C
  double wave = 0.05;          // chance that a hot spell begins
  double wave_rise = 10;       // °C on its days
  double humid = 0.1;          // chance of a damp day
  double rain = 0.05;          // chance of a wet evening
  double pinned = 0;           // °C: afternoons stand on this threshold, 0 for none
};

struct Kind {
  std::string name;
  std::string zone = "America/Los_Angeles";
  double latitude = 46.73, longitude = -117.18;
  std::string sown = "2026-06-25";  // the service starts at its midnight
  int days = 50;
  int interval = 60;  // minutes between readings
  Climate climate = {};
  std::string irrigation = "overhead";
  int fields = 1;
  int recipients = 1;
  bool second_station = false;  // one that is asked over HTTP, for the last field and in reserve
  bool local_stamps = false;    // the file's times are farm time
  bool letters_to_folder = false;
  int at_most_per_day = 12;
  int sets_in_ten = 3;  // evenings of ten on which the sprinklers run
};

const std::vector<Kind>& kinds();

std::string station_name(int number);   // 0 "bench", 1 "river"
std::string field_name(int number);     // "north bench" …
std::string address_of(int recipient);  // of Kind::recipients

/// The settings of such a farm. `variant` 0 is the first file; others differ in what may change
/// while the service runs: quiet hours, reminders.
std::string settings_of(const Kind& kind, int variant);

/// The air at one moment; no two values in a row are equal.
weather::Sample air_at(const Kind& kind, std::uint64_t seed, int station, Instant at);

}  // namespace simulation
