// Where the two hazards meet: what tonight's water would do, and what it would not.
#include <algorithm>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

using field::Method;
using season::HumidStatus;

Level mildew_level(const FieldStatus& status) {
  return status.humid.last ? status.humid.last->level : Level::none;
}

std::string method_noun(Method method) {
  switch (method) {
    case Method::drip:
      return "Drip";
    case Method::furrow:
      return "Furrow water";
    default:
      return "Water";
  }
}

std::string noun_in_sentence(std::string noun) {
  if (!noun.empty()) noun[0] = static_cast<char>(noun[0] - 'A' + 'a');
  return noun;
}

/// Two outcomes side by side, as a sentence that promises neither.
std::string two_ways(const HumidStatus& humid) {
  const Level wet = humid.if_watered_tonight;
  const Level dry = humid.if_not_watered;
  if (!humid.last)
    return "overhead water keeps leaves wet till morning; its effect is not known yet.";
  if (wet != dry) {
    return "with overhead water mildew would be " + level_word(wet) +
           " by the evening after; without it, " + level_word(dry) +
           " (if tomorrow is like today).";
  }
  if (wet == Level::none) {
    return "one overhead set would leave mildew below Moderate (if tomorrow is like today); "
           "several evenings in a row raise it.";
  }
  return "with or without overhead water, mildew would be " + level_word(wet) +
         " by the evening after (if tomorrow is like today).";
}

/// The same in short, where the second line has already told it in full.
std::string two_ways_again(const HumidStatus& humid) {
  if (!humid.last) return "";
  return "Overhead water tonight: " + level_word(humid.if_watered_tonight) +
         ". Leaves left dry: " + level_word(humid.if_not_watered) + ".";
}

/// Sprinkler sets in the log of a field whose settings name another method, or none.
bool logged_against_settings(const FieldStatus& status) {
  return !waters_leaves(status) &&
         (status.humid.night_sets_last_five > 0 || status.humid.streak > 0);
}

std::string sprinkler_nights(const FieldStatus& status) {
  const int nights = status.humid.night_sets_last_five;
  if (nights == 0) {
    return waters_leaves(status) ? "No overhead water is logged before any of the last 5 mornings."
                                 : "";
  }
  return "Sprinklers ran before " + std::to_string(nights) + " of the last 5 mornings.";
}

std::string level_now(const FieldStatus& status) {
  if (!status.humid.last) return "Mildew has not been judged yet: no full humid day is in.";
  if (!status.humid.last->judged) {
    return "The last humid day was not judged for want of data; the mildew level stays as it "
           "was: " +
           level_word(mildew_level(status)) + ".";
  }
  return "Mildew level now: " + level_word(mildew_level(status)) + ".";
}

std::string sunset_limit(const FieldStatus& status) {
  if (!status.humid.close_to_sunset_limit) return "";
  return "A set that ended an hour earlier would not have counted as a night set: the line, 3 h "
         "before sunset, is a judgement.";
}

/// How the roots stand, as a sentence; nothing while the account is not known.
std::string soil_sentence(const FieldStatus& status, const Words& words) {
  const std::string roots = root_zone(status, words);
  const auto& water = status.water;
  if (roots.empty() || !water.ks) return "";
  std::string text = "By your log, at last midnight the root zone was " + roots;
  if (*water.ks < 0.995) {
    return text + ": the crop is short of water (stress factor Ks " + number(*water.ks, 2) +
           "; 1 is none).";
  }
  if (!water.days_to_stress) return text + ".";
  if (*water.days_to_stress == 0) return text + ": at the edge of water stress.";
  return text + ": " + count(*water.days_to_stress, "day") +
         " from water stress at the present use.";
}

/// A thirsty crop cools itself less; shown where the shortage is plain.
std::string canopy_sentence(const FieldStatus& status, const Words& words) {
  const bool thirsty = status.water.ks.value_or(1) < 0.8;
  if (!thirsty || !status.water.canopy || status.water.canopy->value < 0.5) return "";
  return "A thirsty crop can be warmer than the air, in today's hottest sunny hour by about " +
         words.difference(*status.water.canopy) +
         " (a judgement, after a related crop); the levels go by the air.";
}

}  // namespace

std::string root_zone(const FieldStatus& status, const Words& words) {
  const auto& water = status.water;
  if (!water.missing || !water.root_zone || water.root_zone->value <= 0) return "";
  const double share = *water.missing / *water.root_zone;
  if (share < 0.005) return "full";
  return words.depth(*water.missing) + " short of the " + words.depth(*water.root_zone) +
         " that roots can reach (" + in_hundred(share) + ")";
}

bool waters_leaves(const FieldStatus& status) { return status.irrigation == Method::overhead; }

std::string tonight_and_mildew(const FieldStatus& status) {
  if (waters_leaves(status)) return "Tonight: " + two_ways(status.humid);
  const std::string noun = method_noun(status.irrigation);
  if (logged_against_settings(status)) {
    return "Tonight: a night without sprinklers lets leaves dry" +
           (status.irrigation == Method::none ? std::string("; is the log right that some ran?")
                                              : "; " + noun_in_sentence(noun) + " wets no leaf.");
  }
  if (status.irrigation == Method::none) {
    return "Tonight: no irrigation here to decide on; look at the flowers tomorrow in the cool.";
  }
  return "Tonight: " + noun_in_sentence(noun) +
         " wets no leaf, so it neither feeds nor starves "
         "mildew.";
}

