// See former.hpp.
#include "run/service/former.hpp"

#include <algorithm>

namespace antherd::service {

Result<std::vector<std::string>> park_letters_of_former(const settings::Settings& settings,
                                                        store::Store& store, Instant now) {
  std::vector<std::string> said;
  if (!settings.mail) return said;
  auto waiting = store.letters_open();
  if (!waiting) return waiting.failure();
  const auto held = store.letters_held();
  if (!held) return held.failure();
  waiting->insert(waiting->end(), held->begin(), held->end());
  const auto line = store.line();
  if (!line) return line.failure();
  for (const outbox::Item& item : *waiting) {
    const std::string& address = item.letter.recipient;
    const bool known = std::any_of(settings.recipients.begin(), settings.recipients.end(),
                                   [&](const auto& one) { return one.address == address; });
    if (known) continue;
    const outbox::Item parked = outbox::give_up_recipient(item, now);
    if (auto done = store.update(parked, *line); !done) return done.failure();
    said.push_back("a letter to " + address + " was parked: " + parked.answer);
  }
  return said;
}

}  // namespace antherd::service
