// Notices: said once, each with the command that notes what it asks for.
#include <algorithm>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

std::string told_at(const Telling& telling, const Words& words) {
  return words.closing(telling.about);
}

std::string tag_of(const FieldStatus* status) {
  return status == nullptr ? "flower not seen" : flower_tag(*status);
}

std::string state_of(const FieldStatus* status) {
  return status == nullptr ? "flower not seen" : flower_state(*status);
}

std::string flowers_of(const FieldStatus* status, const Words& words) {
  return status == nullptr ? "" : flower_paragraph(*status, words);
}

double spread_of(const FieldStatus* status) {
  return status == nullptr ? 1 : status->flower.flower_first_days;
}

/// Both hazards as they stand, so that no notice about one side hides the other.
Section both_sides(const FieldStatus* status) {
  if (status == nullptr) return {"", "", {}, true};
  const Level mildew = status->humid.last ? status->humid.last->level : Level::none;
  return {
      "NOW",
      "Heat today " + level_word(status->heat.today.level) + ", mildew " + level_word(mildew) + ".",
      {},
      true};
}

void window_near(Part& part, const Telling& telling, const FieldStatus* status,
                 const Words& words) {
  const std::string opens =
      telling.day ? words.about(*telling.day, spread_of(status)) : std::string("10 days from now");
  part.lead = "Flower window near";
  part.rest = opens + ", " + tag_of(status);
  part.first =
      part.name + ": " + state_of(status) + ", flowering window opens about " + opens + ".";
  part.tonight =
      "Tonight: bring the water log up to date, and check the station's shield and "
      "power.";
  part.sections = {
      {"WHY",
       "In the window, heat letters count in full: pollen suffers from about " +
           words.threshold(words.heat_rules(telling.subject).severe) +
           ". Sprinklers in the evening feed mildew. Both are watched by the hour.",
       {},
       false},
      {"FLOWER", flowers_of(status, words), {}, true},
      {"LOOK",
       "Twice a week in the cool: buds, then the first yellow anthers. A note of what you see "
       "makes every later date better.",
       {scout_command(telling.subject, "--stage buds"),
        scout_command(telling.subject, "--stage first-anthers")},
       true}};
  part.next = "A letter when the window opens.";
  part.brief = "Check station and water log. Note buds: scout.";
  part.still = "The window was near when this was decided.";
}

void window_opens(Part& part, const Telling& telling, const FieldStatus* status,
                  const Words& words) {
  const CivilDay opened = telling.day.value_or(words.day_of_end(telling.about));
  part.lead = "Flower window opens";
  part.rest = words.past_or_about(opened, spread_of(status)) + ", " + tag_of(status);
  part.first = part.name + ": " + state_of(status) + ", flowering window open from " +
               words.past_or_about(opened, spread_of(status)) + ".";
  part.tonight =
      "Tonight: nothing to switch. In the cool of a morning: look for yellow anthers and "
      "note the date.";
  part.sections = {
      {"FLOWER", flowers_of(status, words), {}, true},
      {"LOOK",
       "Look for yellow anthers and note the date; also a field not yet there is worth a note.",
       {scout_command(telling.subject, "--stage first-anthers --date " + words.iso(words.today())),
        scout_command(telling.subject, "--stage buds")},
       true},
      both_sides(status)};
  part.next = "A letter at once when heat or wet leaves call for it.";
  part.brief = "Look for yellow anthers and note the date.";
  part.still = "The window had opened when this was decided.";
}

void window_closes(Part& part, const Telling& telling, const FieldStatus* status,
                   const Words& words) {
  const double spread = status == nullptr ? 1 : flower_last_days(status->flower);
  const std::string closes = telling.day ? words.about(*telling.day, spread) : "in about 2 days";
  part.lead = "Flower window closes";
  part.rest = closes + ", " + tag_of(status);
  part.first = part.name + ": " + state_of(status) + ", flowering window closes " + closes + ".";
  part.tonight = "Still yellow anthers? Note full-flower and the watch goes on.";
  part.sections = {{"FLOWER", flowers_of(status, words), {}, true},
                   {"LOOK",
                    "In the cool of the morning. If flowers are over, note that instead, with "
                    "--began if this is "
                    "the day.",
                    {scout_command(telling.subject, "--stage full-flower"),
                     scout_command(telling.subject, "--stage flowers-done")},
                    true},
                   both_sides(status)};
  part.next =
      "After it closes heat counts one level lower (seed fill). Mildew is watched until "
      "the seed is at dough.";
  part.brief = "Still yellow anthers? Note full-flower and the watch goes on.";
  part.still = "The window was about to close when this was decided.";
}

