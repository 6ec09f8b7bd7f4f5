// What is known of a field's flowers, in words. "In flower" is said only when somebody saw it.
#include <algorithm>
#include <cmath>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

using season::FlowerStatus;
using SeasonPart = season::Part;
using season::Watch;

std::string note_words(const FlowerStatus& flower, const Words& words) {
  if (!flower.last_note || !flower.last_note_stage) {
    return "Nobody has noted flowers here yet: this is an estimate from the warmth since sowing.";
  }
  const std::string note =
      stage_words(*flower.last_note_stage) + " on " + words.day(*flower.last_note);
  if (flower.note_held) {
    const std::string without =
        window_range(flower.without_note_first, flower.without_note_last, flower, words);
    const std::string with =
        window_range(flower.with_note_first, flower.with_note_last, flower, words);
    return "Your note (" + note + ") does not fit the warmth since sowing." +
           (without.empty() || with.empty()
                ? std::string()
                : " Without it the window runs " + without + "; with it " + with + ".") +
           " Until a second note agrees with one of the two, both are watched.";
  }
  return "Your last note: " + note + ".";
}

/// Since when the window is open and until when, or when it will be.
std::string window_dates(const FlowerStatus& flower, const Words& words) {
  std::vector<std::string> parts;
  if (flower.window_first) {
    const bool past = *flower.window_first <= words.today();
    parts.push_back((past ? "open since " : "opens ") +
                    words.past_or_about(*flower.window_first, flower.flower_first_days));
  }
  if (flower.window_last) {
    const bool past = *flower.window_last < words.today();
    parts.push_back((past ? "closed " : "closes ") +
                    (past ? words.day(*flower.window_last)
                          : words.about(*flower.window_last, flower_last_days(flower))));
  }
  std::string text;
  for (const std::string& part : parts) text += (text.empty() ? "" : ", ") + part;
  return text;
}

std::string window_sentence(const FlowerStatus& flower, const Words& words) {
  const std::string dates = window_dates(flower, words);
  if (!flower.day_of_window || wide_window(flower)) {
    return "The field is inside its flowering window" + (dates.empty() ? "" : ": " + dates) + ".";
  }
  std::string text = "Day" + std::string(1, glue) + std::to_string(*flower.day_of_window);
  if (flower.days_in_window) {
    text += " of about" + std::string(1, glue) + std::to_string(*flower.days_in_window);
  }
  return text + " of the flowering window" + (dates.empty() ? "" : ": " + dates) + ".";
}

std::string odds(const FlowerStatus& flower) {
  return "Chance that it is in flower now: " + in_ten(flower.p_flower) + ".";
}

std::string doubts(const FlowerStatus& flower) {
  std::vector<std::string> said;
  if (flower.implausible) {
    said.push_back(
        "The estimate puts first anthers unusually early or late: check the sowing date "
        "or the station.");
  }
  if (flower.filled_share >= 0.005) {
    said.push_back(capital(in_hundred(flower.filled_share)) +
                   " hours since sowing were not seen and are filled in from neighbouring days.");
  }
  return join(said);
}

std::string first_anthers_estimate(const FlowerStatus& flower, const Words& words) {
  if (!flower.flower_first) {
    return "First anthers: not yet known; about " +
           number(std::max(0.0, flower.needed_first_anthers - flower.thermal_time), 0) + glue +
           "°C·d of warmth still to come.";
  }
  const bool past = *flower.flower_first <= words.today();
  return std::string(past ? "First anthers were due about " : "First anthers about ") +
         words.about(*flower.flower_first, flower.flower_first_days) + ".";
}

/// Why the window is longer than flowers last, and what narrows it.
std::string wide(const FlowerStatus& flower, const Words& words) {
  if (!wide_window(flower) || flower.scouted) return "";
  return first_anthers_estimate(flower, words) +
         " The window is wide because the estimate alone can be off by that much to either side: "
         "one note of first anthers narrows it.";
}

}  // namespace

bool wide_window(const FlowerStatus& flower) {
  constexpr int longest_flowering = 35;  // days
  return flower.days_in_window.value_or(0) > longest_flowering;
}

