// See mail_server.hpp.
#include "mail_server.hpp"

namespace simulation {

void MailServer::end(const Fault& fault) {
  const auto active = active_.find(fault.what);
  if (active != active_.end() && active->second.from == fault.from) active_.erase(active);
}

Course MailServer::course_of(const letters::Letter& letter) {
  if (has(What::offline) || has(What::mail_down)) return Course::no_line;
  if (has(What::mail_login)) return Course::login;
  if (has(What::mail_4xx)) return dice_.uniform() < 0.5 ? Course::put_off : Course::put_off_letter;
  const auto bad = active_.find(What::mail_5xx_recipient);
  if (bad != active_.end()) {
    const auto which = bad->second.dice % static_cast<std::uint64_t>(kind_.recipients);
    if (letter.recipient == address_of(static_cast<int>(which))) return Course::refused;
  }
  if (has(What::mail_lost_body) && dice_.uniform() < 0.7) return Course::lost_in_body;
  if (has(What::mail_silent) && dice_.uniform() < 0.6) {
    return dice_.uniform() < 0.5 ? Course::silent_taken : Course::silent_gone;
  }
  return Course::accepted;
}

Seconds MailServer::thinks() {
  if (!has(What::mail_slow)) return Seconds{0};
  return Seconds{static_cast<std::int64_t>(dice_.uniform() * 580)};
}

void MailServer::take(Instant at, std::int64_t item, const letters::Letter& letter) {
  taken_.push_back({at, item, letter.id, letter.recipient, letter.subject, letter.body});
}

}  // namespace simulation