void note_held(Part& part, const Telling& telling, const FieldStatus* status, const Words& words) {
  const bool noted = status != nullptr && status->flower.last_note_stage;
  const std::string note =
      (noted ? stage_words(*status->flower.last_note_stage) : std::string("a note")) +
      (telling.day && *telling.day <= words.today() ? " of " + words.day(*telling.day) : "");
  part.lead = "Note held";
  part.rest = note + ", " + told_at(telling, words) + ", " + tag_of(status);
  part.first = part.name + ": " + state_of(status) + ", note held: " + note + ".";
  part.tonight = "Tonight: nothing to switch; a second note settles which of the two is right.";
  part.sections = {
      {"WHY",
       "The note does not fit the warmth since sowing. It may be right: then the sowing date, "
       "the crop type or the station is off. Until a second note agrees with either, the watch "
       "covers both.",
       {},
       false},
      {"FLOWER", flowers_of(status, words), {}, true},
      {"LOOK",
       "Look once more in the cool and note what you see. Check the sowing date in the settings.",
       {scout_command(telling.subject, "--stage first-anthers"),
        scout_command(telling.subject, "--stage full-flower")},
       true}};
  part.next = "The window stays at its widest until the second note.";
  part.brief = "It does not fit the warmth since sowing. Look again and note it.";
  part.still = "The note was still held when this was decided.";
}

void streak(Part& part, const Telling& telling, const FieldStatus* status, const Words& words) {
  const int evenings = status != nullptr && status->humid.streak > 0
                           ? status->humid.streak
                           : static_cast<int>(telling.figure.value_or(3));
  part.lead = "Sprinklers";
  part.rest = std::to_string(evenings) + glue + "evenings in a row by " + told_at(telling, words) +
              ", " + tag_of(status);
  part.first = part.name + ": " + state_of(status) + ", sprinklers " + std::to_string(evenings) +
               glue + "evenings in a row by " + told_at(telling, words) + ".";
  part.tonight =
      status == nullptr ? "Tonight: a night off lets the leaves dry." : tonight_and_mildew(*status);
  part.sections = {
      {"MILDEW",
       "Leaves wet all night, night after night, are how downy mildew starts; drying out in "
       "between holds it back." +
           (status == nullptr ? "" : " " + mildew_side(*status, words)),
       {},
       true},
      status == nullptr ? Section{"HEAT", "Not known.", {}, true} : heat_side(*status, words),
      status == nullptr ? Section{"WATER", "", {}, true} : water_in_humid(*status, words),
      {"LOG",
       "Not so? See what is logged and take back what did not run.",
       {water_command(telling.subject, "--list"), water_command(telling.subject, "--undo NUMBER")},
       true}};
  part.next =
      "A letter at once if the mildew level rises. This notice is not repeated night by "
      "night.";
  part.brief = status == nullptr ? "A night off lets leaves dry." : tonight_in_brief(*status);
  part.still = "The streak stood at " + std::to_string(evenings) + " when this was decided.";
}

void diary_gap(Part& part, const Telling& telling, const FieldStatus* status, const Words& words) {
  const int days = static_cast<int>(telling.figure.value_or(10));
  const std::string length = std::to_string(days) + glue + "days";
  part.lead = "Water log";
  part.rest = "no entry for " + length + " by " + told_at(telling, words) + ", " + tag_of(status);
  part.first =
      part.name + ": " + state_of(status) + ", no entry in the water log for " + length + ".";
  const bool overhead = status == nullptr || waters_leaves(*status);
  part.tonight = std::string("Tonight: enter what ran, if anything did; ") +
                 (overhead ? "mildew is judged by it." : "the water in the soil is counted by it.");
  const std::string day = words.iso(words.today() - std::chrono::days{1});
  const std::string depth = words.desk().units == Units::us ? "0.5 in" : "12 mm";
  part.sections = {
      {"WHY",
       overhead ? "Sprinklers that are not logged wet the leaves all the same: the mildew watch "
                  "would call them dry. If nothing ran, nothing is to be entered."
                : "The water left in the root zone is counted from this log. If nothing ran, "
                  "nothing is to be entered.",
       {},
       true},
      {"NOTE IT",
       "",
       {water_command(telling.subject, "--start \"" + day + " 06:00\" --end \"" + day +
                                           " 08:00\" --depth \"" + depth + "\""),
        water_command(telling.subject, "--list")},
       true},
      both_sides(status)};
  part.next = "Not repeated until the log has had an entry and another gap.";
  part.brief = "Enter what ran: antherd water.";
  part.still = "The log had no newer entry when this was decided.";
}

