// Letters about mildew weather: days in a row without drying out, often the field's own sprinklers.
#include <algorithm>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

using season::HumidDay;

bool eased(const Telling& telling) {
  return telling.saying == Saying::eased || telling.saying == Saying::ended;
}

/// "score 3.5 by 6 pm".
std::string figure_and_time(const Telling& telling, const Words& words) {
  const std::string by = "by " + words.closing(telling.about);
  return telling.figure ? "score " + number(*telling.figure, 1) + " " + by : by;
}

/// One line a day: what the night brought and whether the day dried.
std::string day_words(const HumidDay& day, const Words& words) {
  const std::string name = words.day(day.date) + ": ";
  if (!day.judged) return name + "not judged, data missing";
  const bool favourable = day.infection.value_or(0) >= 1;
  std::string text = name;
  if (!favourable) {
    text += "not wet enough for long enough";
  } else if (day.water.value_or(false)) {
    text += day.night_set ? "wet from sprinklers" : "wet from rain or watering";
  } else {
    text += "wet from dew or fog";
  }
  text += day.dry_out.value_or(false) ? ", dried by day" : ", did not dry out";
  return text;
}

int without_dry_out(const FieldStatus& status) {
  int days = 0;
  for (const HumidDay& day : status.humid.last_five) {
    days = day.judged && !day.dry_out.value_or(false) ? days + 1 : 0;
  }
  return days;
}

/// Why the level stands where the score alone would not put it (science §8).
std::string besides_the_score(const Telling& telling, const FieldStatus& status) {
  const double r = telling.figure.value_or(0);
  const double needed[] = {0, 2, 3, 4.5};
  if (r >= needed[static_cast<int>(telling.level)]) return "";
  if (telling.level == Level::moderate && status.humid.night_sets_last_five >= 4) {
    return "Sprinklers before 4 of 5 mornings are enough for Moderate, whatever was measured.";
  }
  if (telling.level == Level::moderate && without_dry_out(status) >= 3) {
    return "Three days without drying out are enough for Moderate.";
  }
  if (!status.humid.last || status.humid.last->own_level >= telling.level) return "";
  return "The level falls one step for each day that dries out, so it stands above its score.";
}

std::string mildew_so_far(const Telling& telling, const FieldStatus& status, const Words& words) {
  std::vector<std::string> said;
  if (telling.saying == Saying::reminder) {
    said.push_back("A reminder: this warning has been open since " + words.when(telling.start) +
                   ".");
  } else {
    said.push_back("Since " + words.when(telling.start) + ".");
  }
  if (telling.figure) {
    said.push_back("The score of the last 5 days is " + number(*telling.figure, 1) +
                   " (from 2 Moderate, from 3 Severe, from 4.5 Extreme, with further "
                   "conditions).");
  }
  said.push_back(besides_the_score(telling, status));
  const int wet = without_dry_out(status);
  if (wet > 0) said.push_back(count(wet, "day") + " in a row without drying out.");
  if (status.humid.night_sets_last_five > 0) {
    said.push_back("Sprinklers ran before " + std::to_string(status.humid.night_sets_last_five) +
                   " of the last 5 mornings.");
  } else if (waters_leaves(status)) {
    said.push_back("No night sets are logged before the last 5 mornings.");
  }
  if (status.humid.disease_seen) {
    said.push_back("Mildew is noted in this field: dew and fog count more.");
  }
  return join(said);
}

std::vector<std::string> days_listed(const FieldStatus& status, const Words& words) {
  std::vector<std::string> lines;
  for (const HumidDay& day : status.humid.last_five) lines.push_back(day_words(day, words));
  return lines;
}

const char* const harm_in_general =
    "Somewhere from little to heavy. The station sees wet leaves, not mildew; whether any is there "
    "only you can see.";

std::string harm(const FieldStatus& status) {
  const bool halved =
      status.humid.last && status.humid.last->score < status.humid.last->score_before_halving;
  return halved ? "A hot day before halved the last score." : "";
}

/// The first line has told a further field's flowers already, where they are known.
Section flower_in_short(const FieldStatus& status, const Words& words) {
  Section section = flower_section(status, words);
  section.own = !status.flower.known;
  return section;
}

Section look(const Telling& telling, const FieldStatus& status, const Words& words) {
  Section section{"LOOK", "", {}, false};
  std::string text =
      "In the cool of the morning, low in the canopy where it dries last: pale or "
      "pinkish blotches on top of leaves, grey-violet fuzz underneath. Note what "
      "you see, also a no.";
  if (telling.peak >= Level::severe || telling.level >= Level::severe) {
    const CivilDay base = words.day_of_end(telling.about);
    const CivilDay week = base + std::chrono::days{7};
    const CivilDay two = base + std::chrono::days{14};
    std::vector<std::string> ahead;
    if (week > words.today()) ahead.push_back(words.about(week, 2));
    if (two > words.today()) ahead.push_back(words.about(two, 2));
    if (!ahead.empty()) {
      text += " What starts now would show about day 7 and day 14: look again " + list(ahead) + ".";
    }
  }
  section.text = text;
  section.commands = {scout_command(status.field, "--disease yes"),
                      scout_command(status.field, "--disease no")};
  return section;
}

