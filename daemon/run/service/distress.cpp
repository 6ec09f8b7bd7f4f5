// See distress.hpp.
#include "run/service/distress.hpp"

#include <algorithm>

#include "core/alerts/stations.hpp"
#include "run/service/post.hpp"

namespace antherd::service {
namespace {

/// At night only what is Severe or worse, in a recipient's quiet hours only Extreme.
bool lets_sleep(const letters::Letter& letter, const settings::Settings& settings, Instant now) {
  using alerts::Severity;
  const auto recipient =
      std::find_if(settings.recipients.begin(), settings.recipients.end(),
                   [&](const auto& known) { return known.address == letter.recipient; });
  const bool quiet = recipient != settings.recipients.end() &&
                     after_quiet(*recipient, settings.calendar, now) > now;
  const bool night = alerts::awake(now, &settings.calendar) != now;
  return (quiet && letter.severity < Severity::extreme) ||
         (night && letter.severity < Severity::severe);
}

}  // namespace

void Distress::note(const std::optional<Failure>& refused, Instant now, bool letters_go) {
  letters_go_ = letters_go;
  if (!refused) {
    since_.reset();
    return;
  }
  // A clock that was set back must not make the trouble begin in the future.
  if (!since_ || *since_ > now) since_ = now;
  why_ = "Could not " + refused->what + " (" + refused->on_what + "): " + refused->why;
}

/// What went stays told, and with it all that is not graver on that day: a level that falls, at
/// midnight perhaps, is no news; that letters wait too is. What did not go is tried again after a
/// while.
bool Distress::due(const letters::Letter& letter, CivilDay day, Instant now) const {
  const bool known = std::any_of(told_.begin(), told_.end(), [&](const auto& entry) {
    const Told& told = entry.second;
    return entry.first.first == letter.recipient && told.over && told.day == day &&
           told.letters_go == letters_go_ && told.severity >= letter.severity;
  });
  if (known) return false;
  const auto told = told_.find({letter.recipient, letter.id});
  if (told == told_.end()) return true;
  if (told->second.over) return false;
  return now - told->second.tried >= distress_tried_again || now < told->second.tried;
}

std::vector<std::string> Distress::carry(const settings::Settings& settings, const Desk& desk,
                                         const Send& send, Instant now) {
  std::vector<std::string> said;
  if (!settings.mail || in_hand_ || !since_ || now - *since_ < distress_after) return said;
  const auto letters = letters::compose_store_trouble({*since_, why_, begun_, letters_go_},
                                                      settings.recipients, desk());
  for (const letters::Letter& letter : letters) {
    const CivilDay day = letters::store_trouble_day(settings.calendar, now);
    if (!due(letter, day, now) || lets_sleep(letter, settings, now)) continue;
    told_[{letter.recipient, letter.id}] = {now, day, letter.severity, letters_go_, false};
    in_hand_ = letter;
    if (settings.mail->server) {
      send(*settings.mail->server, -1, letter);
      return said;
    }
    const auto path = mail::write_eml(settings.mail->folder, settings.mail->from, letter);
    mail::Spoken spoken;
    spoken.how = path ? mail::How::accepted : mail::How::wait;
    spoken.sentence = path ? "written to " + *path : path.failure().sentence();
    said.push_back(received(spoken, now));
  }
  return said;
}

std::string Distress::received(const mail::Spoken& spoken, Instant now) {
  if (!in_hand_) return {};
  const letters::Letter letter = *in_hand_;
  in_hand_.reset();
  Told& told = told_[{letter.recipient, letter.id}];
  told.tried = now;
  // One that may have arrived is not sent again: tomorrow's says the same.
  told.over = spoken.how == mail::How::accepted || spoken.how == mail::How::refused ||
              spoken.how == mail::How::in_doubt;
  return "letter past the store to " + letter.recipient + " \"" + letter.subject +
         "\": " + spoken.sentence;
}

}  // namespace antherd::service
