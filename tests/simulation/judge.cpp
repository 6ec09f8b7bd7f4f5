// What is judged while a season runs; see judge.hpp.
#include "judge.hpp"

#include <algorithm>
#include <array>
#include <cstdio>
#include <cstdlib>

#include "core/letters/rules.hpp"
#include "run/service/distress.hpp"

namespace simulation {
namespace {

std::string hours_text(Seconds span) { return std::to_string(span.count() / 3600) + " h"; }

bool of_the_watch(const std::string& kind) {
  return kind == "no_data" || kind == "doubtful_sensor";
}

std::string one_line(std::string text) {
  std::replace(text.begin(), text.end(), '\n', ' ');
  return text;
}

/// Whether a letter names a field or station; a first line that is too long cuts the name.
bool names(const LetterRow& letter, const std::string& subject) {
  const std::string text = one_line(letter.subject + " " + letter.body);
  if (text.find(subject) != std::string::npos) return true;
  return text.find(subject.substr(0, 6)) != std::string::npos &&
         text.find("…: ") != std::string::npos;
}

/// Tables pad their columns: "7 Jul      ± 5 d" is a date with its ±.
std::string squeezed(const std::string& text) {
  std::string kept;
  for (const char letter : one_line(text)) {
    if (letter != ' ' || kept.empty() || kept.back() != ' ') kept += letter;
  }
  return kept;
}

bool timed(const LetterRow& letter) {
  return letter.kind == "daily" || letter.kind == "weekly" || letter.kind == "digest";
}

int rank(const std::string& severity) {
  const std::array<const char*, 4> words{"minor", "moderate", "severe", "extreme"};
  return static_cast<int>(std::find(words.begin(), words.end(), severity) - words.begin());
}

}  // namespace

const letters::Recipient* Judge::recipient(const std::string& address) const {
  for (const auto& one : settings_->recipients) {
    if (one.address == address) return &one;
  }
  return nullptr;
}

/// Whether a person is to be told of a field or station.
bool Judge::told(const letters::Recipient& one, const std::string& subject) const {
  if (one.fields.empty()) return true;
  const auto has = [&](const std::string& field) {
    return std::find(one.fields.begin(), one.fields.end(), field) != one.fields.end();
  };
  if (subject == "antherd") return true;
  if (settings_->station(subject) == nullptr) return has(subject);
  return std::any_of(settings_->fields.begin(), settings_->fields.end(), [&](const auto& plan) {
    const auto& used = plan.field.stations;
    return has(plan.field.name) && std::find(used.begin(), used.end(), subject) != used.end();
  });
}

void Judge::look(Witness& witness, Instant now, bool clock_right) {
  std::vector<Said> said;
  for (auto& row : witness.said_after(said_.empty() ? 0 : said_.back().row.id)) {
    said.push_back({std::move(row), now, clock_right});
  }
  std::vector<Seen> letters;
  for (auto& row : witness.letters_after(letters_.empty() ? 0 : letters_.rbegin()->first)) {
    letters.push_back({std::move(row), now, clock_right});
  }
  judge_together(said, letters);
  for (const Said& one : said) {
    judge_said(one);
    said_.push_back(one);
  }
  for (const Seen& one : letters) {
    judge_letter(one);
    letters_.emplace(one.row.id, one);
  }
}

/// A decision and its letters are committed together.
void Judge::judge_together(const std::vector<Said>& said, const std::vector<Seen>& letters) {
  for (const auto& one : settings_->recipients) {
    const bool due = std::any_of(said.begin(), said.end(),
                                 [&](const Said& s) { return told(one, s.row.subject); });
    const bool written = std::any_of(letters.begin(), letters.end(), [&](const Seen& l) {
      return l.row.recipient == one.address && !timed(l.row);
    });
    if (due && !written) {
      complaints_.add("each decision has its letters",
                      said.front().row.kind + " of " + said.front().row.subject +
                          " was said and nothing was written to " + one.address);
    }
    if (written && !due) {
      complaints_.add("each letter has its decision",
                      "a letter to " + one.address + " stands for nothing that was said");
    }
  }
  for (const Said& s : said) {
    for (const auto& one : settings_->recipients) {
      if (one.brief || s.row.kind == "mail_trouble" || !told(one, s.row.subject)) continue;
      const bool named = std::any_of(letters.begin(), letters.end(), [&](const Seen& l) {
        return l.row.recipient == one.address && names(l.row, s.row.subject);
      });
      if (!named) {
        std::string there;
        for (const Seen& l : letters) {
          if (l.row.recipient == one.address) there += ", \"" + l.row.subject + "\"";
        }
        complaints_.add("each decision has its letters",
                        s.row.kind + " " + s.row.saying + " " + s.row.level + ": no letter to " +
                            one.address + " names " + s.row.subject + there);
      }
    }
  }
}

void Judge::judge_said(const Said& said) {
  const SaidRow& row = said.row;
  const std::string what = row.kind + " of " + row.subject + ", " + row.saying + " " + row.level +
                           ", about " + clock_text(settings_->calendar, row.about);
  if (std::getenv("ANTHERD_ALOUD") != nullptr) {
    std::printf("%s: %s, from %s until %s\n", clock_text(settings_->calendar, row.at).c_str(),
                what.c_str(), clock_text(settings_->calendar, row.start).c_str(),
                row.until ? clock_text(settings_->calendar, *row.until).c_str() : "-");
  }
  if (!said.clock_right) return;
  const Seconds age = row.at - row.about;
  const bool of_old = row.saying == "reminder" || row.saying == "learned_late";
  if (age > hours{12} && !of_old && row.saying != "notice") {
    complaints_.add("nothing old is told as new", what + ", " + hours_text(age) + " before");
  }
  if (age > days{7} && row.saying != "reminder" && !of_the_watch(row.kind)) {
    complaints_.add("what is older than 7 days is not told", what);
  }
  if (row.about > row.at) complaints_.add("nothing is told before it happened", what);
  // What the reader of this subject was told before, back to the last word that it is over.
  for (auto before = said_.rbegin(); before != said_.rend(); ++before) {
    if (before->row.kind != row.kind || before->row.subject != row.subject) continue;
    const bool same = before->row.saying == row.saying && before->row.level == row.level;
    const bool over = before->row.saying == "eased" || before->row.saying == "ended" ||
                      before->row.saying == "learned_late";
    const Seconds apart = row.at - before->row.at;
    if (same && row.saying != "reminder" && before->row.about == row.about &&
        (row.saying != "notice" || before->row.episode == row.episode)) {
      complaints_.add("nothing is said twice", what + ", " + hours_text(apart) + " before, of " +
                                                   before->row.episode + " and now of " +
                                                   row.episode);
    }
    if (over) break;
    const bool rise = row.saying == "opened" || row.saying == "raised";
    if (rise && same && row.episode == before->row.episode && apart < days{7}) {
      complaints_.add("nothing is said twice", what + ", said " + hours_text(apart) + " before");
    }
    if (row.saying == "reminder" && before->clock_right && apart < settings_->policy.remind_after &&
        row.episode == before->row.episode) {
      complaints_.add("reminders keep their distance",
                      what + ", " + hours_text(apart) + " after " + before->row.saying);
    }
  }
}

void Judge::judge_letter(const Seen& seen) {
  const LetterRow& row = seen.row;
  const std::string what = "\"" + row.subject + "\" to " + row.recipient;
  const auto [known, fresh] = identities_.emplace(row.identity, what);
  if (!fresh) {
    complaints_.add("no two letters have one identity", what + " and " + known->second);
  }
  const letters::Recipient* to = recipient(row.recipient);
  if (to == nullptr) {
    complaints_.add("letters go to the recipients", what);
    return;
  }
  letters::Letter letter;
  letter.id = row.identity;
  letter.subject = row.subject;
  letter.body = row.body;
  letter.still = row.still.empty() && timed(row) ? "-" : row.still;
  letter.kind = row.kind;
  letter.decided = row.decided;
  const CivilDay day = settings_->calendar.day_of(row.decided);
  for (const auto& broken : rules::broken_by(letter, to->brief, settings_->calendar)) {
    const bool padded = broken.starts_with("a date ahead") && row.kind == "weekly" &&
                        rules::bare_date_ahead(squeezed(row.body), day).empty();
    if (padded) continue;
    complaints_.add("letters keep their form", what + ": " + broken);
  }
  if (!timed(row)) {
    for (const auto& [id, other] : letters_) {
      if (other.row.recipient == row.recipient && other.row.subject == row.subject &&
          other.row.body == row.body && seen.at - other.at < hours{20}) {
        complaints_.add("no two letters say the same", what + ", letter " + std::to_string(id) +
                                                           " of " + hours_text(seen.at - other.at) +
                                                           " before");
      }
    }
  }
  judge_limit(seen);
}

/// Past six letters in an hour, or the day's limit, only raises, Extreme and what is graver than
/// all of the day before go to one address; the rest is held for its digest.
void Judge::judge_limit(const Seen& seen) {
  const LetterRow& row = seen.row;
  if (!seen.clock_right || !settings_->mail || row.kind == "daily" || row.kind == "weekly") return;
  if (row.state == "held" || row.raise || row.severity == "extreme") return;
  const auto& calendar = settings_->calendar;
  int in_hour = 0, in_day = 0;
  bool graver = true;
  for (const auto& [id, other] : letters_) {
    const bool counts = other.row.recipient == row.recipient && other.row.state != "held" &&
                        other.row.kind != "daily" && other.row.kind != "weekly";
    if (!counts) continue;
    const Instant at = other.row.next_try;
    if (at > row.next_try - hours{1} && at <= row.next_try) ++in_hour;
    if (calendar.day_of(at) == calendar.day_of(row.next_try)) ++in_day;
    const bool lately = at > row.next_try - hours{24} && at <= row.next_try;
    if (lately && rank(other.row.severity) >= rank(row.severity)) graver = false;
  }
  if (graver || (in_hour < 6 && in_day < settings_->mail->at_most_per_day)) return;
  complaints_.add("letters keep their limits", "\"" + row.subject + "\" to " + row.recipient +
                                                   " after " + std::to_string(in_hour) +
                                                   " in an hour, " + std::to_string(in_day) +
                                                   " in a day");
}

void Judge::handed(Witness& witness, std::int64_t item, const letters::Letter& letter) {
  const std::string what = "\"" + letter.subject + "\" to " + letter.recipient;
  if (service::Distress::mine(item)) {  // the one letter that goes past a store that takes nothing
    if (letter.kind != "store_trouble")
      complaints_.add("nothing is sent before it is stored", what);
    const bool brief =
        std::any_of(settings_->recipients.begin(), settings_->recipients.end(),
                    [&](const auto& r) { return r.address == letter.recipient && r.brief; });
    for (const std::string& broken : rules::broken_by(letter, brief, settings_->calendar)) {
      complaints_.add("letters keep their form", what + ": " + broken);
    }
    return;
  }
  const auto row = witness.letter(item);
  if (!row) {
    complaints_.add("nothing is sent before it is stored", what + ": no such row is committed");
    return;
  }
  if (row->state != "sending") {
    complaints_.add("nothing is sent before it is stored", what + ": its row is " + row->state);
  }
  if (row->identity != letter.id || row->recipient != letter.recipient) {
    complaints_.add("nothing is sent before it is stored", what + ": its row is another letter");
  }
  const bool said = letter.body.find("You may already have this letter") != std::string::npos;
  if (said != (row->doubts > 0)) {
    complaints_.add("a repeat says so", what + ": doubts " + std::to_string(row->doubts));
  }
  for (const std::string& text : {letter.subject, letter.body}) {
    const std::string word = rules::forbidden_in(text);
    if (!word.empty()) complaints_.add("letters keep their form", what + " says " + word);
  }
  if (rules::code_points(letter.subject) > 70) {
    complaints_.add("letters keep their form", what + ": as sent the subject is too long");
  }
}

void Judge::dot(Witness& witness, std::int64_t item) {
  if (service::Distress::mine(item)) return;
  const auto row = witness.letter(item);
  if (!row || row->state != "in_doubt") {
    complaints_.add("the doubt is marked before the last dot",
                    "letter " + std::to_string(item) + " is " + (row ? row->state : "not there"));
  }
}

void Judge::returned(Witness& witness) {
  std::map<std::int64_t, std::string> there;
  for (const auto& row : witness.letters_after(0)) there[row.id] = row.identity;
  for (const auto& [id, seen] : letters_) {
    const auto row = there.find(id);
    if (row == there.end() || row->second != seen.row.identity) {
      complaints_.add("nothing is lost", "letter " + std::to_string(id) + " \"" + seen.row.subject +
                                             "\" is gone from the store");
    }
  }
  std::set<std::int64_t> said;
  for (const auto& row : witness.said_after(0)) said.insert(row.id);
  for (const auto& one : said_) {
    if (said.count(one.row.id) == 0) {
      complaints_.add("nothing is lost", "what was said of " + one.row.subject + " is forgotten");
    }
  }
}

}  // namespace simulation
