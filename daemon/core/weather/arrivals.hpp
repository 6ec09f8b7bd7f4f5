// How old a station's newest reading is when it arrives: what is always old, or always ahead, comes
// of a clock that is off by less than sun or warmth can tell (suspicion.hpp), or comes late. Pure
// bookkeeping of arrivals that others saw; it must not know clocks, files or the network.
#pragma once

#include <optional>
#include <vector>

#include "core/units/time.hpp"

namespace antherd::weather {

struct Arrival {
  Instant at;   // by a computer's clock that is set
  Seconds age;  // from the reading's end to its arrival; below 0 where its stamp is ahead
  bool operator==(const Arrival&) const = default;
};

/// What the arrivals of a day say of a station's clock.
struct ClockDoubt {
  enum class How {
    behind,  // the newest reading was never less than `by` old; or its values come late
    ahead,   // it was always at least `by` ahead, and is still believed
    refused  // rows were refused, because they were at least `by` ahead, and none came that was not
  };
  How how = How::behind;
  Seconds by{0};
  bool operator==(const ClockDoubt&) const = default;
};

/// The arrivals of the last 24 h, hour by hour, so that a station of one reading a minute needs no
/// more room than another.
class Arrivals {
 public:
  struct Hour {
    HourStart hour;
    int came = 0;         // arrivals of a newest reading
    Seconds youngest{0};  // of them
    Seconds oldest{0};
    int refused = 0;         // rows that were ahead of the clock
    Seconds least_ahead{0};  // of those
    bool operator==(const Hour&) const = default;
  };

  /// A newest reading came and was believed.
  void came(Arrival arrival);
  /// So many rows came and were refused, each at least so much ahead.
  void refused(Instant at, int rows, Seconds least_ahead);
  /// What was refused is looked at again.
  void forget_refused();
  bool any_refused() const;

  /// After at least 12 arrivals over at least 12 h of the last 24: `behind` where each was more
  /// than 30 min beyond the interval old, `ahead` where each was at least 2 min ahead. `refused`
  /// where in the last 24 h nothing came but what was refused. Of anything else nothing.
  std::optional<ClockDoubt> doubt(Instant now, Seconds interval) const;
  const std::optional<Arrival>& last() const { return last_; }

  // To be kept elsewhere and brought back.
  const std::vector<Hour>& hours() const { return hours_; }
  Arrivals() = default;
  Arrivals(std::vector<Hour> hours, std::optional<Arrival> last)
      : hours_(std::move(hours)), last_(last) {}
  bool operator==(const Arrivals&) const = default;

 private:
  Hour& hour_at(Instant at);

  std::vector<Hour> hours_;  // in time order
  std::optional<Arrival> last_;
};

/// Beyond the interval between two readings; what is older on arrival comes late. A judgement.
constexpr Seconds late_on_arrival{30 * 60};

}  // namespace antherd::weather
