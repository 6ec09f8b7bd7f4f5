// Letters about heat at flowering: opened, raised, reminder, eased, and the morning outlook.
#include <algorithm>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

using season::HeatDay;

/// "97 °F by 4 pm".
std::string figure_and_time(const Telling& telling, const Words& words) {
  const std::string by = "by " + words.closing(telling.about);
  if (!telling.figure) return by;
  return words.temperature(Celsius(*telling.figure), words.heat_rules(telling.subject)) + " " + by;
}

/// What carried the day to its level: the first of science §6's rules that it meets.
std::string reason(const HeatDay& day, const FieldStatus& status, const Words& words) {
  const risk::HeatRules& rules = words.heat_rules(status.field);
  const double sum = day.degree_hours.value_or(0);
  const bool today = &day == &status.heat.today;
  const std::string added = "heat above " + words.threshold(rules.sustained) + " added up over ";
  switch (day.weather_level) {
    case Level::none:
      return "";
    case Level::moderate:
      if (day.longest_run.value_or(0) >= 3) {
        return std::to_string(*day.longest_run) + glue + "h in a row at " +
               words.threshold(rules.sustained) + " or more";
      }
      return added + "the day";
    case Level::severe:
      if (day.hours_35.value_or(0) >= 1) return "an hour at " + words.threshold(rules.severe);
      if (sum >= 20) return added + "the day";
      return today ? added + "3 days" : "";
    case Level::extreme:
      if (day.hours_38.value_or(0) >= 1) return "an hour at " + words.threshold(rules.extreme);
      if (sum >= 50) return added + "the day";
      return today ? added + "5 days" : "";
  }
  return "";
}

std::string shoulder_words(const HeatDay& day, const FieldStatus& status) {
  if (!status.flower.known || day.weather_level == day.level) return "";
  const std::string tag = flower_tag(status);
  if (tag != "before flower" && tag != "seed fill") return "";
  return "In flower this weather would be " + level_word(day.weather_level) + "; the field is at " +
         (tag == "seed fill" ? tag : "the days before flower") + ", so it counts one level lower.";
}

std::string yesterday_words(const FieldStatus& status, const Words& words, CivilDay told) {
  if (!status.heat.yesterday || status.heat.yesterday->date == told) return "";
  const HeatDay& day = *status.heat.yesterday;
  if (!day.t_max) return "Yesterday was not measured.";
  return "Yesterday reached " + words.temperature(*day.t_max, words.heat_rules(status.field)) + ".";
}

std::string heat_so_far(const Telling& telling, const FieldStatus& status, const Words& words) {
  const CivilDay told = words.day_of_end(telling.about);
  const HeatDay* day = heat_day_at(status, told);
  std::vector<std::string> said;
  if (telling.saying == Saying::reminder) {
    said.push_back("A reminder: this warning has been open since " + words.when(telling.start) +
                   ".");
  } else if (words.calendar().day_of(telling.start) != told) {
    said.push_back("Open since " + words.when(telling.start) + ".");
  }
  if (day != nullptr) {
    const std::string since = day->first_hot_hour && day->hours_32.value_or(0) > 0
                                  ? "Hot since " + words.clock(Instant(*day->first_hot_hour)) + ": "
                                  : (told == words.today() ? "Today: " : words.day(told) + ": ");
    said.push_back(since + hot_hours(*day, words.heat_rules(status.field), words) + ".");
    if (day->t_max && day->t_max_hour) {
      said.push_back("Hottest hour " +
                     words.temperature(*day->t_max, words.heat_rules(status.field)) + ", from " +
                     words.clock(Instant(*day->t_max_hour)) + ".");
    }
    const std::string why = reason(*day, status, words);
    if (!why.empty()) {
      said.push_back("What makes it " + level_word(day->weather_level) + ": " + why + ".");
    }
    said.push_back(shoulder_words(*day, status));
    if (day->level < telling.level && telling.saying == Saying::reminder) {
      said.push_back("Today by itself is " + level_word(day->level) +
                     " so far; the warning falls at the day's end.");
    }
  }
  said.push_back(yesterday_words(status, words, told));
  return join(said);
}