std::string tonight_in_brief(const FieldStatus& status) {
  switch (status.irrigation) {
    case Method::overhead:
      break;
    case Method::drip:
      return "Mildew: drip wets no leaf.";
    case Method::furrow:
      return "Mildew: furrow wets no leaf.";
    case Method::none:
      return "Mildew " + level_word(mildew_level(status)) + ".";
  }
  const Level wet = status.humid.if_watered_tonight;
  const Level dry = status.humid.if_not_watered;
  if (!status.humid.last) return "Overhead water feeds mildew.";
  if (wet == dry) return "Overhead water or not tonight: mildew " + level_word(wet) + ".";
  return "Overhead water tonight: mildew " + level_word(wet) + ", without " + level_word(dry) + ".";
}

std::string mildew_side(const FieldStatus& status, const Words&) {
  std::vector<std::string> said{sprinkler_nights(status), level_now(status)};
  switch (status.irrigation) {
    case Method::overhead:
      said.push_back(two_ways_again(status.humid));
      said.push_back("A hot day slows mildew; wet leaves all night bring it back.");
      said.push_back(sunset_limit(status));
      break;
    case Method::drip:
    case Method::furrow:
      said.push_back(method_noun(status.irrigation) + " wets no leaf" +
                     (logged_against_settings(status) ? "; the sprinkler sets are from your log."
                                                      : ": only dew, fog and rain count here."));
      break;
    case Method::none:
      said.push_back(logged_against_settings(status)
                         ? "The settings know no irrigation here: check the log."
                         : "Only dew, fog and rain wet this field.");
      break;
  }
  return join(said);
}

Section heat_side(const FieldStatus& status, const Words& words) {
  const season::HeatDay& today = status.heat.today;
  const risk::HeatRules& rules = words.heat_rules(status.field);
  Section section{"HEAT", "", {}, true, {}, ""};
  std::vector<std::string> said;
  if (today.t_max) {
    said.push_back("Today so far at most " + words.temperature(*today.t_max, rules) + ": " +
                   hot_hours(today, rules, words) + ".");
  } else {
    said.push_back("Today's heat: nothing measured yet.");
  }
  const bool open = status.heat.episode && status.heat.episode->open();
  if (open) {
    said.push_back("A heat warning is open at " + level_word(status.heat.episode->level) + ".");
  }
  if ((today.level != Level::none || open) && waters_leaves(status)) {
    section.once =
        "Heat by itself does not call for water; sprinklers in the evening would feed mildew.";
  }
  if (status.heat.hot_days > 0 && status.flower.known) {
    said.push_back("Exposed so far: " + exposed_words(status, words) + ".");
  }
  section.text = join(said);
  return section;
}

std::string water_in_heat(const FieldStatus& status, const Words& words) {
  const bool logged = status.last_irrigation_end.has_value();
  const std::string soil = logged ? soil_sentence(status, words) : "";
  const std::string last =
      logged ? "Last water in the log ended " + words.when(*status.last_irrigation_end) + "." : "";
  if (logged && status.water.days_to_stress && *status.water.days_to_stress <= 2) {
    const int days = *status.water.days_to_stress;
    const std::string plain = "By your log the root zone is " +
                              (days <= 0 ? std::string("at the edge of water stress")
                                         : std::to_string(days) + glue + "d from water stress") +
                              ".";
    return join({soil.empty() ? plain : soil,
                 "Water may be due on its own account, whatever the heat.", last,
                 waters_leaves(status)
                     ? "A set that ends more than 3 h before sunset lets the leaves dry."
                     : "",
                 canopy_sentence(status, words)});
  }
  return join({"This heat by itself does not call for water.", soil, last});
}

Section water_in_humid(const FieldStatus& status, const Words& words) {
  Section section{"WATER", "", {}, true, {}, ""};
  std::vector<std::string> said;
  if (status.last_irrigation_end) {
    said.push_back("Last water in the log ended " + words.when(*status.last_irrigation_end) + ".");
    const std::string soil = soil_sentence(status, words);
    const bool near = status.water.days_to_stress && *status.water.days_to_stress <= 2;
    said.push_back(!soil.empty() || !near
                       ? soil
                       : "By the log the root zone is near water stress (about " +
                             std::to_string(std::max(0, *status.water.days_to_stress)) + glue +
                             "d).");
  } else if (status.irrigation != Method::none) {
    said.push_back("No water is in the log.");
  }
  switch (status.irrigation) {
    case Method::overhead:
      section.once =
          "If the field needs water, a set that ends more than 3 h before sunset lets the leaves "
          "dry before night.";
      said.push_back(sunset_limit(status));
      break;
    case Method::drip:
    case Method::furrow:
      said.push_back(method_noun(status.irrigation) + " wets no leaf.");
      break;
    case Method::none:
      said.push_back("No irrigation is set for this field.");
      break;
  }
  section.text = join(said);
  return section;
}

}  // namespace antherd::letters
