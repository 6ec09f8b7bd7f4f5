// See carrier.hpp.
#include "run/service/carrier.hpp"

#include <algorithm>

namespace antherd::service {
namespace {

constexpr Seconds unkept_tried_again{60};

outbox::Ending ending_of(mail::How how) {
  switch (how) {
    case mail::How::accepted:
      return outbox::Ending::accepted;
    case mail::How::wait:
      return outbox::Ending::wait;
    case mail::How::refused:
      return outbox::Ending::parked;
    case mail::How::in_doubt:
      return outbox::Ending::in_doubt;
    case mail::How::settings_trouble:
      return outbox::Ending::settings_trouble;
  }
  return outbox::Ending::wait;
}

outbox::Concern concern_of(mail::About about) {
  switch (about) {
    case mail::About::server:
      return outbox::Concern::server;
    case mail::About::recipient:
      return outbox::Concern::recipient;
    case mail::About::letter:
      return outbox::Concern::letter;
  }
  return outbox::Concern::server;
}

outbox::Receipt receipt_of(std::int64_t item, const mail::Spoken& spoken, Instant now) {
  outbox::Receipt receipt;
  receipt.item = item;
  receipt.ending = ending_of(spoken.how);
  receipt.concern = concern_of(spoken.about);
  receipt.code = spoken.code;
  receipt.sentence = spoken.sentence;
  receipt.at = now;
  return receipt;
}

bool is_open(outbox::State state) {
  return state == outbox::State::waiting || state == outbox::State::sending ||
         state == outbox::State::in_doubt;
}

}  // namespace

Carrier::Carrier(std::shared_ptr<const settings::Settings> settings, store::Store& store, Send send)
    : settings_(std::move(settings)), store_(store), send_(std::move(send)) {}

Outcome Carrier::load(Instant now) {
  auto line = store_.line();
  if (!line) return line.failure();
  stored_line_ = *line;
  line_ = outbox::reopen(*line);
  auto items = store_.letters_open();
  if (!items) return items.failure();
  for (const outbox::Item& item : *items) {
    if (auto done = update(outbox::recover(item, now)); !done) return done;
  }
  return refresh();
}

Outcome Carrier::refresh() {
  auto items = store_.letters_open();
  if (!items) return items.failure();
  // What is in the worker's hands is known better here than there.
  const outbox::Item* mine = in_hand_ != 0 ? find(in_hand_) : nullptr;
  const std::optional<outbox::Item> kept = mine ? std::optional(*mine) : std::nullopt;
  items_ = std::move(*items);
  if (kept) {
    if (outbox::Item* item = find(in_hand_)) *item = *kept;
  }
  auto line = store_.line();
  if (!line) return line.failure();
  // Another line than the one we left there is a person's wish, made by a command.
  if (!(*line == stored_line_)) line_ = stored_line_ = *line;
  for (const auto& [id, ended] : unkept_) {
    if (outbox::Item* item = find(id)) *item = ended;
  }
  drop_closed();
  return Done{};
}

outbox::Item* Carrier::find(std::int64_t id) {
  const auto item =
      std::find_if(items_.begin(), items_.end(), [&](const outbox::Item& i) { return i.id == id; });
  return item == items_.end() ? nullptr : &*item;
}

Outcome Carrier::update(const outbox::Item& item) {
  auto done = store_.update(item, line_);
  if (done) stored_line_ = line_;
  return done;
}

Outcome Carrier::keep(const outbox::Item& item) {
  if (auto done = update(item); !done) return done;
  if (outbox::Item* known = find(item.id)) *known = item;
  drop_closed();
  return Done{};
}

void Carrier::drop_closed() {
  std::erase_if(items_, [](const outbox::Item& i) { return !is_open(i.state); });
}

Outcome Carrier::keep_unkept() {
  while (!unkept_.empty()) {
    const auto first = unkept_.begin();
    if (auto done = update(first->second); !done) return done;
    unkept_.erase(first);
  }
  return Done{};
}

std::string Carrier::rest(const Failure& failure, Instant now) {
  rest_until_ = now + unkept_tried_again;
  return failure.sentence();
}

bool Carrier::resting(Instant now) const {
  // A longer rest was begun by a clock that has been set back since.
  return now < rest_until_ && rest_until_ - now <= unkept_tried_again;
}

std::vector<std::string> Carrier::carry(Instant now) {
  std::vector<std::string> said;
  if (!settings_->mail || in_hand_ != 0 || resting(now)) return said;
  // Nothing goes out while the store cannot take down what becomes of it.
  if (auto done = keep_unkept(); !done) return said.push_back(rest(done.failure(), now)), said;
  // A folder takes everything that is due at once, a server one letter at a time.
  for (bool more = true; more && in_hand_ == 0;) {
    more = false;
    const outbox::Plan plan = outbox::plan(items_, line_, now);
    for (const std::int64_t id : plan.expired) {
      const outbox::Item expired = outbox::expire(*find(id), now);
      if (auto done = keep(expired); !done) return said.push_back(rest(done.failure(), now)), said;
      said.push_back("a letter to " + expired.letter.recipient + " was parked: " + expired.answer);
    }
    if (!plan.send) break;
    const outbox::Item item = outbox::take(*find(*plan.send), now);
    if (auto done = keep(item); !done) {
      said.push_back(rest(done.failure(), now));
      break;
    }
    if (settings_->mail->server) {
      in_hand_ = item.id;
      send_(*settings_->mail->server, item.id, outbox::as_sent(item, now));
    } else {
      said.push_back(write_file(item, now));
      more = line_.failures == 0;
    }
  }
  return said;
}

std::string Carrier::write_file(outbox::Item item, Instant now) {
  const auto letter = outbox::as_sent(item, now);
  // As before the last dot: whoever fetches the files may have it when we end before saying so.
  if (auto done = keep(outbox::doubt(item, now)); !done) {
    return received(item.id,
                    {mail::How::wait, mail::About::server, 0, done.failure().sentence(), ""}, now);
  }
  const auto path = mail::write_eml(settings_->mail->folder, settings_->mail->from, letter);
  mail::Spoken spoken;
  spoken.how = path ? mail::How::accepted : mail::How::wait;
  if (!path && !mail::as_rfc5322(letter, settings_->mail->from)) {
    spoken.how = mail::How::refused;  // the letter itself: it must not stand before the others
    spoken.about = mail::About::letter;
  }
  spoken.sentence = path ? "written to " + *path : path.failure().sentence();
  return received(item.id, spoken, now);
}

bool Carrier::before_dot(std::int64_t item, Instant now) {
  const outbox::Item* known = find(item);
  if (known == nullptr || item != in_hand_) return false;
  return static_cast<bool>(keep(outbox::doubt(*known, now)));
}

std::string Carrier::received(std::int64_t item, const mail::Spoken& spoken, Instant now) {
  if (item == in_hand_) in_hand_ = 0;
  const outbox::Item* known = find(item);
  if (known == nullptr) return {};
  const outbox::Receipt receipt = receipt_of(item, spoken, now);
  const outbox::Item next = outbox::receive(*known, receipt);
  line_ = outbox::receive(line_, receipt, jitter());
  const std::string sentence = "letter to " + next.letter.recipient + " \"" + next.letter.subject +
                               "\" is " + outbox::name_of(next.state) + ": " + spoken.sentence;
  const Outcome kept = keep(next);
  if (kept) return sentence;
  // The end of a conversation is a fact even when the store does not take it now: were it left
  // `sending`, no other letter would ever go.
  unkept_[item] = next;
  *find(item) = next;
  drop_closed();
  return sentence + "; " + kept.failure().sentence();
}

std::optional<Instant> Carrier::look_again(Instant now) const {
  if (!settings_->mail || in_hand_ != 0) return std::nullopt;
  if (!unkept_.empty()) return now + unkept_tried_again;
  if (resting(now)) return rest_until_;
  const outbox::Plan plan = outbox::plan(items_, line_, now);
  return plan.send ? std::optional(now) : plan.look_again;
}

std::optional<Instant> Carrier::oldest_waiting() const {
  std::optional<Instant> oldest;
  for (const outbox::Item& item : items_) {
    if (!oldest || item.letter.decided < *oldest) oldest = item.letter.decided;
  }
  return oldest;
}

/// Spreads retries: a fixed sequence will do (multiplicative congruence, Knuth), no randomness.
double Carrier::jitter() {
  draws_ = draws_ * 6364136223846793005ULL + 1442695040888963407ULL;
  return static_cast<double>(draws_ >> 11) / 9007199254740992.0;
}

}  // namespace antherd::service