Section sure(const FieldStatus& status, const Words& words) {
  return {"SURE?",
          data_paragraph(status, words, false),
          {},
          true,
          {},
          "No wetness figures are published for this mildew: the ones used are surrogates from its "
          "relatives."};
}

std::string tonight(const FieldStatus& status) {
  if (status.irrigation == field::Method::none && status.humid.night_sets_last_five == 0) {
    return "Tonight: no irrigation here to decide on; look for mildew in the morning.";
  }
  return tonight_and_mildew(status);
}

std::string next_words(const Telling& telling, const Words& words) {
  if (eased(telling))
    return "This warning is closed. New wet days open a new one and a new letter.";
  const std::string reminder =
      "a reminder after " + duration(words.desk().remind_after) + " while it lasts";
  if (telling.level == Level::extreme) {
    return "It cannot rise further. Next: " + reminder + ", and word when it eases.";
  }
  return "Wet days are judged once a day, early in the evening. A letter at once if it rises "
         "above " +
         level_word(telling.level) + "; " + reminder +
         (telling.peak >= Level::severe ? "; word when it eases." : ".");
}

std::string decided_still(const Telling& telling, const Words& words) {
  const std::string at =
      words.day(words.day_of_end(telling.about)) + " " + words.clock(telling.about);
  if (eased(telling)) return "When this was decided (" + at + ") the wet spell had ended.";
  return "When this was decided (" + at + ") the mildew warning stood at " +
         level_word(telling.level) + " and was open.";
}

void open_sections(Part& part, const Telling& telling, const FieldStatus& status,
                   const Words& words) {
  part.sections.push_back({"MILDEW", mildew_so_far(telling, status, words), {}, true});
  part.sections.push_back({"DAYS", "", {}, false, days_listed(status, words)});
  part.sections.push_back(flower_in_short(status, words));
  part.sections.push_back({"HARM", harm(status), {}, true, {}, harm_in_general});
  part.sections.push_back(heat_side(status, words));
  part.sections.push_back(water_in_humid(status, words));
  part.sections.push_back(look(telling, status, words));
  part.sections.push_back(sure(status, words));
}

void eased_sections(Part& part, const Telling& telling, const FieldStatus& status,
                    const Words& words) {
  part.sections.push_back({"MILDEW",
                           "The wet spell that began " + words.when(telling.start) + " reached " +
                               level_word(telling.peak) +
                               " and has ended. What may have started while leaves were "
                               "wet is not undone and can show for two weeks.",
                           {},
                           true,
                           days_listed(status, words)});
  part.sections.push_back(flower_in_short(status, words));
  part.sections.push_back(heat_side(status, words));
  part.sections.push_back(water_in_humid(status, words));
  part.sections.push_back(look(telling, status, words));
  part.sections.push_back(sure(status, words));
}

Part unknown_field(const Telling& telling, const Words& words) {
  Part part;
  part.rest = figure_and_time(telling, words) + ", flower not seen";
  part.first = plain(telling.subject) + ": flower not seen, mildew " + part.rest + ".";
  part.tonight = "Tonight: overhead water would keep leaves wet until morning.";
  part.sections = {{"HEAT", "Not known: this field is not in the settings now.", {}, true}};
  part.brief = "Estimate: look before you act.";
  return part;
}

}  // namespace

Part humid_part(const Telling& telling, const Words& words) {
  const FieldStatus* status = status_of(words.desk(), telling.subject);
  Part part;
  if (status == nullptr) {
    part = unknown_field(telling, words);
  } else {
    const std::string what =
        eased(telling) ? "by " + words.closing(telling.about) : figure_and_time(telling, words);
    part.rest = what + ", " + flower_tag(*status);
    part.first = plain(telling.subject) + ": " + flower_state(*status) + ", mildew " +
                 (eased(telling) ? "eased " + what : level_word(telling.level) + ", " + what) + ".";
    part.tonight = tonight(*status);
    if (eased(telling)) {
      eased_sections(part, telling, *status, words);
    } else {
      open_sections(part, telling, *status, words);
    }
    const season::HeatDay& today = status->heat.today;
    part.brief = tonight_in_brief(*status) + " Heat today " + level_word(today.level) +
                 ". Look in the morning.";
  }
  part.lead = eased(telling) ? "Mildew eased from " + level_word(telling.peak)
              : telling.saying == Saying::reminder
                  ? "Mildew still " + severity_word(telling.severity)
                  : "Mildew " + severity_word(telling.severity);
  part.name = plain(telling.subject);
  part.next = next_words(telling, words);
  part.still = decided_still(telling, words);
  return part;
}

}  // namespace antherd::letters
