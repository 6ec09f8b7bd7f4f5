// The digest: one letter for all that waited past the limits of an address, worst first. What it
// names is sent by nothing else, so it leaves nobody out without saying so.
#include <algorithm>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

constexpr Seconds digest_holds{72 * 3600};
constexpr std::size_t most_named = 200;  // a letter stays below 32 KiB
constexpr std::size_t most_fields = 12;
constexpr std::size_t longest_whole = 12 * 1024;  // of the worst letter

bool worse(const Letter& one, const Letter& other) {
  if (one.severity != other.severity) return one.severity > other.severity;
  if (one.decided != other.decided) return one.decided < other.decided;
  return one.id < other.id;
}

std::string decided_words(const Letter& letter, const Words& words) {
  return words.day(words.calendar().day_of(letter.decided)) + " " + words.clock(letter.decided);
}

/// Each letter that waited: when it was decided, and its subject.
Section named(const std::vector<Letter>& letters, const Words& words) {
  Section section{"WAITED", "", {}, true, {}};
  for (std::size_t i = 0; i < letters.size() && i < most_named; ++i) {
    section.lines.push_back(decided_words(letters[i], words) + ", " +
                            severity_word(letters[i].severity) + ": " + plain(letters[i].subject));
  }
  if (letters.size() > most_named) {
    section.text = "And " + std::to_string(letters.size() - most_named) +
                   " more, none of them graver: antherd letters names each.";
  }
  return section;
}

std::string warnings_of(const FieldStatus& status) {
  std::vector<std::string> open;
  if (status.heat.episode && status.heat.episode->open()) {
    open.push_back("heat warning open at " + level_word(status.heat.episode->level));
  }
  if (status.humid.episode && status.humid.episode->open()) {
    open.push_back("mildew warning open at " + level_word(status.humid.episode->level));
  }
  return open.empty() ? "no warning open" : list(open);
}

/// How the fields stand when the digest leaves: a letter that waited cannot know that.
Section standing(const Recipient& recipient, const Words& words) {
  Section section{"NOW", "", {}, true, {}};
  std::size_t left_out = 0;
  for (const auto& [name, status] : words.desk().fields) {
    if (!gets_field(recipient, name) || status.watch != season::Watch::watched) continue;
    if (section.lines.size() >= most_fields) {
      ++left_out;
      continue;
    }
    const std::string unseen = unseen_since(status, words);
    section.lines.push_back(plain(name) + ": " + flower_state(status) + "; " + warnings_of(status) +
                            (unseen.empty() ? "" : "; " + unseen));
  }
  if (left_out > 0) {
    section.text = "And " + count(static_cast<int>(left_out), "more field") + ": antherd now.";
  }
  return section;
}

std::string brief_digest(const std::vector<Letter>& letters, const Words& words) {
  const std::string head = letters.size() == 1
                               ? "1 letter waited: "
                               : std::to_string(letters.size()) + " letters waited. Worst: ";
  const std::string text =
      head + decided_words(letters.front(), words) + ", " + letters.front().subject;
  return clip(unglued(plain(unglued(text))), brief_width) + "\n";
}

std::string whole_digest(const std::vector<Letter>& letters, const Recipient& recipient,
                         const Words& words) {
  const Letter& worst = letters.front();
  const bool one = letters.size() == 1;
  std::string text;
  if (!words.desk().clock_set) {
    text += paragraph("Computer clock not set: times are the station's own.");
  }
  text += paragraph((one ? "One letter" : std::to_string(letters.size()) + " letters") +
                    " had to wait, because this address had got as many as one hour or one day "
                    "allows. " +
                    (one ? "It stands below." : "The worst stands first, and whole at the end."));
  text +=
      paragraph("Tonight: go by NOW below; each letter says only what held when it was decided.");
  text += section_text(named(letters, words));
  text += section_text(standing(recipient, words));
  text += "\n" + std::string(page_width, '-') + "\n";
  if (worst.body.size() > longest_whole) {
    return text + paragraph("The worst is too long to stand here: antherd letters names it.") +
           "\n" + paragraph(standing_caution(recipient.language));
  }
  return text + paragraph("As it was written, " + decided_words(worst, words) + ":") + "\n" +
         worst.body;
}

}  // namespace

Letter compose_digest(std::span<const Letter> waited, const Recipient& recipient,
                      const Desk& desk) {
  const Words words(desk);
  std::vector<Letter> ordered(waited.begin(), waited.end());
  std::sort(ordered.begin(), ordered.end(), worse);
  const Letter& oldest =
      *std::min_element(ordered.begin(), ordered.end(), [](const Letter& one, const Letter& other) {
        return one.decided != other.decided ? one.decided < other.decided : one.id < other.id;
      });
  const Letter& worst = ordered.front();
  const std::string mark = "[" + count(static_cast<int>(ordered.size()), "letter") + "] ";
  Letter letter;
  letter.id = "digest-" + calendar_id(oldest.id, recipient, desk);
  letter.recipient = recipient.address;
  letter.subject = clip(plain(unglued(mark + worst.subject)), subject_width);
  letter.body =
      recipient.brief ? brief_digest(ordered, words) : whole_digest(ordered, recipient, words);
  letter.kind = "digest";
  letter.severity = worst.severity;
  letter.decided = desk.now;
  letter.valid_until = desk.now + digest_holds;
  letter.still = "It names what was decided from " + unglued(decided_words(oldest, words)) + " on.";
  return letter;
}

}  // namespace antherd::letters
