// See menu.hpp.
#include "menu.hpp"

#include <algorithm>
#include <cstdlib>
#include <tuple>

#include "support/weather_generator.hpp"

namespace simulation {
namespace {

struct Dish {
  What what;
  const char* name;
  double often;     // mean number in a season
  double from, to;  // its length in hours; 0, 0: a moment
};

const std::vector<Dish>& dishes() {
  static const std::vector<Dish> all{
      {What::silent, "silent", 2.0, 0.5, 60},
      {What::frozen, "frozen", 0.7, 3, 40},
      {What::spikes, "spikes", 0.7, 2, 30},
      {What::garbage, "garbage", 0.7, 2, 20},
      {What::out_of_range, "out_of_range", 0.5, 1, 12},
      {What::fahrenheit, "fahrenheit", 0.4, 24, 24},
      {What::flapping, "flapping", 0.7, 10, 48},
      {What::twofold, "twofold", 0.5, 1, 8},
      {What::half_rows, "half_rows", 0.7, 2, 24},
      {What::rotated, "rotated", 0.7, 0, 0},
      {What::repeated, "repeated", 0.7, 0, 0},
      {What::shuffled, "shuffled", 0.7, 3, 20},
      {What::late, "late", 1.0, 2, 200},
      {What::not_modified, "not_modified", 0.7, 3, 50},
      {What::unreachable, "unreachable", 0.7, 3, 50},
      {What::clock_1970, "clock_1970", 0.4, 0.5, 40},
      {What::clock_last_shutdown, "clock_last_shutdown", 0.4, 0.5, 30},
      {What::clock_hours, "clock_hours", 0.4, 1, 20},
      {What::clock_20_years, "clock_20_years", 0.4, 0.2, 6},
      {What::kill, "kill", 3.0, 0, 0},
      {What::kill_in_commit, "kill_in_commit", 2.0, 0, 0},
      {What::kill_in_mail, "kill_in_mail", 2.0, 0, 0},
      {What::power_cut, "power_cut", 1.5, 0, 0},
      {What::cut_in_commit, "cut_in_commit", 1.5, 0, 0},
      {What::cut_in_mail, "cut_in_mail", 1.5, 0, 0},
      {What::long_off, "long_off", 0.7, 2, 90},
      {What::disk_full, "disk_full", 0.7, 1, 24},
      {What::disk_locked, "disk_locked", 0.7, 0.5, 6},
      {What::disk_error, "disk_error", 0.7, 0.1, 5},
      {What::mail_down, "mail_down", 1.0, 1, 50},
      {What::mail_4xx, "mail_4xx", 0.7, 1, 20},
      {What::mail_5xx_recipient, "mail_5xx_recipient", 0.5, 5, 40},
      {What::mail_login, "mail_login", 0.5, 1, 30},
      {What::mail_silent, "mail_silent", 0.8, 1, 30},
      {What::mail_lost_body, "mail_lost_body", 0.7, 1, 20},
      {What::mail_slow, "mail_slow", 0.7, 5, 40},
      {What::offline, "offline", 0.5, 48, 48},
      {What::diary_late, "diary_late", 1.0, 0, 0},
      {What::diary_undone, "diary_undone", 0.7, 0, 0},
      {What::reload_broken, "reload_broken", 0.7, 0, 0},
      {What::reload_good, "reload_good", 0.7, 0, 0},
  };
  return all;
}

bool wanted(const std::string& name) {
  const char* only = std::getenv("ANTHERD_FAULTS");
  if (only == nullptr) return true;
  return ("," + std::string(only) + ",").find("," + name + ",") != std::string::npos;
}

}  // namespace

const char* name_of(What what) {
  for (const Dish& dish : dishes()) {
    if (dish.what == what) return dish.name;
  }
  return "";
}

std::vector<Fault> order(const Kind& kind, std::uint64_t seed, Instant start, Instant end) {
  std::vector<Fault> faults;
  std::uint64_t own = 0;  // each kind of season has its own dice
  for (const char letter : kind.name) own = own * 131 + static_cast<unsigned char>(letter);
  const Instant first = start + days{1}, last = end - days{9};
  const double room = static_cast<double>((last - first).count());
  for (const Dish& dish : dishes()) {
    synthetic::Dice dice(seed * 1'000'003 + static_cast<std::uint64_t>(dish.what) * 8191 + own);
    // As many as a whole number of chances of one half give: the mean is `often`.
    int count = 0;
    for (int i = 0; i < static_cast<int>(2 * dish.often + 0.5); ++i) {
      if (dice.uniform() < 0.5) ++count;
    }
    for (int i = 0; i < count; ++i) {
      Fault fault;
      fault.what = dish.what;
      fault.from = first + Seconds{static_cast<std::int64_t>(dice.uniform() * room)};
      // Short ones more often than long ones.
      const double u = dice.uniform();
      const double length = 3600.0 * (dish.from + (dish.to - dish.from) * u * u);
      fault.to = std::min(last + days{2}, fault.from + Seconds{static_cast<std::int64_t>(length)});
      fault.dice = static_cast<std::uint64_t>(dice.uniform() * 1e15);
      if (wanted(dish.name)) faults.push_back(fault);
    }
  }
  std::sort(faults.begin(), faults.end(), [](const Fault& a, const Fault& b) {
    return std::tie(a.from, a.what) < std::tie(b.from, b.what);
  });
  return faults;
}

}  // namespace simulation
