// A mail server that is well, or has one of the troubles of the menu. It remembers what it took.
#pragma once

#include <map>
#include <string>
#include <vector>

#include "core/letters/letter.hpp"
#include "menu.hpp"
#include "support/weather_generator.hpp"

namespace simulation {

/// How one conversation goes.
enum class Course {
  accepted,
  no_line,         // refused, no route, no name
  put_off,         // 421 at the greeting
  put_off_letter,  // 451 after the dot
  refused,         // 550 at RCPT
  login,           // 535
  lost_in_body,
  silent_taken,  // no answer after the dot, and the letter was taken
  silent_gone,   // … and it was not
};

struct Delivery {
  Instant at;
  std::int64_t item = 0;
  std::string id, recipient, subject, body;
};

class MailServer {
 public:
  MailServer(const Kind& kind, std::uint64_t seed) : kind_(kind), dice_(seed * 17 + 3) {}
  void begin(const Fault& fault) { active_.insert_or_assign(fault.what, fault); }
  void end(const Fault& fault);
  Course course_of(const letters::Letter& letter);
  /// How long it thinks before an answer.
  Seconds thinks();
  void take(Instant at, std::int64_t item, const letters::Letter& letter);
  const std::vector<Delivery>& taken() const { return taken_; }
  bool well() const { return active_.empty(); }

 private:
  bool has(What what) const { return active_.count(what) != 0; }
  const Kind& kind_;
  synthetic::Dice dice_;
  std::map<What, Fault> active_;
  std::vector<Delivery> taken_;
};

}  // namespace simulation
