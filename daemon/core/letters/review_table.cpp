// The review's day table, drawn as aligned plain text. A dash is a value nobody measured.
#include <algorithm>
#include <map>

#include "core/letters/review.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

constexpr std::size_t long_period = 31;  // days; a longer table names only those that matter

struct Row {
  std::vector<std::string> cells;
};

const std::vector<std::size_t> widths{10, 5, 5, 4, 4, 4, 9, 5, 5, 9, 7};

/// The first column to the left, the others to the right; cells never touch.
std::string drawn(const Row& row) {
  std::string line;
  for (std::size_t i = 0; i < row.cells.size(); ++i) {
    const std::string cell = unglued(row.cells[i]);
    const std::size_t room = widths[i] > columns(cell) ? widths[i] - columns(cell) : 0;
    line += i == 0 ? cell + std::string(room, ' ') : std::string(room, ' ') + cell;
    if (i + 1 < row.cells.size()) line += ' ';
  }
  return line + "\n";
}

/// What nobody saw is a dash, not a dot; a level that was held through a gap stands.
std::string level_cell(Level level, bool seen) {
  if (level != Level::none) return level_word(level);
  return seen ? "." : "-";
}

std::string count_cell(const std::optional<int>& n) { return n ? std::to_string(*n) : "-"; }

Row heading(const risk::HeatRules& rules, const Words& words) {
  const auto hours = [&](Celsius t) { return "h" + words.threshold_number(t); };
  return {{"day", "max", "min", hours(rules.sustained), hours(rules.severe), hours(rules.extreme),
           "heat", "wet", "score", "mildew", "dried"}};
}

std::string padded_day(CivilDay day, const Words& words) {
  std::string text = unglued(words.day(day));
  if (columns(text) < 10) text.insert(3, " ");
  return text;
}

Row row_of(const season::HeatDay* heat, const season::HumidDay* humid, CivilDay date,
           const FieldReview& field, const risk::HeatRules& rules, const Words& words) {
  Row row{{padded_day(date, words)}};
  const auto coolest = field.coolest.find(date);
  row.cells.push_back(heat != nullptr && heat->t_max ? words.temperature_number(*heat->t_max, rules)
                                                     : "-");
  row.cells.push_back(
      coolest != field.coolest.end() ? words.temperature_number(coolest->second, rules) : "-");
  for (const auto hours :
       {&season::HeatDay::hours_32, &season::HeatDay::hours_35, &season::HeatDay::hours_38}) {
    row.cells.push_back(heat != nullptr ? count_cell(heat->*hours) : "-");
  }
  row.cells.push_back(heat != nullptr ? level_cell(heat->level, heat->t_max.has_value()) : "-");
  if (humid == nullptr || !humid->judged) {
    row.cells.insert(row.cells.end(),
                     {"-", "-", humid == nullptr ? "-" : level_cell(humid->level, false), "-"});
    return row;
  }
  const bool water = humid->water.value_or(false);
  row.cells.push_back(humid->infection ? number(*humid->infection, 1) + (water ? "w" : "") : "-");
  row.cells.push_back(number(humid->score, 1));
  row.cells.push_back(level_cell(humid->level, true));
  row.cells.push_back(!humid->dry_out ? "-" : *humid->dry_out ? "yes" : "no");
  return row;
}

bool matters(const season::HeatDay* heat, const season::HumidDay* humid) {
  if (heat == nullptr || humid == nullptr || !humid->judged || !heat->t_max) return true;
  return heat->level != Level::none || heat->hours_32.value_or(1) > 0 ||
         humid->level != Level::none || humid->score > 0;
}

std::string legend(const risk::HeatRules& rules, const Words& words) {
  return "max, min: hottest and coolest hour, " + words.unit() + ". h" +
         words.threshold_number(rules.sustained) + ", h" + words.threshold_number(rules.severe) +
         ", h" + words.threshold_number(rules.extreme) + ": hours at " +
         words.threshold(rules.sustained) + ", " + words.threshold(rules.severe) + ", " +
         words.threshold(rules.extreme) +
         " or more. wet: hours of wet leaves against those that mildew needs (1.0 is enough), w "
         "with water. dried: 4 dry hours between 10 am and 6 pm by the sun. A dot is below "
         "Moderate, a dash is not measured.";
}

}  // namespace

std::string day_table(const FieldReview& field, const Words& words) {
  const risk::HeatRules& rules = words.heat_rules(field.status.field);
  std::map<CivilDay, std::pair<const season::HeatDay*, const season::HumidDay*>> days;
  for (const season::HeatDay& day : field.days) days[day.date].first = &day;
  for (const season::HumidDay& day : field.humid_days) days[day.date].second = &day;
  if (days.empty()) return "No day of this field lies in this time.\n";
  const bool short_form = days.size() > long_period;
  std::string rows;
  int skipped = 0;
  for (const auto& [date, both] : days) {
    if (short_form && !matters(both.first, both.second)) {
      ++skipped;
      continue;
    }
    rows += drawn(row_of(both.first, both.second, date, field, rules, words));
  }
  std::string text = rows.empty() ? "" : drawn(heading(rules, words)) + rows;
  if (skipped > 0) {
    text += paragraph(count(skipped, "further day") + " below " + words.threshold(rules.sustained) +
                      " and without enough wet leaves for mildew.");
  }
  return text + (rows.empty() ? "" : paragraph(legend(rules, words)));
}

}  // namespace antherd::letters
