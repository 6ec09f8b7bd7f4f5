// The hazards' numbers against the tables of expected ones: published, by hand, common practice.
#include <cstdio>
#include <numeric>

#include "core/risk/heat.hpp"
#include "core/risk/humid.hpp"
#include "core/risk/infection.hpp"
#include "core/risk/water.hpp"
#include "core/risk/wetness.hpp"
#include "support/runs.hpp"
#include "support/table.hpp"

using namespace antherd;
using namespace antherd::risk;
using std::chrono::hours;

namespace {

double of_water(const tables::Row& row) {
  const std::string& formula = row.text("formula");
  if (formula == "soil_water") {
    const auto held = soil_water(row.text("of"));
    REQUIRE(held);
    return *held;
  }
  const double a = row.number("a");
  if (formula == "crop_coefficient") return crop_coefficient(a);
  if (formula == "root_depth") return root_depth(a).value;
  if (formula == "readily_available_share") return readily_available_share(Millimetre(a));
  if (formula == "hargreaves") {
    return hargreaves(Celsius(a), Celsius(row.number("b")), row.number("c")).value;
  }
  const Millimetre total(row.number("b"));
  if (formula == "stress") return stress(Millimetre(a), total, row.number("c"));
  REQUIRE(formula == "depletion_after_days");
  Millimetre depletion(a);
  for (int day = 0; day < static_cast<int>(row.number("c")); ++day) {
    depletion += Millimetre(6) * stress(depletion, total, 0.40);
  }
  return depletion.value;
}

double of_heat(const tables::Row& row) {
  const std::string& formula = row.text("formula");
  if (formula == "sterile_share") {
    return sterile_share(Celsius(row.number("temperatures")), Celsius(row.number("before_2")));
  }
  HeatTally day;
  HourStart hour{hours{460000}};
  for (const auto& t : tables::values_of(row.text("temperatures"))) {
    if (t) {
      add_hour(day, hour, Celsius(*t), row.text("whole_degrees") == "1", HeatRules{});
    } else {
      add_gap(day);
    }
    hour += hours{1};
  }
  if (formula == "degree_hours") return day.degree_hours;
  if (formula == "longest_run") return day.longest_run;
  if (formula == "hours_sustained") return day.hours_sustained;
  if (formula == "hours_severe") return day.hours_severe;
  if (formula == "hours_extreme") return day.hours_extreme;
  REQUIRE(formula == "level");
  return static_cast<int>(heat_level(day, row.number("before_2"), row.number("before_4")));
}

HumidRules humid_rules(const tables::Row& row) {
  HumidRules rules;
  if (row.text("set") == "published") {
    rules.t_min = 7, rules.t_best = 18, rules.t_max = 30;
    rules.w_min = 10, rules.w_max = 42;
  }
  return rules;
}

/// A humid day at longitude 0, where solar time is UTC; its hours from 18:00 on are written as
/// "." dry, "d" wet by dew, "w" wet by water, "x" a gap.
DayWetness wetness_of(const tables::Row& row) {
  constexpr HourStart evening{hours{20000 * 24 - 6}};
  std::vector<DayHour> day;
  REQUIRE(row.text("hours").size() == 24);
  for (const char sign : row.text("hours")) {
    const HourStart start = evening + hours{static_cast<int>(day.size())};
    day.push_back({start, sign != 'x', row.number("temperature"), row.number("humidity"),
                   sign == 'd' || sign == 'w', sign == 'w'});
  }
  const Instant sunrise{Seconds{20000LL * 86400} +
                        Seconds{static_cast<int>(row.number("sunrise")) * 3600}};
  return evaluate_day(day, sunrise, Degree(0), humid_rules(row));
}

double of_infection(const tables::Row& row) {
  const std::string& formula = row.text("formula");
  if (formula == "wetness_needed") {
    return wetness_needed(Celsius(row.number("temperature")), humid_rules(row)).value_or(0);
  }
  const DayWetness day = wetness_of(row);
  if (formula == "infection") return day.infection;
  if (formula == "dry_out") return day.dry_out ? 1 : 0;
  if (formula == "hot") return day.hot ? 1 : 0;
  REQUIRE(formula == "valid_hours");
  return day.valid_hours;
}

/// A humid day written as "2w+": I, water or dew, with or without dry-out; then the valid hours
/// where they are not 24, and "h" after a hot day, "n" a night set before, "s" disease seen.
SpellDay take_day(Spell& spell, const std::string& word) {
  DayWetness day;
  DayContext context;
  std::size_t at = 0;
  day.infection = std::stod(word, &at);
  day.water = word.at(at++) == 'w';
  day.dry_out = word.at(at++) == '+';
  day.valid_hours = 24;
  day.mean_temperature = 15;
  if (at < word.size() && std::isdigit(static_cast<unsigned char>(word[at])) != 0) {
    std::size_t digits = 0;
    day.valid_hours = std::stoi(word.substr(at), &digits);
    at += digits;
  }
  for (; at < word.size(); ++at) {
    context.after_hot_day = context.after_hot_day || word[at] == 'h';
    context.night_set = context.night_set || word[at] == 'n';
    context.disease_seen = context.disease_seen || word[at] == 's';
  }
  return advance(spell, day, context);
}

double of_humid(const tables::Row& row) {
  Spell spell;
  SpellDay last;
  for (const std::string& word : tables::words_of(row.text("days"))) last = take_day(spell, word);
  const std::string& formula = row.text("formula");
  if (formula == "score") return last.day.score;
  if (formula == "f3") return last.f3;
  if (formula == "level") return static_cast<int>(last.level);
  REQUIRE(formula == "r");
  REQUIRE(last.r);
  return *last.r;
}

/// Hours at 15 °C written as "rain/irrigation/drying/humidity" in mm, mm, mm and %.
double of_wetness(const tables::Row& row) {
  LeafState leaf;
  Wet wet;
  for (const std::string& word : tables::words_of(row.text("hours"))) {
    if (word == "gap") {
      after_gap(leaf);
      continue;
    }
    const auto parts = tables::words_of(word, '/');
    REQUIRE(parts.size() == 4);
    LeafHour hour;
    hour.temperature = Celsius(15);
    hour.rain = Millimetre(std::stod(parts[0]));
    hour.drying = Millimetre(std::stod(parts[2]));
    hour.humidity = Percent(std::stod(parts[3]));
    Watering watering;
    watering.depth = Millimetre(std::stod(parts[1]));
    wet = wet_hour(leaf, hour, watering, HumidRules{});
  }
  const std::string& formula = row.text("formula");
  if (formula == "wet") return wet.wet ? 1 : 0;
  if (formula == "water") return wet.water ? 1 : 0;
  REQUIRE(formula == "film_mm");
  return leaf.film_mm;
}

Instant instant_of(const std::string& text) {
  int y = 0, h = 0, minute = 0, s = 0;
  unsigned m = 0, d = 0;
  REQUIRE(std::sscanf(text.c_str(), "%d-%u-%u %d:%d:%d", &y, &m, &d, &h, &minute, &s) == 6);
  using namespace std::chrono;
  return sys_days{year{y} / month{m} / day{d}} + hours{h} + minutes{minute} + seconds{s};
}

double of_night_sets(const tables::Row& row) {
  const weather::Place place{Degree(row.number("latitude")), Degree(row.number("longitude")),
                             Metre(0)};
  const Instant end = instant_of(row.text("end"));
  std::optional<Millimetre> depth;
  if (row.has("depth")) depth = Millimetre(row.number("depth"));
  const auto sets =
      night_sets({{0, "north", end - hours{2}, end, field::Method::overhead, depth, 0}}, place);
  const std::string& formula = row.text("formula");
  if (formula == "counts") return static_cast<double>(sets.size());
  REQUIRE(sets.size() == 1);
  if (formula == "enough") return sets[0].enough ? 1 : 0;
  if (formula == "close_to_limit") return sets[0].close_to_limit ? 1 : 0;
  REQUIRE(formula == "sunrise_utc_h");
  return static_cast<double>(sets[0].sunrise.time_since_epoch().count() % 86400) / 3600.0;
}

void hold(const char* table, double (*worked_out)(const tables::Row&)) {
  for (const auto& row : tables::read(table)) {
    INFO(row.text("name"));
    tables::check(row, worked_out(row));
  }
}

}  // namespace

TEST_CASE("soil water agrees with its table") {
  hold("risk-water.csv", of_water);
  CHECK_FALSE(soil_water("gravel"));
}
TEST_CASE("heat levels and degree-hours agree with their table") { hold("risk-heat.csv", of_heat); }
TEST_CASE("infection of a humid day agrees with its table") {
  hold("risk-infection.csv", of_infection);
}
TEST_CASE("scores and levels of a humid spell agree with their table") {
  hold("risk-humid.csv", of_humid);
}
TEST_CASE("wet hours agree with their table") { hold("risk-wetness.csv", of_wetness); }
TEST_CASE("night sets agree with their table") { hold("risk-night-sets.csv", of_night_sets); }
