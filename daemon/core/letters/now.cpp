// The one screen of `antherd now`. Every line is cut to the page, so that a screen stays a screen.
#include <algorithm>
#include <map>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

constexpr std::size_t label_width = 10;
constexpr std::size_t most_open = 4;  // alerts named one by one
constexpr std::size_t most_attention = 4;

std::string cut(const std::string& text) { return clip(unglued(text), page_width) + "\n"; }

std::string labelled(const std::string& label, const std::string& text) {
  return cut("  " + label + std::string(label_width - label.size(), ' ') + text);
}

std::string watch_words(const FieldStatus& status) {
  switch (status.watch) {
    case season::Watch::before_sowing:
      return "not watched: not sown yet";
    case season::Watch::watched:
      return "";
    case season::Watch::ripe:
      return "not watched: ripe; give the new sowing date";
    case season::Watch::sown_long_ago:
      return "not watched: sown long ago; give the new sowing date";
    case season::Watch::harvested:
      return "not watched: harvested";
  }
  return "";
}

std::string stage_line(const FieldStatus& status, const Words& words) {
  const std::string resting = watch_words(status);
  if (!resting.empty()) return resting;
  const season::FlowerStatus& flower = status.flower;
  std::string text = flower_state(status);
  if (!flower.known) return text + ": note a stage (antherd scout)";
  text += ", stage " + number(flower.stage, 0);
  if (flower.part == season::Part::window && wide_window(flower) && !flower.scouted) {
    text += ", chance of flower " + in_ten(flower.p_flower);
  } else if (flower.part == season::Part::window && flower.day_of_window) {
    text += ", window day " + std::to_string(*flower.day_of_window);
    if (flower.days_in_window) text += " of about " + std::to_string(*flower.days_in_window);
  } else if (flower.flower_first && *flower.flower_first > words.today()) {
    text += ", first anthers " + words.about(*flower.flower_first, flower.flower_first_days);
  }
  if (flower.implausible) text += ", check the sowing date";
  return text;
}

/// Levels on the screen, where room is short.
std::string level_short(Level level) { return level == Level::none ? "none" : level_word(level); }

std::string hours_short(const season::HeatDay& day, const risk::HeatRules& rules,
                        const Words& words) {
  if (!day.hours_32 || !day.hours_35 || !day.hours_38) return "";
  const auto bare = [&](Celsius limit) {
    const std::string text = words.threshold(limit);
    return text.substr(0, text.find(glue));
  };
  return "; h at " + bare(rules.sustained) + "/" + bare(rules.severe) + "/" +
         words.threshold(rules.extreme) + ": " + std::to_string(*day.hours_32) + "/" +
         std::to_string(*day.hours_35) + "/" + std::to_string(*day.hours_38);
}

std::string heat_line(const FieldStatus& status, const Words& words) {
  const season::HeatDay& today = status.heat.today;
  const risk::HeatRules& rules = words.heat_rules(status.field);
  if (!today.t_max) return "nothing measured today";
  std::string text =
      level_short(today.level) + "; at most " + words.temperature(*today.t_max, rules);
  if (status.temperature) text += ", now " + words.temperature(*status.temperature, rules);
  return text + hours_short(today, rules, words);
}

std::string mildew_line(const FieldStatus& status) {
  if (!status.humid.last) return "no humid day judged yet";
  if (!status.humid.last->judged && status.humid.last->level == Level::none) {
    return "not judged: the last humid day's data are missing";
  }
  std::string text = level_short(status.humid.last->level);
  if (!status.humid.last->judged) text += ", last day not judged (data missing)";
  if (status.humid.last->r) text += ", score " + number(*status.humid.last->r, 1);
  if (waters_leaves(status)) {
    text += "; overhead tonight " + level_short(status.humid.if_watered_tonight) + ", if not " +
            level_short(status.humid.if_not_watered);
  }
  return text;
}

std::string water_line(const FieldStatus& status, const Words& words) {
  std::string text;
  switch (status.irrigation) {
    case field::Method::overhead:
      text = "sprinklers " + std::to_string(status.humid.night_sets_last_five) + " of 5 mornings";
      break;
    case field::Method::drip:
      text = "drip, wets no leaf";
      break;
    case field::Method::furrow:
      text = "furrow, wets no leaf";
      break;
    case field::Method::none:
      return "no irrigation";
  }
  text += status.last_irrigation_end ? "; last " + words.when(*status.last_irrigation_end)
                                     : "; none in the log";
  return text;
}

/// The roots' side, where the account is known.
std::string soil_line(const FieldStatus& status, const Words& words) {
  const auto& water = status.water;
  if (!water.ks || !water.missing || !water.root_zone) return "";
  std::string text = words.depth(*water.missing) + " of " + words.depth(*water.root_zone) +
                     " missing, Ks " + number(*water.ks, 2);
  if (*water.ks < 0.995) return text + ": short of water";
  if (water.days_to_stress) text += ", " + std::to_string(*water.days_to_stress) + " d to stress";
  return text;
}