std::string window_range(const std::optional<CivilDay>& first, const std::optional<CivilDay>& last,
                         const FlowerStatus& flower, const Words& words) {
  if (!first || !last) return "";
  return words.past_or_about(*first, flower.flower_first_days) + " to " +
         words.past_or_about(*last, flower_last_days(flower));
}

std::string window_words(const FlowerStatus& flower, const Words& words) {
  if (!flower.known) return "not known";
  if (flower.note_held) {
    const std::string without =
        window_range(flower.without_note_first, flower.without_note_last, flower, words);
    const std::string with =
        window_range(flower.with_note_first, flower.with_note_last, flower, words);
    if (!without.empty() && !with.empty())
      return without + " without the note, " + with + " with it";
  }
  const std::string range = window_range(flower.window_first, flower.window_last, flower, words);
  if (range.empty()) return "not yet known";
  if (!flower.flower_first) return range;
  return range + ", first anthers about " +
         words.about(*flower.flower_first, flower.flower_first_days);
}

double flower_last_days(const FlowerStatus& flower) {
  if (!flower.flower_first || !flower.flower_last) return flower.flower_first_days;
  const auto length = static_cast<double>((*flower.flower_last - *flower.flower_first).count());
  return std::hypot(flower.flower_first_days, 0.25 * length);
}

bool seen_in_flower(const FieldStatus& status) {
  const FlowerStatus& flower = status.flower;
  return status.watch == Watch::watched && flower.scouted && flower.last_note_stage &&
         *flower.last_note_stage >= field::stage::first_anthers &&
         *flower.last_note_stage < field::stage::flowers_done && flower.part == SeasonPart::window;
}

std::string flower_tag(const FieldStatus& status) {
  if (status.watch != Watch::watched) return "not watched";
  if (seen_in_flower(status)) return "in flower";
  if (status.flower.known) {
    const FlowerStatus& flower = status.flower;
    const bool noted_over = flower.scouted && flower.last_note_stage &&
                            *flower.last_note_stage >= field::stage::flowers_done;
    if (flower.part == SeasonPart::window && noted_over) return "past flower";
    if (status.flower.part == SeasonPart::shoulder_before) return "before flower";
    if (status.flower.part == SeasonPart::shoulder_after) return "seed fill";
    if (status.flower.part == SeasonPart::after) return "past flower";
  }
  return "flower not seen";
}

std::string flower_state(const FieldStatus& status) {
  if (status.watch == Watch::watched && !status.flower.known) return "flowering not known";
  return flower_tag(status);
}

Section flower_section(const FieldStatus& status, const Words& words) {
  Section section{"FLOWER", flower_paragraph(status, words), {}, true, {}};
  if (status.watch == Watch::watched && !status.flower.known) {
    section.commands = {scout_command(status.field, "--stage first-anthers")};
  }
  return section;
}

std::string flower_paragraph(const FieldStatus& status, const Words& words) {
  const FlowerStatus& flower = status.flower;
  if (status.watch != Watch::watched) return "The field is not watched now.";
  if (!flower.known) {
    return "Flowering not known: too much of the season went unseen, and no note of buds or "
           "flowers is in. The field is watched as if it might be in flower. One note settles it.";
  }
  std::vector<std::string> said;
  switch (flower.part) {
    case SeasonPart::before:
      said = {"Not near flower yet by the estimate.", first_anthers_estimate(flower, words),
              note_words(flower, words)};
      break;
    case SeasonPart::shoulder_before:
      said = {
          "Just before flower: pollen is being formed. Heat counts one level lower than in "
          "flower.",
          first_anthers_estimate(flower, words), note_words(flower, words)};
      break;
    case SeasonPart::window:
      said = {window_sentence(flower, words), note_words(flower, words),
              seen_in_flower(status) ? "" : odds(flower), wide(flower, words)};
      break;
    case SeasonPart::shoulder_after:
      said = {
          "Past its flowering window, at seed fill. Heat counts one level lower than in "
          "flower.",
          note_words(flower, words)};
      break;
    case SeasonPart::after:
      said = {"Past flower and seed fill by the estimate.", note_words(flower, words)};
      break;
  }
  said.push_back(doubts(flower));
  return join(said);
}

}  // namespace antherd::letters
