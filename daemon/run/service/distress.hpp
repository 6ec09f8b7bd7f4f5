// Word past the store: while it takes nothing, no letter can go through the outbox, and a worn card
// would look like a quiet season. One plain letter a person and day, and one more for each rise of
// the worst level, is carried without it. What was told is kept in memory alone. It must not know
// sockets, threads or what time it is.
#pragma once

#include <cstdint>
#include <functional>
#include <map>
#include <memory>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "core/letters/compose.hpp"
#include "edge/mail/mail.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

constexpr Seconds distress_after{30 * 60};        // shorter troubles mend themselves
constexpr Seconds distress_tried_again{30 * 60};  // as the outbox at its slowest

class Distress {
 public:
  /// @param begun  false: the store could not be opened, so nothing is watched
  explicit Distress(bool begun = true) : begun_(begun) {}

  using Send = std::function<void(mail::Server, std::int64_t item, letters::Letter)>;
  using Desk = std::function<letters::Desk()>;

  /// After each turn: what the store refused in it, if anything.
  /// @param letters_go  it refused readings alone, so that decisions and letters find room
  void note(const std::optional<Failure>& refused, Instant now, bool letters_go = false);
  /// Sends what is due, one letter at a time. Only while nobody else holds the line.
  /// @return sentences for the log
  std::vector<std::string> carry(const settings::Settings& settings, const Desk& desk,
                                 const Send& send, Instant now);
  /// Items at the line are numbered below zero, those of the outbox above.
  static bool mine(std::int64_t item) { return item < 0; }
  /// The conversation has ended. @return a sentence for the log
  std::string received(const mail::Spoken& spoken, Instant now);
  /// A letter is at the line.
  bool busy() const { return in_hand_.has_value(); }

  /// Since when the store has refused, while it does.
  std::optional<Instant> since() const { return since_; }

 private:
  struct Told {
    Instant tried;
    CivilDay day{};  // that it speaks of
    alerts::Severity severity = alerts::Severity::minor;
    bool letters_go = false;  // that readings alone find no room
    bool over = false;        // accepted, refused for good, or perhaps arrived
  };
  bool due(const letters::Letter& letter, CivilDay day, Instant now) const;

  bool begun_, letters_go_ = false;
  std::optional<Instant> since_;
  std::string why_;
  std::map<std::pair<std::string, std::string>, Told> told_;  // by address and letter
  std::optional<letters::Letter> in_hand_;
};

}  // namespace antherd::service