std::string held_line(const FieldStatus& status, const Words& words) {
  const season::FlowerStatus& flower = status.flower;
  const std::string without =
      window_range(flower.without_note_first, flower.without_note_last, flower, words);
  const std::string with =
      window_range(flower.with_note_first, flower.with_note_last, flower, words);
  if (without.empty() || with.empty()) return "held: it does not fit the warmth since sowing";
  return "held; window without it " + without;
}

std::string data_line(const FieldStatus& status, const Words& words) {
  const season::DataStatus& data = status.data;
  std::string text = data.station.empty() ? "no station" : plain(data.station);
  const std::string unseen = unseen_since(status, words);
  text += ", " + (unseen.empty() ? "seen to " + words.closing(*data.last_reading) : unseen);
  if (data.hours_missing_24 > 0) {
    text += ", " + std::to_string(data.hours_missing_24) + " h of 24 missing";
  }
  const auto doubtful = std::count_if(
      data.flags_24.begin(), data.flags_24.end(),
      [](const weather::Flag& flag) { return flag.verdict != weather::Verdict::good; });
  if (doubtful > 0) text += ", doubtful values: " + std::to_string(doubtful);
  if (!data.rain_measured) text += ", rain not measured";
  return text;
}

std::string field_block(const FieldStatus& status, const Words& words) {
  std::string text = cut(plain(status.field) + ": " + stage_line(status, words));
  if (status.watch != season::Watch::watched) return text;
  if (status.flower.note_held) {
    const season::FlowerStatus& flower = status.flower;
    text += labelled("note", held_line(status, words));
    const std::string with =
        window_range(flower.with_note_first, flower.with_note_last, flower, words);
    if (!with.empty()) text += labelled("", "      window with it " + with);
  }
  text += labelled("heat", heat_line(status, words)) + labelled("mildew", mildew_line(status)) +
          labelled("water", water_line(status, words));
  const std::string soil = soil_line(status, words);
  if (!soil.empty()) text += labelled("soil", soil);
  text += labelled("data", data_line(status, words));
  for (const auto& [name, story] : words.desk().stations) {
    const auto& fields = story.fields;
    const std::string clock = clock_in_short(story);
    const bool own = std::find(fields.begin(), fields.end(), status.field) != fields.end();
    if (own && !clock.empty()) text += labelled("clock", plain(name) + ": " + clock);
  }
  return text;
}

/// One line an open episode: the last of what was said of it, gravest first.
std::string open_block(std::span<const alerts::Said> unclosed, const Words& words) {
  std::map<std::string, const alerts::Said*> last;
  for (const alerts::Said& said : unclosed) {
    const alerts::Said*& known = last[said.episode];
    if (known == nullptr || said.at >= known->at) known = &said;
  }
  std::vector<const alerts::Said*> ordered;
  for (const auto& [episode, said] : last) ordered.push_back(said);
  std::stable_sort(ordered.begin(), ordered.end(), [](const auto* a, const auto* b) {
    return a->level != b->level ? a->level > b->level : a->start < b->start;
  });
  if (ordered.empty()) return cut("OPEN: no alert");
  std::string text = cut("OPEN");
  for (std::size_t i = 0; i < ordered.size(); ++i) {
    if (i + 1 == most_open && ordered.size() > most_open) {
      return text + cut("  and " + std::to_string(ordered.size() - i) + " more: antherd review");
    }
    const alerts::Said& said = *ordered[i];
    text += cut("  " + clip(plain(said.subject), 30) + ": " + kind_words(said.kind) +
                (said.level == Level::none ? "" : " " + level_word(said.level)) + " since " +
                words.when(said.start) + (said.seen ? ", seen" : ""));
  }
  return text;
}

std::string attention_block(std::span<const std::string> attention) {
  if (attention.empty()) return "";
  std::string text = cut("ATTENTION");
  for (std::size_t i = 0; i < attention.size(); ++i) {
    if (i + 1 == most_attention && attention.size() > most_attention) {
      return text + cut("  and " + std::to_string(attention.size() - i) + " more: see the log");
    }
    for (const std::string& line : wrap(plain(attention[i]), page_width, 2, 4)) text += line + "\n";
  }
  return text;
}

}  // namespace

std::string compose_now(const Desk& desk, std::span<const alerts::Said> unclosed,
                        std::span<const std::string> attention) {
  const Words words(desk);
  std::string text = cut(std::string(desk.exercise ? "EXERCISE: " : "") + plain(desk.farm) + ", " +
                         words.day(words.today()) + " " + words.clock(desk.now) +
                         (desk.clock_set ? "" : " (computer clock not set)"));
  if (desk.fields.empty()) text += "\nNo field is in the settings.\n";
  for (const auto& [name, status] : desk.fields) text += "\n" + field_block(status, words);
  text += "\n" + open_block(unclosed, words);
  return text + attention_block(attention);
}

}  // namespace antherd::letters
