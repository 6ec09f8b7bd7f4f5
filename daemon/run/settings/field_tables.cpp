// See field_tables.hpp.
#include "run/settings/field_tables.hpp"

#include "run/settings/quantities.hpp"

namespace antherd::settings {

void read_offset(const Table& table, field::Field& field) {
  const Wanted wanted{"the field's temperature against the station's, by day and by night",
                      "offset = { day = \"+0.8 degC\", night = \"-0.5 degC\" }"};
  const auto own = table.table("offset", "[field] offset", wanted);
  if (!own) return;
  const auto part = [&](const char* key) {
    return own
        ->quantity(
            key, parse_difference, CelsiusDifference(-15), CelsiusDifference(15),
            {"a temperature difference from -15 degC to 15 degC, with its unit", wanted.example},
            true)
        .value_or(CelsiusDifference(0));
  };
  const CelsiusDifference day = part("day");
  field.offset = field::Offset{day, part("night")};
}

void read_heat(const Table& table, risk::HeatRules& heat) {
  const Wanted wanted{"a table with the thresholds that differ from the usual ones",
                      "heat = { sustained = \"90 degF\", severe = \"95 degF\", extreme = "
                      "\"100.4 degF\" }"};
  const auto own = table.table("heat", "[field] heat", wanted);
  if (!own) return;
  const auto part = [&](const char* key, Celsius& threshold) {
    threshold =
        own->quantity(key, parse_temperature, Celsius(20), Celsius(50),
                      {"a temperature from 20 degC to 50 degC, with its unit", wanted.example})
            .value_or(threshold);
  };
  part("sustained", heat.sustained);
  part("severe", heat.severe);
  part("extreme", heat.extreme);
  if (!(heat.sustained < heat.severe && heat.severe < heat.extreme)) {
    table.object("heat", "thresholds that do not rise",
                 "sustained must be below severe, and severe below extreme", wanted.example);
  }
}

namespace {

/// film = "dew_point", or its older form dew_point_film = true.
void read_film(const Table& humid, risk::Film& film) {
  const Words<risk::Film> films{{"humidity", risk::Film::humidity},
                                {"dew_point", risk::Film::dew_point},
                                {"energy", risk::Film::energy}};
  const auto older = humid.truth("dew_point_film");
  if (older.value_or(false)) film = risk::Film::dew_point;
  const auto chosen = humid.choice("film", films, "film = \"energy\"");
  if (chosen && older && *older != (*chosen == risk::Film::dew_point)) {
    humid.object("film", "film and a dew_point_film that says otherwise", "keep film alone",
                 std::string("film = \"") + risk::name_of(*chosen) + "\"");
  }
  film = chosen.value_or(film);
}

}  // namespace

void read_humid(const Table& table, risk::HumidRules& humid) {
  const Wanted wanted{
      "a table with the numbers that differ from the usual ones",
      "humid = { coldest = \"3 degC\", best = \"15 degC\", warmest = \"26 degC\" }"};
  const auto own = table.table("humid", "[field] humid", wanted);
  if (!own) return;
  const auto percent = [&](const char* key, double& number) {
    const auto value = own->quantity(
        key, parse_humidity, Percent(50), Percent(100),
        {"a humidity from 50 % to 100 %, with its unit", std::string(key) + " = \"90 %\""});
    if (value) number = value->value;
  };
  const auto degrees = [&](const char* key, double& number) {
    const auto value =
        own->quantity(key, parse_temperature, Celsius(-5), Celsius(45),
                      {"a temperature from -5 degC to 45 degC, with its unit", wanted.example});
    if (value) number = value->value;
  };
  const auto duration = [&](const char* key, double& number) {
    const auto value = own->quantity(
        key, parse_duration, Seconds{1800}, Seconds{48 * 3600},
        {"a duration from 30 min to 48 h, with its unit", std::string(key) + " = \"4 h\""});
    if (value) number = static_cast<double>(value->count()) / 3600.0;
  };
  percent("film_humidity", humid.film_humidity);
  percent("film_humidity_calm", humid.film_humidity_calm);
  percent("dry_out_humidity", humid.dry_out_humidity);
  read_film(*own, humid.film);
  const auto bucket = own->quantity(
      "bucket", parse_depth, Millimetre(0.05), Millimetre(5),
      {"a depth of water from 0.05 mm to 5 mm, with its unit", "bucket = \"0.2 mm\""});
  if (bucket) humid.bucket_mm = bucket->value;
  degrees("coldest", humid.t_min);
  degrees("best", humid.t_best);
  degrees("warmest", humid.t_max);
  duration("shortest", humid.w_min);
  duration("longest", humid.w_max);
  if (!(humid.t_min < humid.t_best && humid.t_best < humid.t_max)) {
    table.object("humid", "temperatures that do not rise",
                 "coldest must be below best, and best below warmest", wanted.example);
  }
  if (humid.w_min > humid.w_max) {
    table.object("humid", "durations that do not rise", "shortest must not be above longest",
                 "humid = { shortest = \"4 h\", longest = \"12 h\" }");
  }
  if (humid.film_humidity_calm > humid.film_humidity) {
    table.object("humid", "a film_humidity_calm above film_humidity",
                 "in calm air a film forms at the same humidity or below it",
                 "humid = { film_humidity = \"95 %\", film_humidity_calm = \"90 %\" }");
  }
}

}  // namespace antherd::settings
