// The parts that letters are put together from, and the paragraphs that several kinds share.
// One telling becomes one Part; merge.cpp makes letters of parts.
#pragma once

#include <string>
#include <utility>
#include <vector>

#include "core/letters/compose.hpp"
#include "core/letters/words.hpp"

namespace antherd::letters {

using alerts::Kind;
using alerts::Saying;
using alerts::Telling;
using risk::Level;
using season::FieldStatus;

/// A short heading with one paragraph and the commands that belong to it.
struct Section {
  std::string heading;
  std::string text;
  std::vector<std::string> commands;
  bool own = true;  // speaks of this field; false: the same for all, told once in a merged letter
  std::vector<std::string> lines{};  // one below the other, before the text
  std::string once{};  // sentences after the text that hold for every field: told once in a letter
};

/// "about 12 in 100 of the season's flowers opened on days with an hour at 95 °F or more".
std::string exposed_words(const FieldStatus& status, const Words& words);

/// One telling in words.
struct Part {
  std::string lead;     // of the subject: "Heat Severe"
  std::string name;     // field or station; what is cut first when the subject is too long
  std::string rest;     // of the subject: "97 °F by 4 pm, in flower"
  std::string first;    // first line: who, flower state, figure, clock time
  std::string tonight;  // second line: the decision touched tonight
  std::vector<Section> sections;
  std::string next;   // when the next letter about it would come
  std::string brief;  // the sentences after the head of a 160-character form
  std::string still;  // one sentence for a delayed copy
};

// One telling, by kind. Each copes with a field or station that the desk does not know.
Part heat_part(const Telling& telling, const Words& words);
Part heat_ahead_part(const Telling& telling, const Words& words);
Part humid_part(const Telling& telling, const Words& words);
Part station_part(const Telling& telling, const Words& words);  // no_data, doubtful_sensor
Part service_part(const Telling& telling, const Words& words);  // mail_trouble
Part notice_part(const Telling& telling, const Words& words);
Part part_of(const Telling& telling, const Words& words);  // by its kind

/// The field as the desk knows it, or null.
const FieldStatus* status_of(const Desk& desk, const std::string& field);

// Flowers (flower.cpp).
bool seen_in_flower(const FieldStatus& status);
/// "in flower" only when scouted, "flower not seen", "before flower", "seed fill"…: for subjects.
std::string flower_tag(const FieldStatus& status);
/// The same for the first line, where "flowering not known" is said.
std::string flower_state(const FieldStatus& status);
/// Day of how many, window, how sure.
std::string flower_paragraph(const FieldStatus& status, const Words& words);
/// "Mon 22 Jun to Tue 25 Aug ± 9 d"; empty where either end is not known.
std::string window_range(const std::optional<CivilDay>& first, const std::optional<CivilDay>& last,
                         const season::FlowerStatus& flower, const Words& words);
/// "Mon 22 Jun to Tue 25 Aug ± 9 d, first anthers about Wed 1 Jul ± 9 d"; both windows while a note
/// is held; "not known" where it is not.
std::string window_words(const season::FlowerStatus& flower, const Words& words);
/// More than flowering itself can last: the estimate is wide, and a count of days misleads.
bool wide_window(const season::FlowerStatus& flower);
/// FLOWER, with the command that settles it where flowering is not known.
Section flower_section(const FieldStatus& status, const Words& words);
/// ± days of the middle estimate of flowers done: the start's, and a quarter of the length.
double flower_last_days(const season::FlowerStatus& flower);

// The other hazard's side and water (water.cpp).
/// What overhead water tonight would do to mildew; for drip and furrow that it wets no leaf.
std::string tonight_and_mildew(const FieldStatus& status);
std::string tonight_in_brief(const FieldStatus& status);
/// The MILDEW paragraph of a heat letter: sprinkler nights, level, what tonight would do.
std::string mildew_side(const FieldStatus& status, const Words& words);
/// The HEAT section of a humid letter.
Section heat_side(const FieldStatus& status, const Words& words);
std::string water_in_heat(const FieldStatus& status, const Words& words);
Section water_in_humid(const FieldStatus& status, const Words& words);
/// "1.90 in short of the 6.30 in that roots can reach (about 30 in 100)"; empty while unknown.
std::string root_zone(const FieldStatus& status, const Words& words);
bool waters_leaves(const FieldStatus& status);  // overhead by its settings

// Heat of one day (heat_words.cpp).
/// The heat day a telling's moment belongs to: today, yesterday, or null.
const season::HeatDay* heat_day_at(const FieldStatus& status, CivilDay day);
/// "3 h at 90 °F or more, 1 h at 95 °F or more".
std::string hot_hours(const season::HeatDay& day, const risk::HeatRules& rules, const Words& words);

// Data (data.cpp).
/// How far the measurements can be trusted: hours missing, doubtful values, shield, whole degrees.
std::string data_paragraph(const FieldStatus& status, const Words& words, bool heat);
/// "nothing seen since 1 pm" where the last reading is 2 h old or more, else nothing: old figures
/// must not pass for new ones.
std::string unseen_since(const FieldStatus& status, const Words& words);
/// "temperature stuck (used)"; `fault_words` without what became of the value.
std::string flag_words(const weather::Flag& flag);
std::string fault_words(const weather::Flag& flag);
/// What to look at when a fault has a likely cause in settings, clock or sensor; else empty.
std::string what_to_mend(const weather::Flag& flag);
/// "temperature stuck (used) and rain in dry air (used)": at most four, each once; empty for none.
std::string flags_named(const std::vector<weather::Flag>& flags);
std::string element_words(weather::Element element);

// A station's clock by the ages of its readings on arrival (arrivals.cpp).
/// "newest reading was never less than 62 min old on arrival: …"; empty where nothing is known.
std::string clock_words(const StationStory& story);
/// The same in at most 64 characters, for a screen.
std::string clock_in_short(const StationStory& story);
/// Of a station that counts as silent although readings come: how old they are; else empty.
std::string late_arrival(const StationStory& story, const Words& words);

/// A field's name for a command line, quoted for a shell where needed.
std::string quoted(const std::string& name);
/// "  antherd scout "north bench" --stage full-flower".
std::string scout_command(const std::string& field, const std::string& rest);
std::string water_command(const std::string& field, const std::string& rest);

// Putting parts on paper (paper.cpp).
/// A letter's subject, cut to subject_width: the name first, then what stands last.
std::string subject_line(const Part& part, const std::string& before, const std::string& after);
/// First line, decision, sections, NEXT and the standing caution; other parts follow in short.
std::string body_of(const Part& worst, const std::vector<Part>& others, const std::string& next,
                    const Desk& desk);
/// The form of at most brief_width characters, without signs that phone gateways spoil.
std::string brief_of(const Part& worst, std::size_t others, const Desk& desk);
/// A section as it stands in a letter, with its empty line before.
std::string section_text(const Section& section);
std::string paragraph(const std::string& text);

// Late news (late.cpp): one part for all of it, worst first.
Part late_part(const std::vector<Telling>& tellings, const Words& words);

// Recipients and identity (identity.cpp).
bool gets_field(const Recipient& recipient, const std::string& field);
bool gets(const Recipient& recipient, const Telling& telling, const Desk& desk);
/// "heat-opened-severe-20260714t2300-0123456789abcdef": from the tellings, farm and recipient.
std::string letter_id(const std::vector<Telling>& tellings, const Recipient& recipient,
                      const Desk& desk);
/// The same for what comes by the calendar: "daily-20260714-…", "weekly-2026-w28-…".
std::string calendar_id(const std::string& stem, const Recipient& recipient, const Desk& desk);
/// "The daily line comes tonight at 7 pm; if it has not come by 8 pm, the watch itself is down."
std::string watch_words(const Recipient& recipient, const Words& words);
/// "north bench: in flower; at most 96 °F from 3 pm, …, data complete."
std::string daily_field_line(const FieldStatus& status, const Words& words);
/// Whether the daily line speaks of a field: in its window, or stage unknown in its season.
bool in_daily(const FieldStatus& status);

}  // namespace antherd::letters
