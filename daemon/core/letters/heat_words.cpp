// One day's heat in words.
#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {

const season::HeatDay* heat_day_at(const FieldStatus& status, CivilDay day) {
  if (status.heat.today.date == day) return &status.heat.today;
  if (status.heat.yesterday && status.heat.yesterday->date == day) return &*status.heat.yesterday;
  return nullptr;
}

std::string exposed_words(const FieldStatus& status, const Words& words) {
  const std::string at =
      "an hour at " + words.threshold(words.heat_rules(status.field).severe) + " or more";
  if (status.heat.exposed_share <= 0) return "no day in flower has had " + at;
  return in_hundred(status.heat.exposed_share) + " of the season's flowers opened on days with " +
         at;
}

std::string hot_hours(const season::HeatDay& day, const risk::HeatRules& rules,
                      const Words& words) {
  if (!day.hours_32 || !day.hours_35 || !day.hours_38) return "hot hours not measured";
  const auto hours = [](int n) { return std::to_string(n) + glue + "h"; };
  if (*day.hours_32 == 0) return "no hour at " + words.threshold(rules.sustained) + " or more";
  std::string text = hours(*day.hours_32) + " at " + words.threshold(rules.sustained) + " or more";
  if (*day.hours_35 == 0) return text + ", none at " + words.threshold(rules.severe);
  text += ", " + hours(*day.hours_35) + " at " + words.threshold(rules.severe);
  if (*day.hours_38 == 0) return text + ", none at " + words.threshold(rules.extreme);
  return text + ", " + hours(*day.hours_38) + " at " + words.threshold(rules.extreme);
}

}  // namespace antherd::letters
