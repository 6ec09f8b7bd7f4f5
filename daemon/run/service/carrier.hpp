// The carrier: takes letters out of the outbox, one at a time, and writes down what became of them
// before and after each step. The rules are core/outbox; here they meet the store and the mail
// edge. It must not know what the letters say.
#pragma once

#include <functional>
#include <map>
#include <memory>
#include <string>
#include <vector>

#include "core/outbox/outbox.hpp"
#include "edge/mail/mail.hpp"
#include "edge/store/store.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

class Carrier {
 public:
  /// Hands a letter to whoever speaks to the server.
  using Send = std::function<void(mail::Server, std::int64_t item, letters::Letter)>;

  Carrier(std::shared_ptr<const settings::Settings> settings, store::Store& store, Send send);

  /// At start: letters that were under way when we died are put right.
  Outcome load(Instant now);
  /// New letters are in the store.
  Outcome refresh();
  /// Sends what is due. @return sentences for the log
  std::vector<std::string> carry(Instant now);
  /// The last dot may go when this returns true: the mark is stored.
  bool before_dot(std::int64_t item, Instant now);
  /// The conversation has ended. @return a sentence for the log
  std::string received(std::int64_t item, const mail::Spoken& spoken, Instant now);

  /// Writes down the ends of conversations that the store did not take at their time: they are
  /// known here alone.
  Outcome keep_unkept();

  std::optional<Instant> look_again(Instant now) const;
  /// A letter is at the worker: its carrier must stay until the report has come.
  bool busy() const { return in_hand_ != 0; }
  int waiting() const { return static_cast<int>(items_.size()); }
  const outbox::Line& line() const { return line_; }
  std::optional<Instant> oldest_waiting() const;

 private:
  outbox::Item* find(std::int64_t id);
  Outcome update(const outbox::Item& item);
  Outcome keep(const outbox::Item& item);
  /// The sentence of a store that does not take a mark; the carrier rests for a minute.
  std::string rest(const Failure& failure, Instant now);
  bool resting(Instant now) const;
  void drop_closed();
  std::string write_file(outbox::Item item, Instant now);
  double jitter();

  std::shared_ptr<const settings::Settings> settings_;
  store::Store& store_;
  Send send_;
  std::vector<outbox::Item> items_;              // waiting, sending, in doubt
  outbox::Line line_, stored_line_;              // the second as it stands in the store
  std::int64_t in_hand_ = 0;                     // at the worker, 0 for none
  std::map<std::int64_t, outbox::Item> unkept_;  // ended, not yet stored, by id
  Instant rest_until_{};  // the store took a step's mark not: it is not asked without a pause
  std::uint64_t draws_ = 0;
};

}  // namespace antherd::service
