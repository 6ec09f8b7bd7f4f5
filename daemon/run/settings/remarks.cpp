// Remarks: settings that are allowed, but odd enough to be said.
#include <sys/stat.h>

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <numbers>

#include "run/settings/parts.hpp"

namespace antherd::settings {
namespace {

constexpr double highland_latitude = 40;     // science §5
constexpr double far_from_station_km = 50;   // J: beyond it another valley's weather
constexpr double odd_hours_from_zone = 3.5;  // no inhabited zone strays further from its sun

/// Distance of two places, km, on a sphere of 6371 km (haversine; Sinnott 1984, from memory).
double kilometres(Degree north_1, Degree east_1, Degree north_2, Degree east_2) {
  const auto radians = [](double degrees) { return degrees * std::numbers::pi / 180; };
  const double half_north = std::sin(radians(north_2.value - north_1.value) / 2);
  const double half_east = std::sin(radians(east_2.value - east_1.value) / 2);
  const double h = half_north * half_north + std::cos(radians(north_1.value)) *
                                                 std::cos(radians(north_2.value)) * half_east *
                                                 half_east;
  return 2 * 6371 * std::asin(std::min(1.0, std::sqrt(h)));
}

bool is_folder(const std::string& path) {
  struct stat status {};
  return stat(path.c_str(), &status) == 0 && S_ISDIR(status.st_mode);
}

void remark_on_place(Work& work, const Station& station) {
  using namespace std::chrono;
  const Degree longitude = station.station.place.longitude;
  double least = 24;
  for (const Instant at :
       {Instant(sys_days(2026y / January / 15)), Instant(sys_days(2026y / July / 15))}) {
    const double zone =
        duration<double, hours::period>(work.settings.calendar.offset_at(at)).count();
    double apart = std::fabs(zone - longitude.value / 15);
    apart = std::min(apart, 24 - apart);
    least = std::min(least, apart);
  }
  if (least <= odd_hours_from_zone) return;
  work.faults.remarks.push_back(
      "station " + in_quotes(station.station.name) + ": its longitude does not fit the time zone " +
      work.settings.calendar.name() + "; west of Greenwich longitudes are negative");
}

void remark_on_station(Work& work, const Station& station) {
  const std::string& name = station.station.name;
  const auto& fields = work.settings.fields;
  const bool used = std::any_of(fields.begin(), fields.end(), [&](const FieldPlan& plan) {
    const auto& names = plan.field.stations;
    return std::find(names.begin(), names.end(), name) != names.end();
  });
  if (!used) work.faults.remarks.push_back("station " + in_quotes(name) + ": no field uses it");
  remark_on_place(work, station);
  if (work.ask_disk && station.drop && !is_folder(station.drop->folder)) {
    work.faults.remarks.push_back("station " + in_quotes(name) + ": there is no folder " +
                                  station.drop->folder + " yet");
  }
}

/// The energy balance without wind or sun stands on assumptions.
void remark_on_film(Work& work, const FieldPlan& plan, const weather::Station& station) {
  if (plan.rules.humid.film != risk::Film::energy) return;
  if (station.measures_wind && station.measures_solar) return;
  work.faults.remarks.push_back(
      "field " + in_quotes(plan.field.name) + ": film = \"energy\" wants wind and solar; where " +
      in_quotes(station.name) +
      " does not measure them it takes 2 m/s and guesses the clouds from the day's warmth, and "
      "misses dew of calm nights");
}

/// A new field is easily forgotten in the lists of its readers, and its warnings would go nowhere.
void remark_on_readers(Work& work, const std::string& field) {
  const Settings& settings = work.settings;
  const auto gets = [&](const letters::Recipient& recipient) {
    const auto& fields = recipient.fields;  // none: all of them
    return fields.empty() || std::find(fields.begin(), fields.end(), field) != fields.end();
  };
  if (!settings.mail || settings.recipients.empty()) return;
  if (std::any_of(settings.recipients.begin(), settings.recipients.end(), gets)) return;
  work.faults.remarks.push_back("field " + in_quotes(field) +
                                ": no recipient gets its letters; add it to the fields of a "
                                "[[recipient]], or leave that list away");
}

void remark_on_field(Work& work, const FieldPlan& plan) {
  const field::Field& field = plan.field;
  const std::string name = "field " + in_quotes(field.name);
  remark_on_readers(work, field.name);
  if (field.crop_type == "highland" && std::fabs(field.latitude.value) > highland_latitude) {
    work.faults.remarks.push_back(name +
                                  ": no flowering date can be promised for a highland type above "
                                  "40° latitude; long days may prevent seed whatever the weather");
  }
  const Station* const station =
      field.stations.empty() ? nullptr : work.settings.station(field.stations.front());
  if (station == nullptr) return;
  remark_on_film(work, plan, station->station);
  const weather::Place& place = station->station.place;
  const double apart = kilometres(field.latitude, field.longitude, place.latitude, place.longitude);
  if (apart <= far_from_station_km) return;
  char text[40];
  std::snprintf(text, sizeof text, "%.0f km", apart);
  work.faults.remarks.push_back(name + ": it lies " + text + " from its station " +
                                in_quotes(station->station.name) +
                                "; check latitude and longitude of both");
}

}  // namespace

void remark_on(Work& work) {
  const Settings& settings = work.settings;
  if (!settings.mail) {
    work.faults.remarks.push_back("there is no [mail] table: warnings go to the log only");
  }
  for (const Station& station : settings.stations) remark_on_station(work, station);
  for (const FieldPlan& plan : settings.fields) remark_on_field(work, plan);
  if (work.ask_disk && !settings.diary_folder.empty() && !is_folder(settings.diary_folder)) {
    work.faults.remarks.push_back("diary: there is no folder " + settings.diary_folder + " yet");
  }
  const Node* const crops = work.root.find("crop");
  if (crops == nullptr) return;
  for (const Key& crop : crops->keys) {
    const auto uses = [&](const FieldPlan& plan) { return plan.field.crop_type == crop.name; };
    if (std::none_of(settings.fields.begin(), settings.fields.end(), uses)) {
      work.faults.remarks.push_back("crop type " + in_quotes(crop.name) + ": no field uses it");
    }
  }
}

}  // namespace antherd::settings
