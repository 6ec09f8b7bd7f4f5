// The one letter that goes past the outbox: the computer can keep nothing, and so no other letter
// can go. It says how every field stood when it was written, since nothing else will. The same way
// goes word of a disk that is nearly full, while alerts still find room on it.
#include <algorithm>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

constexpr Seconds day_begins{6 * 3600};  // after farm midnight: nobody is woken for a new day

constexpr const char* next_of_running =
    "One letter of this kind a day while it lasts, another when a level rises. When the disk works "
    "again the letters that wait go out by themselves, and say how late they are. Should the "
    "computer be started anew before that, nothing at all is watched, and a letter says so.";
constexpr const char* next_of_stopped =
    "It is tried again twice a minute. One letter of this kind a day while it lasts. When the disk "
    "works again the watch begins by itself, reads the files of its drop folders and says what it "
    "learned late; what a station was to be asked for meanwhile may be missing.";

constexpr const char* next_of_low =
    "One letter of this kind a day while it lasts. With 24 MB free the readings are stored by "
    "themselves. Without, the last room is used up one day: then letters of alerts wait, and a "
    "letter says so. Should the computer be started anew, files are read again; what a station was "
    "asked for may be missing.";
constexpr const char* do_of_low =
    "Go to the computer this week and make room on its disk, 24 MB or more: old log files, old "
    "station files that were read, updates that were kept.";
constexpr const char* do_of_failed =
    "Go to the computer today. Is the disk full, worn or unplugged? A memory card that takes no "
    "more writes is at its end: put a new one in. The log names what failed. Until then walk the "
    "fields as if nobody watched.";

const char* what_of(const StoreTrouble& trouble) {
  if (!trouble.begun) return ": nothing is watched since ";
  return trouble.letters_go ? ": the disk is nearly full, readings are not stored since "
                            : ": the watch has kept nothing since ";
}

const char* so_what_of(const StoreTrouble& trouble) {
  if (!trouble.begun) {
    return "The watch was started and cannot open what it keeps. No letter of heat or wet leaves "
           "will come until its disk works again.";
  }
  return trouble.letters_go ? "Readings wait in memory. Alerts are still decided and their letters "
                              "go, in the last room that was kept for them."
                            : "Letters of alerts wait until its disk works again: do not count on "
                              "them.";
}

/// An alert that waits while this letter goes still reaches its people through it.
Level worst_of(const std::vector<const FieldStatus*>& fields) {
  Level worst = Level::none;
  for (const FieldStatus* status : fields) {
    worst = std::max(worst, status->heat.today.level);
    if (status->humid.last) worst = std::max(worst, status->humid.last->level);
  }
  return worst;
}

std::string body_of(const std::vector<const FieldStatus*>& fields, const StoreTrouble& trouble,
                    const Words& words) {
  const Desk& desk = words.desk();
  std::string text =
      paragraph(plain(desk.farm) + what_of(trouble) + words.when(trouble.since) + ".");
  text += paragraph(so_what_of(trouble));
  if (desk.exercise) {
    text += paragraph("This is an exercise: an invented season. Do not act on it.");
  }
  text += section_text({"WHY", plain(trouble.why) + ".", {}, true, {}});
  const char* judged = trouble.begun ? "The stations are still read and judged. As of this letter:"
                                     : "No station is read and no field is judged.";
  text += section_text({"NOW", judged, {}, true, {}});
  for (const FieldStatus* status : fields) {
    for (const std::string& line : wrap(daily_field_line(*status, words), page_width, 2, 4)) {
      text += line + "\n";
    }
  }
  text += section_text({"DO", trouble.letters_go ? do_of_low : do_of_failed, {}, true, {}});
  const char* next = trouble.letters_go ? next_of_low : next_of_running;
  text += section_text({"NEXT", trouble.begun ? next : next_of_stopped, {}, true, {}});
  return text + "\n" + paragraph(standing_caution(Language::english));
}

std::string brief_of(const Part& part, const StoreTrouble& trouble, const Desk& desk) {
  const char* so = trouble.letters_go
                       ? ". Alerts still go: make room on the computer's disk this week."
                       : ". Its disk takes nothing, alert letters wait: go to the computer today.";
  if (!trouble.begun) {
    so = ". Its store cannot be opened, no alert will come: go to the computer today.";
  }
  const std::string text = part.lead + ": " + part.name + ", " + part.rest + so;
  return clip(unglued((desk.exercise ? "EXERCISE: " : "") + text), brief_width) + "\n";
}

}  // namespace

CivilDay store_trouble_day(const Calendar& calendar, Instant at) {
  return calendar.day_of(at - day_begins);
}

std::vector<Letter> compose_store_trouble(const StoreTrouble& trouble,
                                          std::span<const Recipient> recipients, const Desk& desk) {
  const Words words(desk);
  std::vector<Letter> letters;
  for (const Recipient& recipient : recipients) {
    std::vector<const FieldStatus*> fields;
    for (const auto& [name, status] : desk.fields) {
      if (status.watch == season::Watch::watched && gets_field(recipient, name)) {
        fields.push_back(&status);
      }
    }
    Letter letter;
    const Level worst = worst_of(fields);
    const CivilDay day = store_trouble_day(words.calendar(), desk.now);
    const std::string stem = trouble.begun ? "store-trouble-" : "watch-stopped-";
    letter.id = trouble.letters_go
                    ? calendar_id("disk-low-" + words.iso(day), recipient, desk)
                    : calendar_id(stem + words.iso(day) + "-" + level_word(worst), recipient, desk);
    letter.recipient = recipient.address;
    letter.kind = "store_trouble";
    letter.severity = trouble.letters_go ? alerts::Severity::minor : alerts::severity_of(worst);
    letter.decided = desk.now;
    Part part;
    part.lead = trouble.begun ? "Watch keeps nothing" : "Nothing is watched";
    if (trouble.letters_go) part.lead = "Disk nearly full";
    part.name = plain(desk.farm);
    part.rest = "since " + words.when(trouble.since);
    letter.subject = subject_line(part, desk.exercise ? "EXERCISE: " : "", "");
    letter.still = "It was so when this letter was written.";
    letter.body = recipient.brief ? brief_of(part, trouble, desk) : body_of(fields, trouble, words);
    letters.push_back(std::move(letter));
  }
  return letters;
}

}  // namespace antherd::letters
