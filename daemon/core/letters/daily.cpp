// The daily line: one line a field while it is in its flowering window, so that its absence means
// that the watch is down.
#include <algorithm>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

constexpr Seconds daily_holds{12 * 3600};

std::string short_line(const FieldStatus& status, const Words& words) {
  const season::HeatDay& today = status.heat.today;
  std::string text = clip(plain(status.field), 20) + " ";
  text += today.t_max ? words.temperature_number(*today.t_max, words.heat_rules(status.field)) +
                            (words.desk().units == Units::us ? "F" : "C")
                      : "no data";
  if (!unseen_since(status, words).empty()) text += " (old)";
  return text + " heat " + level_word(today.level) + " mildew " +
         level_word(status.humid.last ? status.humid.last->level : Level::none);
}

bool worse(const FieldStatus* a, const FieldStatus* b) {
  if (a->heat.today.level != b->heat.today.level) {
    return a->heat.today.level > b->heat.today.level;
  }
  const auto mildew = [](const FieldStatus* s) {
    return s->humid.last ? s->humid.last->level : Level::none;
  };
  if (mildew(a) != mildew(b)) return mildew(a) > mildew(b);
  const auto hot = [](const FieldStatus* s) { return s->heat.today.t_max.value_or(Celsius(-99)); };
  if (hot(a) != hot(b)) return hot(a) > hot(b);
  return a->field < b->field;
}

std::string next_words(const Words& words) {
  const Desk& desk = words.desk();
  if (!desk.next_daily) return "The next line comes tomorrow at this time.";
  Instant next = *desk.next_daily;
  if (next <= desk.now) next += Seconds{24 * 3600};
  return "The next line comes " + words.ahead(next) +
         " while a field is in its window; if it has "
         "not come by " +
         words.clock(next + one_hour) + ", the watch itself is down.";
}

std::string full_body(const std::vector<const FieldStatus*>& fields, const Words& words) {
  std::string text;
  for (const FieldStatus* status : fields) {
    for (const std::string& line : wrap(daily_field_line(*status, words), page_width, 0, 2)) {
      text += line + "\n";
    }
  }
  if (words.desk().exercise) {
    text += paragraph("This is an exercise: an invented season. Do not act on it.");
  }
  if (!words.desk().clock_set) {
    text += paragraph("Computer clock not set: times are the station's own.");
  }
  text += section_text({"NEXT", next_words(words), {}, true, {}});
  return text + "\n" + paragraph(standing_caution(Language::english));
}

std::string brief_body(const std::vector<const FieldStatus*>& fields, const Words& words) {
  std::string text = words.desk().exercise ? "EXERCISE: " : "";
  text += "Daily:";
  std::size_t told = 0;
  for (const FieldStatus* status : fields) {
    const std::string line = (told > 0 ? "; " : " ") + unglued(short_line(*status, words));
    constexpr std::size_t room_for_more = 10;
    if (columns(text) + columns(line) + room_for_more > brief_width) break;
    text += line;
    ++told;
  }
  if (told < fields.size()) text += "; +" + std::to_string(fields.size() - told) + " more";
  return clip(text + ".", brief_width) + "\n";
}

Letter daily_letter(const std::vector<const FieldStatus*>& fields, const Recipient& recipient,
                    const Words& words) {
  const Desk& desk = words.desk();
  const FieldStatus& worst = *fields.front();
  Part part;
  part.lead = "Daily line";
  part.name = plain(worst.field);
  part.rest = (worst.heat.today.t_max
                   ? words.temperature(*worst.heat.today.t_max, words.heat_rules(worst.field))
                   : std::string("no data")) +
              " by " + words.closing(worst.as_of) + ", " + flower_tag(worst);
  Letter letter;
  letter.id = calendar_id("daily-" + words.iso(words.today()), recipient, desk);
  letter.recipient = recipient.address;
  letter.subject =
      subject_line(part, desk.exercise ? "EXERCISE: " : "",
                   fields.size() > 1 ? " +" + std::to_string(fields.size() - 1) + " more" : "");
  letter.body = recipient.brief ? brief_body(fields, words) : full_body(fields, words);
  letter.kind = "daily";
  letter.decided = desk.now;
  letter.valid_until = desk.now + daily_holds;
  letter.still = unglued("This line was for " + words.day(words.today()) + ".");
  return letter;
}

}  // namespace

std::string daily_field_line(const FieldStatus& status, const Words& words) {
  const season::HeatDay& today = status.heat.today;
  const risk::HeatRules& rules = words.heat_rules(status.field);
  std::vector<std::string> said;
  if (today.t_max) {
    said.push_back("at most " + words.temperature(*today.t_max, rules) +
                   (today.t_max_hour ? " from " + words.clock(Instant(*today.t_max_hour)) : ""));
  } else {
    said.push_back("no temperature today");
  }
  if (today.hours_35) {
    said.push_back((*today.hours_35 == 0 ? std::string("no hour at ")
                                         : std::to_string(*today.hours_35) + glue + "h at ") +
                   words.threshold(rules.severe) + " or more");
  }
  said.push_back("heat " + level_word(today.level));
  said.push_back("mildew " +
                 level_word(status.humid.last ? status.humid.last->level : Level::none));
  if (waters_leaves(status) || status.humid.night_sets_last_five > 0) {
    said.push_back("sprinklers before " + std::to_string(status.humid.night_sets_last_five) +
                   " of 5 mornings");
  }
  const std::string unseen = unseen_since(status, words);
  said.push_back(!unseen.empty() ? unseen
                 : status.data.hours_missing_24 == 0
                     ? "data complete"
                     : count(status.data.hours_missing_24, "hour") + " of 24 missing");
  std::string text = plain(status.field) + ": " + flower_state(status) + "; ";
  for (std::size_t i = 0; i < said.size(); ++i) text += (i > 0 ? ", " : "") + said[i];
  return text + ".";
}

bool in_daily(const FieldStatus& status) {
  return status.watch == season::Watch::watched && status.flower.part == season::Part::window;
}

std::vector<Letter> compose_daily(std::span<const Recipient> recipients, const Desk& desk) {
  const Words words(desk);
  std::vector<Letter> letters;
  for (const Recipient& recipient : recipients) {
    std::vector<const FieldStatus*> fields;
    for (const auto& [name, status] : desk.fields) {
      if (in_daily(status) && gets_field(recipient, name)) fields.push_back(&status);
    }
    if (fields.empty()) continue;
    std::sort(fields.begin(), fields.end(), worse);
    letters.push_back(daily_letter(fields, recipient, words));
  }
  return letters;
}

}  // namespace antherd::letters
