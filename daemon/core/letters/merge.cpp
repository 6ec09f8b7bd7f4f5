// From tellings to letters: who gets what, what merges, and in which order.
#include <algorithm>
#include <map>
#include <string_view>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

constexpr Seconds alert_holds{72 * 3600};
constexpr std::size_t most_in_parts = 64;  // entries of one second that are parted into turns

bool over(const Telling& telling) {
  return telling.saying == Saying::eased || telling.saying == Saying::ended;
}

bool worse(const Telling& a, const Telling& b) {
  if (a.severity != b.severity) return a.severity > b.severity;
  if (over(a) != over(b)) return over(b);
  if (a.level != b.level) return a.level > b.level;
  if (a.subject != b.subject) return a.subject < b.subject;
  if (a.kind != b.kind) return a.kind < b.kind;
  return a.episode < b.episode;
}

bool late(const Telling& telling) { return telling.late || telling.saying == Saying::learned_late; }

/// A reminder speaks of now, not of the last change, which may be days old.
Telling brought_up(Telling telling, const Desk& desk) {
  if (telling.saying != Saying::reminder) return telling;
  const FieldStatus* status = status_of(desk, telling.subject);
  if (status == nullptr) return telling;
  if (telling.kind == Kind::heat && status->heat.today.t_max) {
    telling.about = status->as_of;
    telling.figure = status->heat.today.t_max->value;
  }
  if (telling.kind == Kind::humid_spell) {
    telling.about = status->as_of;
    if (status->humid.last && status->humid.last->r) telling.figure = status->humid.last->r;
  }
  return telling;
}

bool rise_in_severity(const std::vector<Telling>& tellings) {
  return std::any_of(tellings.begin(), tellings.end(), [](const Telling& telling) {
    return telling.saying == Saying::raised ||
           (telling.saying == Saying::opened && telling.level == Level::extreme);
  });
}

Letter envelope(const std::vector<Telling>& tellings, const Recipient& recipient,
                const Desk& desk) {
  Letter letter;
  letter.id = letter_id(tellings, recipient, desk);
  letter.recipient = recipient.address;
  letter.severity = tellings.front().severity;
  letter.decided = desk.now;
  letter.valid_until = desk.now + alert_holds;
  letter.raise = rise_in_severity(tellings);
  return letter;
}

void fill(Letter& letter, const Part& worst, const std::vector<Part>& others,
          const Recipient& recipient, const Words& words) {
  const Desk& desk = words.desk();
  letter.subject =
      subject_line(worst, desk.exercise ? "EXERCISE: " : "",
                   others.empty() ? "" : " +" + std::to_string(others.size()) + " more");
  letter.body = recipient.brief ? brief_of(worst, others.size(), desk) + "\n"
                                : body_of(worst, others, watch_words(recipient, words), desk);
  letter.still = unglued(worst.still);
}

Letter letter_of(const std::vector<Telling>& tellings, const Recipient& recipient,
                 const Words& words) {
  Letter letter = envelope(tellings, recipient, words.desk());
  letter.kind = alerts::name_of(tellings.front().kind);
  Part worst = part_of(brought_up(tellings.front(), words.desk()), words);
  std::vector<Part> others;
  for (std::size_t i = 1; i < tellings.size(); ++i) {
    others.push_back(part_of(brought_up(tellings[i], words.desk()), words));
  }
  const bool others_can_rise = std::any_of(
      tellings.begin() + 1, tellings.end(),
      [](const Telling& telling) { return !over(telling) && telling.level < Level::extreme; });
  if (tellings.front().level == Level::extreme && others_can_rise) {
    worst.next = "A letter at once if a field not yet at Extreme rises; a reminder after " +
                 duration(words.desk().remind_after) + " while it lasts; word when it eases.";
  }
  fill(letter, worst, others, recipient, words);
  return letter;
}

Letter late_letter(const std::vector<Telling>& tellings, const Recipient& recipient,
                   const Words& words) {
  Letter letter = envelope(tellings, recipient, words.desk());
  letter.kind = "learned_late";
  fill(letter, late_part(tellings, words), {}, recipient, words);
  return letter;
}

/// What goes to one recipient: a letter for each kind, and one for all that was learned late.
struct Groups {
  std::map<Kind, std::vector<Telling>> by_kind;
  std::vector<Telling> late;
};

Groups groups_of(std::span<const Telling> tellings, const Recipient& recipient, const Desk& desk) {
  Groups groups;
  for (const Telling& telling : tellings) {
    if (!gets(recipient, telling, desk)) continue;
    (late(telling) ? groups.late : groups.by_kind[telling.kind]).push_back(telling);
  }
  for (auto& [kind, group] : groups.by_kind) std::sort(group.begin(), group.end(), worse);
  std::sort(groups.late.begin(), groups.late.end(), worse);
  return groups;
}