std::string one_degree_away(const Telling& telling, const FieldStatus& status, const Words& words) {
  if (words.day_of_end(telling.about) != status.heat.today.date) return "";
  const Level now = status.heat.today.level;
  std::vector<std::string> said;
  if (status.heat.if_cooler < now) {
    said.push_back("Had the air been " + words.one_degree() + " cooler, today would be " +
                   level_word(status.heat.if_cooler));
  } else if (status.data.shield_may_read_high && now > Level::none) {
    said.push_back("Had the air been " + words.one_degree() + " cooler, today would still be " +
                   level_word(now));
  }
  if (status.heat.if_hotter > now) {
    said.push_back(std::string(said.empty() ? "Had the air been " + words.one_degree() : "") +
                   (said.empty() ? " hotter, today would be " : "; hotter by as much, ") +
                   level_word(status.heat.if_hotter));
  }
  std::string text;
  for (const std::string& part : said) text += part;
  return text.empty() ? "" : text + ".";
}

Section harm(const FieldStatus& status, const Words& words) {
  std::vector<std::string> said;
  if (status.flower.known && status.heat.exposed_share > 0) {
    const bool today = status.heat.today.hours_35.value_or(0) > 0;
    said.push_back(std::string(today ? "Exposed so far, today counted: " : "Exposed so far: ") +
                   exposed_words(status, words) + ".");
  }
  if (status.flower.known && status.heat.today.flower_share > 0) {
    said.push_back("Opened today: " + in_hundred(status.heat.today.flower_share) +
                   " of the season's flowers.");
  }
  return {"HARM",
          join(said),
          {},
          true,
          {},
          "What heat does is somewhere from little to heavy; trials disagree, also between "
          "varieties."};
}

Section look(const FieldStatus& status) {
  Section section{"LOOK", "", {}, false};
  if (flower_tag(status) == "before flower") {
    section.text = "Next morning before 9 am, in the cool: are yellow anthers out? Note the date.";
    section.commands = {scout_command(status.field, "--stage first-anthers")};
    return section;
  }
  if (flower_tag(status) == "seed fill") {
    section.text =
        "In the cool of a morning, open clusters on 20 heads: how many hold a swelling "
        "seed? Note it.";
    section.commands = {scout_command(status.field, "--seed-set 14/20")};
    return section;
  }
  section.text =
      "Next morning before 9 am, in the cool: are yellow anthers out, are they plump or "
      "dried up? In 10 to 14 days, open clusters on 20 heads: how many hold a swelling "
      "seed? Note both.";
  section.commands = {scout_command(status.field, seen_in_flower(status) ? "--stage full-flower"
                                                                         : "--stage first-anthers"),
                      scout_command(status.field, "--seed-set 14/20")};
  return section;
}

std::string next_words(const Telling& telling, const Words& words) {
  if (telling.saying == Saying::eased || telling.saying == Saying::ended) {
    return "This warning is closed. New heat opens a new one and a new letter.";
  }
  const std::string reminder =
      "a reminder after " + duration(words.desk().remind_after) + " while it lasts";
  if (telling.level == Level::extreme) {
    return "It cannot rise further. Next: " + reminder + ", and word when it eases.";
  }
  return "A letter at once if it rises above " + level_word(telling.level) + "; " + reminder +
         (telling.peak >= Level::severe ? "; word when it eases." : ".");
}

std::string decided_still(const Telling& telling, const Words& words) {
  const std::string at =
      words.day(words.day_of_end(telling.about)) + " " + words.clock(telling.about);
  if (telling.saying == Saying::eased || telling.saying == Saying::ended) {
    return "When this was decided (" + at + ") the heat had eased.";
  }
  return "When this was decided (" + at + ") the heat warning stood at " +
         level_word(telling.level) + " and was open.";
}

void eased_sections(Part& part, const Telling& telling, const FieldStatus& status,
                    const Words& words) {
  std::vector<std::string> harm_said{
      "Easing does not undo what open flowers met: somewhere from "
      "little to heavy; trials disagree."};
  if (status.flower.known && status.heat.exposed_share > 0) {
    harm_said.push_back("Exposed so far: " + exposed_words(status, words) + " (" +
                        count(status.heat.hot_days, "day") + ").");
  }
  part.sections = {
      {"HEAT",
       "It began " + words.when(telling.start) + " and reached " + level_word(telling.peak) + ". " +
           yesterday_words(status, words, CivilDay{}),
       {},
       true},
      flower_section(status, words),
      {"HARM", join(harm_said), {}, true},
      {"MILDEW", mildew_side(status, words), {}, true},
      {"WATER", water_in_heat(status, words), {}, true},
      look(status),
      {"SURE?", data_paragraph(status, words, true), {}, true}};
}

