// From a station's way of writing time to instants: a small locale-free reader of strptime-like
// forms, ISO 8601 and Unix time, with a zone's clock changes. Knows no clock: `now` is given.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "core/failures/result.hpp"
#include "edge/station/form.hpp"

namespace antherd::station {

/// Reads the times of one file or answer, in the order in which they stand there.
///
/// A clock reading that a zone has twice (autumn) is told apart by that order: the first pass
/// until the readings step back, that is until one is not later than the one before it, then the
/// second pass. What this cannot know: where the whole first pass is missing from an hourly file,
/// its only row of the repeated hour is taken for the first pass (an hour early; the hour after it
/// is a gap). A row that stands behind later ones is taken as a new start of the file.
class TimeReader {
 public:
  /// Fails by name on a form that cannot give an instant.
  /// @param now  times more than 10 min ahead of it are refused; none, or a `now` before 2000
  ///             (a clock that is not set): no such test
  static Result<TimeReader> make(const TimeForm& form, std::optional<Instant> now);

  /// The instant of a text, or nothing with the reason. Fractions of a second are cut off.
  /// How far the time that was read last is ahead, where it was refused for that.
  std::optional<Seconds> ahead() const { return ahead_; }
  std::optional<Instant> read(std::string_view text, std::string& reason);

  /// The instant last read within two days of a clock change: what tells the passes apart.
  /// Kept between the pieces of one file.
  std::optional<Instant> memory() const { return memory_; }
  void remember(std::optional<Instant> memory) { memory_ = memory; }

  /// A single answer has no order: of two meanings the one nearer to `now` is taken.
  void prefer_near(Instant now) { near_ = now; }

 private:
  enum class Form { pattern, iso, unix_s, unix_ms };
  enum class Part {
    year,
    year2,
    month,
    day,
    hour,
    hour12,
    minute,
    second,
    day_of_year,
    half_day,
    month_name,
    offset,
    space,
    literal,
  };
  struct Step {
    Part part;
    char literal;
  };
  struct Clock {
    int year = 0, month = 1, day = 1, hour = 0, minute = 0, second = 0;
    int day_of_year = 0;  // 0: not given
    int half = -1;        // 0 AM, 1 PM
    std::optional<Seconds> offset;
  };
  struct Day {  // of the row before: rows of one day share it
    int year = 0, month = 0, day = 0;
    Seconds start{0};  // of the clock's midnight, as if it were UTC
    Seconds offset{0};
    bool plain = false;  // no clock change near
  };

  TimeReader() = default;
  std::optional<Failure> compile(const TimeForm& form);
  std::optional<Failure> complete() const;
  bool has(Part part) const;
  void add(Part part, char literal = 0) { steps_.push_back(Step{part, literal}); }
  bool read_pattern(std::string_view text, Clock& clock, std::string& reason) const;
  static bool read_step(const Step& step, const char*& at, const char* end, Clock& clock,
                        std::string& reason);
  static bool read_iso(std::string_view text, Clock& clock, std::string& reason);
  std::optional<Instant> read_unix(std::string_view text, std::string& reason) const;
  std::optional<Instant> from_clock(Clock& clock, std::string& reason);
  bool find_day(Clock& clock, std::string& reason);
  std::optional<Instant> resolve(CivilTime reading, std::string& reason);
  Instant choose(const Calendar::Meaning& meaning) const;
  bool in_range(Instant at, std::string& reason);

  Form form_ = Form::pattern;
  std::vector<Step> steps_;
  Calendar zone_;
  std::optional<Instant> latest_;
  std::optional<Seconds> ahead_;
  std::optional<Instant> near_;
  std::optional<Instant> memory_;
  Day day_;
};

}  // namespace antherd::station