/// An entry of the ledger as the telling that it records, as far as it tells letters apart.
Telling as_told(const alerts::Said& said) {
  Telling telling;
  telling.saying = said.saying;
  telling.kind = said.kind;
  telling.subject = said.subject;
  telling.episode = said.episode;
  telling.start = said.start;
  telling.level = said.level;
  telling.severity = alerts::severity_of(said.level);
  telling.about = said.about;
  if (said.saying != Saying::notice) return telling;
  telling.late = said.at - said.about > alerts::Policy{}.late_after;
  // "stage/north bench/window-near/2026-07-01": the key stands between subject and date.
  const std::size_t from =
      std::string_view(alerts::name_of(said.kind)).size() + 1 + said.subject.size() + 1;
  const std::size_t to = said.episode.rfind('/');
  if (to != std::string::npos && from < to) telling.key = said.episode.substr(from, to - from);
  return telling;
}

/// Those of one turn's tellings that this letter was made of.
std::vector<Telling> made_of(std::span<const Telling> tellings, const std::string& letter,
                             const Recipient& recipient, const Desk& desk) {
  const Groups groups = groups_of(tellings, recipient, desk);
  if (!groups.late.empty() && letter_id(groups.late, recipient, desk) == letter) return groups.late;
  for (const auto& [kind, group] : groups.by_kind) {
    if (letter_id(group, recipient, desk) == letter) return group;
  }
  return {};
}

}  // namespace

Part part_of(const Telling& telling, const Words& words) {
  switch (telling.kind) {
    case Kind::heat:
      return heat_part(telling, words);
    case Kind::heat_ahead:
      return heat_ahead_part(telling, words);
    case Kind::humid_spell:
      return humid_part(telling, words);
    case Kind::no_data:
    case Kind::doubtful_sensor:
      return station_part(telling, words);
    case Kind::mail_trouble:
      return service_part(telling, words);
    case Kind::stage:
    case Kind::sprinkler_streak:
    case Kind::diary_gap:
    case Kind::season:
      break;
  }
  return notice_part(telling, words);
}

std::string watch_words(const Recipient& recipient, const Words& words) {
  const Desk& desk = words.desk();
  const auto line = [&words](const std::string& what, Instant at) {
    return what + " comes " + words.ahead(at) + "; if it has not come by " +
           words.clock(at + one_hour) + ", the watch itself is down.";
  };
  const bool daily = std::any_of(desk.fields.begin(), desk.fields.end(), [&](const auto& entry) {
    return gets_field(recipient, entry.first) && in_daily(entry.second);
  });
  if (daily && desk.next_daily && *desk.next_daily > desk.now) {
    return line("The daily line", *desk.next_daily);
  }
  if (desk.next_weekly && *desk.next_weekly > desk.now) {
    return line("The weekly review", *desk.next_weekly);
  }
  return "";
}

std::vector<Letter> compose(std::span<const alerts::Telling> tellings,
                            std::span<const Recipient> recipients, const Desk& desk) {
  const Words words(desk);
  std::vector<Letter> letters;
  for (const Recipient& recipient : recipients) {
    const Groups groups = groups_of(tellings, recipient, desk);
    for (const auto& [kind, group] : groups.by_kind) {
      letters.push_back(letter_of(group, recipient, words));
    }
    if (!groups.late.empty()) letters.push_back(late_letter(groups.late, recipient, words));
  }
  return letters;
}

std::vector<Telling> trace(const Letter& letter, const Recipient& recipient,
                           std::span<const alerts::Said> said, const Desk& desk) {
  std::map<Instant, std::vector<Telling>> moments;
  for (const alerts::Said& entry : said) {
    if (entry.at <= letter.decided) moments[entry.at].push_back(as_told(entry));
  }
  for (const auto& [moment, tellings] : moments) {
    Desk then = desk;
    then.now = moment;
    // One turn's entries stand together, but a second may hold more than one turn.
    const std::size_t count = tellings.size();
    const std::size_t fewest = count > most_in_parts ? count : 1;
    for (std::size_t first = 0; first + fewest <= count; ++first) {
      for (std::size_t last = count; last >= first + fewest; --last) {
        auto found =
            made_of(std::span(tellings).subspan(first, last - first), letter.id, recipient, then);
        if (!found.empty()) return found;
      }
    }
  }
  return {};
}

}  // namespace antherd::letters
