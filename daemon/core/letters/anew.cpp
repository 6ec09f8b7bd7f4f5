// See anew.hpp.
#include "core/letters/anew.hpp"

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

constexpr Seconds anew_holds{72 * 3600};

std::string counted(const Anew& anew) {
  return count(anew.irrigations, "irrigation") + " and " + count(anew.notes, "scouting note");
}

/// What people may have to write down again.
std::string gone_words(const Anew& anew, const Words& words) {
  if (!anew.copied) {
    return "The irrigations and scouting notes that were written down with a command are gone, for "
           "there was no weekly copy to take them from. Those in files of the diary folder are "
           "read again.";
  }
  const std::string day = words.day(words.calendar().day_of(*anew.copied));
  return "From the weekly copy of " + day + " the watch took back " + counted(anew) +
         ". What was written down since then with a command may be gone.";
}

/// The commands that show what the diary holds, of the recipient's fields.
std::vector<std::string> lists_of(const Recipient& recipient, const Words& words) {
  constexpr std::size_t most = 8;
  std::vector<std::string> commands;
  for (const auto& [name, status] : words.desk().fields) {
    if (!gets_field(recipient, name)) continue;
    if (commands.size() >= most) break;
    commands.push_back(water_command(name, "--list"));
    commands.push_back(scout_command(name, "--list"));
  }
  return commands;
}

std::string body_of(const Anew& anew, const Recipient& recipient, const Words& words) {
  const std::string what = anew.aside.empty()
                               ? "its store was missing"
                               : "its store was damaged and put aside as " + plain(anew.aside);
  std::string text = paragraph("The watch began anew: " + what + ".");
  text += paragraph(anew.copied
                        ? "Tonight: look at the lists named below and enter again what they lack."
                        : "Tonight: enter this season's irrigations and scouting notes again.");
  if (words.desk().exercise) {
    text += paragraph("This is an exercise: an invented season. Do not act on it.");
  }
  if (!words.desk().clock_set) {
    text += paragraph("Computer clock not set: times are the station's own.");
  }
  text += section_text({"NOTES",
                        gone_words(anew, words) + " Without them the watch counts too few wet "
                                                  "nights and knows less of the flowers.",
                        lists_of(recipient, words), true});
  text += section_text({"READINGS",
                        "What still stands in the drop folder is read again. Readings that were "
                        "only polled are not had again: hours before now may be missing.",
                        {},
                        true});
  text += section_text({"LETTERS",
                        "What was said before is not known any more: a warning that is still open "
                        "may come a second time, and letters that waited are gone.",
                        {},
                        true});
  text += section_text({"NEXT",
                        "Letters come as usual. If this comes again, the computer's disk is "
                        "probably failing: have it looked at.",
                        {},
                        true});
  return text + "\n" + paragraph(standing_caution(Language::english));
}

std::string brief_of(const Anew& anew, const Words& words) {
  const std::string since =
      anew.copied ? " since " + words.day(words.calendar().day_of(*anew.copied)) : "";
  const std::string text = std::string(words.desk().exercise ? "EXERCISE: " : "") +
                           "Watch began anew, store " +
                           (anew.aside.empty() ? "missing" : "damaged") +
                           ". Enter water and scouting notes" + since + " again: antherd water.";
  return clip(plain(unglued(text)), brief_width) + "\n";
}

}  // namespace

std::vector<Letter> compose_anew(const Anew& anew, std::span<const Recipient> recipients,
                                 const Desk& desk) {
  const Words words(desk);
  std::vector<Letter> letters;
  for (const Recipient& recipient : recipients) {
    Letter letter;
    letter.id = calendar_id("anew-" + words.iso(words.today()) + "-" + anew.aside, recipient, desk);
    letter.recipient = recipient.address;
    letter.subject = std::string(desk.exercise ? "EXERCISE: " : "") +
                     "The watch began anew: enter water and notes again";
    letter.body = recipient.brief ? brief_of(anew, words) : body_of(anew, recipient, words);
    letter.kind = "anew";
    letter.severity = alerts::Severity::moderate;
    letter.decided = desk.now;
    letter.valid_until = desk.now + anew_holds;
    letter.still = "The watch had begun anew when this was decided.";
    letters.push_back(std::move(letter));
  }
  return letters;
}

}  // namespace antherd::letters