Part unknown_field(const Telling& telling, const Words& words) {
  Part part;
  part.first =
      plain(telling.subject) + ": flower not seen, " + figure_and_time(telling, words) + ".";
  part.tonight = "Tonight: heat by itself does not call for water; overhead water feeds mildew.";
  part.rest = figure_and_time(telling, words) + ", flower not seen";
  part.sections = {{"MILDEW", "Not known: this field is not in the settings now.", {}, true}};
  part.brief = "Estimate: look before you act.";
  return part;
}

}  // namespace

Part heat_part(const Telling& telling, const Words& words) {
  const FieldStatus* status = status_of(words.desk(), telling.subject);
  const bool eased = telling.saying == Saying::eased || telling.saying == Saying::ended;
  Part part;
  if (status == nullptr) {
    part = unknown_field(telling, words);
  } else if (eased) {
    part.rest = "by " + words.closing(telling.about) + ", " + flower_tag(*status);
    part.first = plain(telling.subject) + ": " + flower_state(*status) + ", heat eased by " +
                 words.closing(telling.about) + ".";
    part.tonight = tonight_and_mildew(*status);
    eased_sections(part, telling, *status, words);
    part.brief = "What open flowers met is not undone. " + tonight_in_brief(*status);
  } else {
    part.rest = figure_and_time(telling, words) + ", " + flower_tag(*status);
    part.first = plain(telling.subject) + ": " + flower_state(*status) + ", " +
                 figure_and_time(telling, words) + ". Heat " +
                 (telling.saying == Saying::reminder ? "still " : "") + level_word(telling.level) +
                 ".";
    part.tonight = tonight_and_mildew(*status);
    part.sections = {
        {"HEAT", heat_so_far(telling, *status, words), {}, true},
        flower_section(*status, words),
        harm(*status, words),
        {"MILDEW", mildew_side(*status, words), {}, true},
        {"WATER", water_in_heat(*status, words), {}, true},
        look(*status),
        {"SURE?",
         join({data_paragraph(*status, words, true), one_degree_away(telling, *status, words)}),
         {},
         true,
         {},
         "The limits are farm experience and judgement, not a law of the plant."}};
    part.brief = tonight_in_brief(*status) + " Look in the cool.";
  }
  part.lead = eased                                ? "Heat eased from " + level_word(telling.peak)
              : telling.saying == Saying::reminder ? "Heat still " + severity_word(telling.severity)
                                                   : "Heat " + severity_word(telling.severity);
  part.name = plain(telling.subject);
  part.next = next_words(telling, words);
  part.still = decided_still(telling, words);
  return part;
}

Part heat_ahead_part(const Telling& telling, const Words& words) {
  const FieldStatus* status = status_of(words.desk(), telling.subject);
  Part part;
  if (status == nullptr) part = unknown_field(telling, words);
  const std::string chance = telling.certainty == alerts::Certainty::likely ? "likely" : "possible";
  const std::string expected =
      telling.figure ? "about " + words.temperature(Celsius(*telling.figure)) + " " + chance
                     : "heat " + chance;
  const std::string told = "told " + words.closing(telling.about);
  part.lead = "Heat ahead " + severity_word(telling.severity);
  part.name = plain(telling.subject);
  if (status != nullptr) {
    part.rest = expected + ", " + told + ", " + flower_tag(*status);
    part.first =
        part.name + ": " + flower_state(*status) + ", " + expected + " today, " + told + ".";
    part.tonight = tonight_and_mildew(*status);
    part.sections = {{"HEAT",
                      "Expected from this station's own record of mornings and afternoons, not "
                      "from a forecast. The afternoon may turn out cooler or hotter.",
                      {},
                      true},
                     flower_section(*status, words),
                     {"MILDEW", mildew_side(*status, words), {}, true},
                     {"WATER", water_in_heat(*status, words), {}, true},
                     look(*status),
                     {"SURE?", data_paragraph(*status, words, true), {}, true}};
    part.brief = tonight_in_brief(*status);
  }
  part.next = "A letter at once if the heat comes. An outlook comes at most once a day.";
  part.still = "This outlook was for " + words.day(words.day_of_end(telling.about)) + ".";
  return part;
}

}  // namespace antherd::letters
