// What was learned more than 12 h after it happened: one letter for all of it.
#include <algorithm>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

std::string figure_words(Kind kind, double figure, const std::string& subject, const Words& words) {
  if (kind == Kind::heat || kind == Kind::heat_ahead) {
    return words.temperature(Celsius(figure), words.heat_rules(subject));
  }
  if (kind == Kind::humid_spell) return std::string("score") + glue + number(figure, 1);
  if (kind == Kind::no_data) return number(figure, 0) + glue + "h silent";
  return "";
}

std::string phase_words(const alerts::Change& change) {
  switch (change.phase) {
    case alerts::Phase::opened:
      return "opened at " + level_word(change.level);
    case alerts::Phase::raised:
      return "rose to " + level_word(change.level);
    case alerts::Phase::lowered:
      return "fell to " + level_word(change.level);
    case alerts::Phase::closed:
      return change.detail == alerts::season_over ? "closed with the season" : "ended";
  }
  return "";
}

std::string date_and_time(Instant end, const Words& words) {
  return words.day(words.day_of_end(end)) + glue + words.clock(end);
}

std::string notice_words(const Telling& telling) {
  if (telling.key == "window-near") return "flowering window near";
  if (telling.key == "window-opens") return "flowering window opened";
  if (telling.key == "window-closes") return "flowering window about to close";
  if (telling.key.starts_with("note-held")) return "a note that does not fit the estimate";
  return kind_words(telling.kind);
}

bool goes_on(const Telling& telling) {
  return !telling.changes.empty() && telling.changes.back().phase != alerts::Phase::closed;
}

std::vector<std::string> happened(const std::vector<Telling>& tellings, const Words& words) {
  std::vector<std::string> lines;
  for (const Telling& telling : tellings) {
    const std::string who = plain(telling.subject) + ", ";
    if (telling.changes.empty()) {
      const std::string what = telling.saying == Saying::notice
                                   ? notice_words(telling)
                                   : kind_words(telling.kind) + " " + level_word(telling.level);
      lines.push_back(date_and_time(telling.about, words) + ": " + who + what);
    }
    for (const alerts::Change& change : telling.changes) {
      std::string line = date_and_time(change.at, words) + ": " + who + kind_words(telling.kind) +
                         " " + phase_words(change);
      if (change.figure && change.phase != alerts::Phase::closed) {
        const std::string figure =
            figure_words(telling.kind, *change.figure, telling.subject, words);
        if (!figure.empty()) line += ", " + figure;
      }
      lines.push_back(line);
    }
    if (goes_on(telling))
      lines.push_back("Now: " + who + kind_words(telling.kind) + " still lasts");
  }
  return lines;
}

/// A station whose trouble is told late and is not over: nothing past about that.
bool silent_still(const Telling& telling) {
  return telling.kind == Kind::no_data && goes_on(telling);
}

std::string tonight_of(const Telling& worst, const FieldStatus* status) {
  if (status != nullptr) return tonight_and_mildew(*status);
  if (silent_still(worst)) {
    return "Tonight: it still lasts; what hangs on this station is not watched. Go by your own "
           "thermometer.";
  }
  if (goes_on(worst)) return "Tonight: it still lasts. See antherd now.";
  return "Tonight: nothing hangs on this news any more.";
}

/// Both hazards of each field that the news is about.
std::vector<Section> as_it_stands(const std::vector<Telling>& tellings, const Words& words) {
  std::vector<Section> sections;
  std::vector<std::string> done;
  constexpr std::size_t most = 4;  // fields told in full
  for (const Telling& telling : tellings) {
    const FieldStatus* status = status_of(words.desk(), telling.subject);
    if (status == nullptr || done.size() >= most ||
        std::find(done.begin(), done.end(), telling.subject) != done.end()) {
      continue;
    }
    done.push_back(telling.subject);
    const std::string name = plain(telling.subject);
    sections.push_back(heat_side(*status, words));
    sections.back().heading = "HEAT (" + name + ")";
    sections.push_back({"MILDEW (" + name + ")", mildew_side(*status, words), {}, true});
    sections.push_back({"FLOWER (" + name + ")", flower_paragraph(*status, words), {}, true});
  }
  for (Section& section : sections) section.heading = clip(section.heading, page_width);
  return sections;
}

/// When the gravest of the changes was decided.
Instant gravest_moment(const Telling& telling) {
  for (const alerts::Change& change : telling.changes) {
    if (change.level == telling.level && change.phase != alerts::Phase::lowered) return change.at;
  }
  return telling.about;
}

}  // namespace

Part late_part(const std::vector<Telling>& tellings, const Words& words) {
  const Telling& worst = tellings.front();
  const FieldStatus* status = status_of(words.desk(), worst.subject);
  Part part;
  const std::string what = worst.saying == Saying::notice
                               ? notice_words(worst)
                               : kind_words(worst.kind) + " " + level_word(worst.level);
  part.lead = "Learned late, " + what;
  if (worst.saying != Saying::notice && worst.level == Level::none) {
    part.lead = "Learned late, " + kind_words(worst.kind) + " ended";
  }
  part.name = plain(worst.subject);
  std::string figure =
      worst.figure ? figure_words(worst.kind, *worst.figure, worst.subject, words) : "";
  // Of a silence that lasts the first hours say too little.
  if (silent_still(worst)) figure = "silent since " + words.when(worst.start);
  const Instant when = gravest_moment(worst);
  const std::string at = date_and_time(when, words);
  const std::string moment = at.substr(at.find(glue) + 1);
  part.rest = silent_still(worst) ? figure : (figure.empty() ? "" : figure + " ") + moment;
  if (status != nullptr) part.rest += ", " + flower_tag(*status);
  part.first = part.name + ": " + (status == nullptr ? "" : flower_state(*status) + ", ") +
               "learned late: " + what + (figure.empty() ? "" : ", " + figure) +
               (silent_still(worst) ? "" : ", " + at) + ".";
  part.tonight = tonight_of(worst, status);
  part.sections.push_back({"LEARNED LATE",
                           "These readings or notes came in more than 12 h after their time. Had "
                           "they come in time, each would have had its own letter.",
                           {},
                           true,
                           happened(tellings, words)});
  for (Section& section : as_it_stands(tellings, words)) {
    part.sections.push_back(std::move(section));
  }
  if (status != nullptr) {
    part.sections.push_back({"SURE?", data_paragraph(*status, words, true), {}, true});
  }
  part.next =
      "Why so late? See the station's data path: antherd check. New changes get their own "
      "letters at once.";
  part.brief = status == nullptr
                   ? (goes_on(worst) ? "It still lasts: see antherd now." : "See antherd now.")
                   : tonight_in_brief(*status);
  part.still = goes_on(worst) ? "This still lasted when it was decided."
                              : "This was already past when it was decided.";
  return part;
}

}  // namespace antherd::letters
