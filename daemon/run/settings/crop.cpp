// Crop types: the three that the program knows, and [crop.NAME] tables with their own numbers.
#include <cmath>

#include "run/settings/parts.hpp"
#include "run/settings/quantities.hpp"

namespace antherd::settings {
namespace {

struct StageKey {
  const char* key;
  ThermalTime crop::Requirements::*into;
};
constexpr StageKey stages[] = {{"emerged", &crop::Requirements::emerged},
                               {"buds", &crop::Requirements::buds},
                               {"first_anthers", &crop::Requirements::first_anthers},
                               {"full_flower", &crop::Requirements::full_flower},
                               {"flowers_done", &crop::Requirements::flowers_done},
                               {"ripe", &crop::Requirements::ripe}};

/// Seconds as hours, for the photoperiod.
double hours(Seconds time) { return static_cast<double>(time.count()) / 3600.0; }

void read_photoperiod(const Table& table, crop::Photoperiod& photoperiod) {
  const Wanted wanted{"a table with the critical day length and the slope for each hour beyond it",
                      "photoperiod = { critical = \"13 h\", slope = 0.02 }"};
  const auto own = table.table("photoperiod", "[crop.NAME] photoperiod", wanted);
  if (!own) return;
  const auto critical =
      own->quantity("critical", parse_duration, Seconds{8 * 3600}, Seconds{20 * 3600},
                    {"a day length from 8 h to 20 h, with its unit", "critical = \"13 h\""}, true);
  if (critical) photoperiod.critical_hours = hours(*critical);
  photoperiod.slope_per_hour =
      own->number("slope", 0, 0.5, {"a number from 0 to 0.5", "slope = 0.02"}, true)
          .value_or(photoperiod.slope_per_hour);
}

/// The traits of one [crop.NAME] table, complaining of each fault into `faults`.
crop::Traits read_crop(const Node& node, const std::string& name, Faults& faults) {
  const Table table(node, "[crop.NAME]", "[crop." + name + "]", "", faults);
  crop::Traits traits;
  traits.name = name;
  ThermalTime before{0};
  for (const auto& [key, into] : stages) {
    const std::string example = std::string(key) + " = \"" +
                                std::to_string(std::lround((traits.needs.*into).value)) +
                                " degC d\"";
    const auto need = table.quantity(
        key, parse_thermal_time, ThermalTime(1), ThermalTime(5000),
        {"the thermal time from sowing, from 1 to 5000 degC d, with its unit", example}, true);
    if (!need) continue;
    traits.needs.*into = *need;
    if (*need <= before) {
      table.refuse(key, {"more than the stage before it needs", example});
    }
    before = *need;
  }
  traits.prior_sigma = table
                           .number("prior_sigma", 0.02, 0.5,
                                   {"a number from 0.02 to 0.5: the share by which the needs may "
                                    "be wrong",
                                    "prior_sigma = 0.15"})
                           .value_or(traits.prior_sigma);
  read_photoperiod(table, traits.photoperiod);
  return traits;
}

}  // namespace

std::optional<crop::Traits> traits_named(const Work& work, const std::string& name) {
  if (auto known = crop::traits_of(name)) return known;
  const Node* const crops = work.root.find("crop");
  if (crops == nullptr || crops->kind != Node::Kind::table) return {};
  const Node* const own = crops->find(name);
  if (own == nullptr || own->kind != Node::Kind::table) return {};
  Faults heard_already;  // check_crops() tells them once
  return read_crop(*own, name, heard_already);
}

void check_crops(Work& work) {
  const Node* const crops = work.root.find("crop");
  if (crops == nullptr) return;
  const std::string example = "[crop.ours]";
  if (crops->kind != Node::Kind::table) {
    work.faults.complaints.push_back({work.faults.file, crops->line, "[crop]", shown(*crops),
                                      "one table for each crop type of your own", example, ""});
    return;
  }
  for (std::size_t i = 0; i < crops->keys.size(); ++i) {
    const auto& [name, line] = crops->keys[i];
    const Node& node = crops->items[i];
    const std::string where = "[crop." + name + "]";
    if (node.kind != Node::Kind::table) {
      work.faults.complaints.push_back({work.faults.file, line, "[crop], " + in_quotes(name),
                                        shown(node), "a table of its own for each crop type",
                                        example, ""});
    } else if (crop::traits_of(name)) {
      work.faults.complaints.push_back(
          {work.faults.file, line, where, "the name " + in_quotes(name), "", example,
           "early, coastal and highland have their numbers already; choose another"});
    } else if (fault_of_name(name, 40)) {
      work.faults.complaints.push_back({work.faults.file, line, "[crop.NAME]", in_quotes(name),
                                        "a name of at most 40 characters", example, ""});
    } else {
      read_crop(node, name, work.faults);
    }
  }
}

}  // namespace antherd::settings
