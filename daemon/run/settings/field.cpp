// The [[field]] tables.
#include <algorithm>

#include "edge/clock/nearest.hpp"
#include "run/settings/field_tables.hpp"
#include "run/settings/parts.hpp"
#include "run/settings/quantities.hpp"

namespace antherd::settings {
namespace {

constexpr std::size_t longest_name = 40;  // it stands in subjects of 70 characters

std::string list_of(const std::vector<std::string>& names) {
  std::string text;
  for (const std::string& name : names) text += (text.empty() ? "" : ", ") + in_quotes(name);
  return text.empty() ? "none" : text;
}

/// Complains of a name that no table of its kind has.
void refuse_unknown(const Table& table, const std::string& key, const std::string& name,
                    const std::string& kind, const std::vector<std::string>& known) {
  const auto near = clock::nearest_to(name, known);
  table.object(key, in_quotes(name),
               "there is no " + kind + " of that name" +
                   (near.empty() ? "; there are: " + list_of(known)
                                 : "; did you mean " + in_quotes(near.front()) + "?"));
}

std::vector<std::string> read_stations_of(const Work& work, const Table& table) {
  const std::vector<std::string> known = names_of(work, "station");
  const Wanted wanted{"the names of the stations that watch the field, the best first",
                      "stations = [\"bench\"]"};
  if (table.has("station") && table.has("stations")) {
    table.object("stations", "both station and stations", "keep one of them", wanted.example);
    return {};
  }
  const std::string key = table.has("station") ? "station" : "stations";
  if (known.empty()) return {};  // that there is no station is told elsewhere
  if (!table.has(key)) {
    if (known.size() == 1) return known;
    table.miss(key, wanted);
    return {};
  }
  const auto names = table.texts(key, wanted);
  if (!names) return {};
  if (names->empty()) table.refuse(key, wanted);
  std::vector<std::string> seen;
  for (const std::string& name : *names) {
    if (std::find(known.begin(), known.end(), name) == known.end()) {
      refuse_unknown(table, key, name, "station", known);
    } else if (std::find(seen.begin(), seen.end(), name) != seen.end()) {
      table.object(key, in_quotes(name), "it is named twice; once is enough");
    }
    seen.push_back(name);
  }
  return *names;
}

/// Where the field lies: what it does not say itself is its first station's.
void read_place(const Work& work, const Table& table, field::Field& field) {
  const Station* const station =
      field.stations.empty() ? nullptr : work.settings.station(field.stations.front());
  const weather::Place place = station == nullptr ? weather::Place{} : station->station.place;
  const Wanted north{"degrees north from -90 to 90, a number without quotes", "latitude = 46.74"};
  const Wanted east{"degrees east from -180 to 180 (west is negative), a number without quotes",
                    "longitude = -117.17"};
  field.latitude = Degree(table.number("latitude", -90, 90, north).value_or(place.latitude.value));
  field.longitude =
      Degree(table.number("longitude", -180, 180, east).value_or(place.longitude.value));
  field.elevation =
      table
          .quantity("elevation", parse_length, Metre(-430), Metre(6000),
                    {"a height from -430 m to 6000 m, with its unit", "elevation = \"800 m\""})
          .value_or(place.elevation);
}

void read_season(const Table& table, field::Field& field) {
  constexpr std::chrono::days longest{400};
  const auto sown = table.day("sown", true);
  field.sown = sown.value_or(CivilDay{});
  field.harvested = table.day("harvested");
  if (!sown || !field.harvested) return;
  if (*field.harvested <= *sown || *field.harvested > *sown + longest) {
    table.refuse("harvested",
                 {"a date after sown, within 400 days of it", "harvested = 2026-09-30"});
  }
}

void read_crop_type(const Work& work, const Table& table, FieldPlan& plan) {
  const Wanted wanted{"early, coastal, highland, or the name of a [crop.NAME] table",
                      "crop_type = \"coastal\""};
  const auto name = table.text("crop_type", wanted, true);
  if (!name) return;
  plan.field.crop_type = *name;
  const auto traits = traits_named(work, *name);
  if (traits) {
    plan.traits = *traits;
  } else {
    table.refuse("crop_type", wanted);
  }
}

void read_irrigation(const Table& table, field::Field& field) {
  const Words<field::Method> methods{{"overhead", field::Method::overhead},
                                     {"drip", field::Method::drip},
                                     {"furrow", field::Method::furrow},
                                     {"none", field::Method::none}};
  const std::string example = "irrigation = \"overhead\"";
  const Node* const node = table.find("irrigation");
  if (node == nullptr || node->kind == Node::Kind::text) {
    field.irrigation =
        table.choice("irrigation", methods, example, true).value_or(field::Method::none);
    return;
  }
  const auto own =
      table.table("irrigation", "[field] irrigation",
                  {"overhead, drip, furrow or none, or a table with the method", example});
  if (!own) return;
  field.irrigation =
      own->choice("method", methods, "irrigation = { method = \"overhead\", sets = 2 }", true)
          .value_or(field::Method::none);
  field.sets = own->whole("sets", 1, 100, {"a whole number from 1 to 100", "sets = 2"}).value_or(1);
}

void read_soil(const Table& table, field::Field& field) {
  // The texture names of FAO-56 table 19; "silty clay loam" is another spelling of one of them.
  static const Words<std::string> textures{{"sand", "sand"},
                                           {"loamy sand", "loamy sand"},
                                           {"sandy loam", "sandy loam"},
                                           {"loam", "loam"},
                                           {"silt loam", "silt loam"},
                                           {"silt", "silt"},
                                           {"silt clay loam", "silt clay loam"},
                                           {"silty clay loam", "silt clay loam"},
                                           {"silty clay", "silty clay"},
                                           {"clay", "clay"}};
  field.soil = table.choice("soil", textures, "soil = \"silt loam\"").value_or("");
  const Words<std::optional<double>> states{{"full", 1.0}, {"half", 0.5}, {"unknown", {}}};
  const auto state =
      table.choice("soil_water_at_sowing", states, "soil_water_at_sowing = \"unknown\"");
  if (state) field.soil_water_at_sowing = *state;
}

void read_field(Work& work, const Node& node, std::size_t index) {
  const Table table(node, "[[field]]", label_of(node, "[[field]]", "name", index), "", work.faults);
  FieldPlan plan;
  plan.field.name = table
                        .name("name", longest_name,
                              {"a name of at most 40 characters", "name = \"north bench\""}, true)
                        .value_or("");
  plan.field.stations = read_stations_of(work, table);
  read_place(work, table, plan.field);
  read_season(table, plan.field);
  read_crop_type(work, table, plan);
  read_irrigation(table, plan.field);
  read_soil(table, plan.field);
  plan.field.photoperiod = table.truth("photoperiod").value_or(false);
  read_offset(table, plan.field);
  read_heat(table, plan.rules.heat);
  read_humid(table, plan.rules.humid);
  work.settings.fields.push_back(std::move(plan));
}

}  // namespace

void read_fields(Work& work) {
  const auto nodes = sections(work, "field");
  if (work.root.find("field") == nullptr) {
    work.faults.complaints.push_back({work.faults.file, 1, "[[field]]", "", "at least one field",
                                      "[[field]] with name = \"north bench\" below it", ""});
  }
  for (std::size_t i = 0; i < nodes.size(); ++i) read_field(work, *nodes[i], i);
  refuse_repeats(work, "field", "name");
  check_crops(work);
}

}  // namespace antherd::settings
