// What the owner's work says to the log and to the service manager; see desk_work.hpp.
#include <algorithm>

#include "core/letters/words.hpp"
#include "edge/station/limits.hpp"
#include "run/service/attention.hpp"
#include "run/service/desk_work.hpp"
#include "run/service/log.hpp"

namespace antherd::service {
namespace {

std::string age_text(Seconds age) {
  const auto minutes = age.count() / 60;
  if (minutes < 120) return std::to_string(std::max<long>(0, minutes)) + " min";
  return std::to_string(minutes / 60) + " h";
}

}  // namespace

std::string DeskWork::status_line(Instant at) const {
  const Instant now = working(at);
  std::string line;
  for (const auto& station : settings_->stations) {
    const auto last =
        keeper_->lookout().last_sample(station.station.name, now + station::limits::ahead);
    line += station.station.name + ": " +
            (last ? "read " + age_text(now - *last) + " ago" : "no data yet") +
            (keeper_->lookout().lacks_temperature(station.station.name, now)
                 ? " (readings come without a temperature); "
                 : "; ");
  }
  const outbox::Line& mail = carrier_->line();
  line +=
      letters::plain_count(static_cast<std::size_t>(carrier_->waiting()), "letter") + " waiting";
  if (mail.last_success) line += ", last mail " + age_text(now - *mail.last_success) + " ago";
  if (!mail.trouble.empty()) line += ", mail: " + mail.trouble;
  if (!clock_set_) line += "; computer clock not set";
  if (const auto since = distress_.since()) {
    line += "; the store takes nothing since " + age_text(now - *since);
  }
  return line;
}

void DeskWork::life_answered(const Outcome& outcome, Instant now) {
  const std::string sentence = heartbeat_.answered(outcome, working(now));
  if (sentence.empty()) return;
  if (outcome) {
    log_info(sentence);
  } else {
    log_warning(sentence);
  }
}

void DeskWork::log_strange_fields(Instant now) {
  for (const std::string& name : strange_fields(*settings_, store_, now)) {
    log_warning("the diary holds entries of \"" + name +
                "\", a field that the settings do not name: they count for no field");
  }
}

/// That the store began anew where one had been.
void DeskWork::log_beginning() {
  reserve_told_ = store_.reserve_given();
  if (reserve_told_) {
    log_error(
        "the disk is full: the 8 MiB kept in reserve were given up to open the store; make "
        "room on the disk before they are used up");
  }
  const auto beginning = store_.beginning();
  const auto aside = store_.set_aside();
  if (!aside && !(beginning && *beginning)) return;
  std::string sentence =
      aside ? "the store was damaged; it was put aside as " + *aside : "the store was missing";
  sentence += " and a new one was begun: files in the drop folder are read again";
  if (beginning && *beginning && (*beginning)->copied) {
    const auto irrigations = static_cast<std::size_t>((*beginning)->irrigations);
    const auto notes = static_cast<std::size_t>((*beginning)->notes);
    sentence += "; from the weekly copy " + letters::plain_count(irrigations, "irrigation") +
                " and " + letters::plain_count(notes, "scouting note") +
                (irrigations + notes == 1 ? " was" : " were") +
                " taken back, those written down since are to be entered again";
  } else {
    sentence += "; irrigations and scouting notes are to be entered again";
  }
  log_error(sentence);
}

/// Whether the station that is told silent has sent other values since.
bool DeskWork::comes_bare(const alerts::Telling& telling) const {
  const Lookout& lookout = keeper_->lookout();
  return telling.kind == alerts::Kind::no_data && telling.saying != alerts::Saying::ended &&
         lookout.last_of_any(telling.subject) > lookout.last_sample(telling.subject);
}

void DeskWork::log_kept(const Kept& kept) {
  for (const alerts::Telling& telling : kept.tellings) {
    std::string sentence = std::string(alerts::name_of(telling.kind)) + " of " + telling.subject +
                           ", " + alerts::name_of(telling.severity);
    if (telling.figure) sentence += ", figure " + std::to_string(*telling.figure).substr(0, 5);
    if (!telling.key.empty()) sentence += ", " + telling.key;
    if (comes_bare(telling)) sentence += ": readings come, but carry no temperature";
    log_warning("alert: " + sentence);
  }
  for (const Failure& trouble : kept.troubles) {
    log_once("store " + trouble.what, trouble.sentence());
  }
  note_mail_trouble();
  if (kept.troubles.empty()) {
    std::erase_if(logged_, [](const auto& said) { return said.first.rfind("store ", 0) == 0; });
  }
}

/// A letter has waited 6 h: nobody can be told of that by letter, so the log says it.
void DeskWork::note_mail_trouble() {
  for (const alerts::Episode& episode : keeper_->lookout().episodes()) {
    if (episode.kind != alerts::Kind::mail_trouble || !episode.open()) continue;
    log_once(
        "mail trouble",
        "mail trouble: a letter has waited more than 6 h and none of those that waited so "
        "long has gone since; do not count on letters; see antherd letters" +
            (carrier_->line().trouble.empty() ? std::string() : "; " + carrier_->line().trouble));
    return;
  }
  if (logged_.erase("mail trouble") > 0) log_info("mail trouble is over: letters go again");
}

/// The same trouble is said once, until it changes or passes.
void DeskWork::log_once(const std::string& what, const std::string& sentence) {
  if (logged_[what] == sentence) return;
  logged_[what] = sentence;
  log_warning(sentence);
}

}  // namespace antherd::service