/// Ten days after Severe heat in flower: whether seeds swell, only a look can tell.
void seed_set(Part& part, const Telling& telling, const FieldStatus* status, const Words& words) {
  const bool known = telling.day && *telling.day <= words.today();
  const std::string heat = "the heat of " + (known ? words.day(*telling.day) : "ten days ago");
  part.lead = "Count seeds";
  part.rest = "after " + heat + ", " + tag_of(status);
  part.first = part.name + ": " + state_of(status) + ", time to count seeds after " + heat + ".";
  part.tonight = "Tonight: nothing to switch; a morning's look in the next four days is enough.";
  const bool exposed = status != nullptr && status->flower.known && status->heat.exposed_share > 0;
  part.sections = {
      {"WHY",
       "That day's heat was Severe inside the flowering window. Whether it did harm no weather "
       "station can tell, and trials disagree; ten to fourteen days later the seeds can. Your "
       "count is kept beside the season's heat: over the years the farm has a record of its own.",
       {},
       false},
      {"COUNT",
       "",
       {},
       false,
       {"1. In the cool of a morning, go to 5 places of the field, away from its edges.",
        "2. At each take 4 heads that flowered in that heat, and from the middle of each head one "
        "cluster: 20 in all.",
        "3. Rub the cluster open in the hand. A swelling seed, watery to milky, counts; empty "
        "husks do not.",
        "4. Note how many of the 20 hold one. A full count is worth as much as a poor one."}},
      {"NOTE IT", "", {scout_command(telling.subject, "--seed-set 14/20")}, true},
      {"HEAT", exposed ? "Exposed so far: " + exposed_words(*status, words) + "." : "", {}, true},
      both_sides(status)};
  part.next = "Asked once for this heat. The review shows the count.";
  part.brief = "Open 20 clusters at 5 places: how many hold a seed? antherd scout --seed-set.";
  part.still = "The count was due when this was decided.";
}

void season_end(Part& part, const Telling& telling, const Words& words) {
  const bool ripe = telling.key == "ripe";
  part.lead = "Not watched";
  part.rest =
      std::string(ripe ? "ripe by the estimate" : "sown long ago") + ", " + told_at(telling, words);
  part.first = part.name + ": no longer watched, " +
               (ripe ? "ripe by the estimate" : "more than 240 days from sowing") + ".";
  part.tonight =
      "Tonight: nothing to decide. No letter about heat or mildew comes for this field any more.";
  part.sections = {
      {"WHY",
       ripe ? "The warmth since sowing says ripe. If it still flowers, note full-flower; if "
              "the sowing date is wrong, correct it."
            : "No quinoa stands that long: the sowing date is an old one.",
       ripe ? std::vector<std::string>{scout_command(telling.subject, "--stage full-flower")}
            : std::vector<std::string>{},
       true},
      {"NEW SOWING", "Give the new sowing date in the settings, then:", {"antherd check"}, false}};
  part.next = "The weekly review goes on naming this field as not watched.";
  part.brief = "Give the new sowing date.";
  part.still = "The field was not watched when this was decided.";
}

}  // namespace

Part notice_part(const Telling& telling, const Words& words) {
  const FieldStatus* status = status_of(words.desk(), telling.subject);
  Part part;
  part.name = plain(telling.subject);
  switch (telling.kind) {
    case Kind::sprinkler_streak:
      streak(part, telling, status, words);
      break;
    case Kind::diary_gap:
      diary_gap(part, telling, status, words);
      break;
    case Kind::season:
      season_end(part, telling, words);
      break;
    default:
      if (telling.key == "window-near") {
        window_near(part, telling, status, words);
      } else if (telling.key == "window-closes") {
        window_closes(part, telling, status, words);
      } else if (telling.key == "seed-set") {
        seed_set(part, telling, status, words);
      } else if (telling.key.starts_with("note-held")) {
        note_held(part, telling, status, words);
      } else {
        window_opens(part, telling, status, words);
      }
  }
  return part;
}

}  // namespace antherd::letters
