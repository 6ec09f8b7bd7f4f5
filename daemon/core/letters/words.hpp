// Figures, times and lists as a reader says them: in the reader's units, on the farm's clock.
// Spaces inside a figure are glue (wrap.hpp), so that no line breaks between number and unit.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "core/letters/compose.hpp"
#include "core/risk/rules.hpp"
#include "core/units/quantity.hpp"
#include "core/units/time.hpp"

namespace antherd::letters {

class Words {
 public:
  explicit Words(const Desk& desk);

  const Desk& desk() const { return desk_; }
  const Calendar& calendar() const { return calendar_; }
  /// Thresholds of a field: its own when the desk has them.
  const risk::HeatRules& heat_rules(const std::string& field) const;

  /// "97 °F" or "36.4 °C". Where rounding would carry it across a threshold that it did not
  /// reach, a finer figure is printed that does not.
  std::string temperature(Celsius t, const risk::HeatRules& rules = {}) const;
  /// "95 °F", "100.4 °F" or "32.2 °C".
  std::string threshold(Celsius t) const;
  /// The same as a bare number for a table's heading, rounded: "95".
  std::string threshold_number(Celsius t) const;
  /// The bare number of a temperature for a table: "97" or "36.4".
  std::string temperature_number(Celsius t, const risk::HeatRules& rules = {}) const;
  std::string unit() const { return us() ? "°F" : "°C"; }
  /// One degree of the what-if: "2 °F (1 °C)" or "1 °C".
  std::string one_degree() const;
  /// "4 °F" or "2 °C" of a difference.
  std::string difference(CelsiusDifference d) const;
  /// "0.5 in" or "12 mm".
  std::string depth(Millimetre water) const;

  /// "3 pm", "3:05 pm", "noon", "midnight".
  std::string clock(Instant at) const;
  /// "Tue 14 Jul": for days that are past or today only.
  std::string day(CivilDay day) const;
  /// "3 pm" today, else "Mon 13 Jul 3 pm". For moments that are past.
  std::string when(Instant at) const;
  /// The same for the end of an hour: midnight belongs to the day that it ends.
  std::string closing(Instant end) const;
  /// The civil day of the hour that ends there.
  CivilDay day_of_end(Instant end) const { return calendar_.day_of(end - Seconds{1}); }
  /// "Tue 14 Jul ± 3 d": a date that is an estimate or lies ahead. At least ± 1 d.
  std::string about(CivilDay day, double days) const;
  /// The same, but a plain date where it is past.
  std::string past_or_about(CivilDay day, double days) const;
  /// "2026-07-14", for commands.
  std::string iso(CivilDay day) const;
  /// "tonight at 7 pm", "tomorrow at 7 pm", "Mon 6 am" for a moment within a week ahead.
  std::string ahead(Instant at) const;
  CivilDay today() const { return calendar_.day_of(desk_.now); }

 private:
  bool us() const { return desk_.units == Units::us; }
  double shown(Celsius t) const { return us() ? t.value * 1.8 + 32.0 : t.value; }

  const Desk& desk_;
  Calendar calendar_;
  risk::HeatRules usual_;
};

/// A number with so many decimals, locale-free, never "-0".
std::string number(double value, int decimals);
/// "3" … and "one hour", "3 hours" with the noun made plural.
std::string count(int n, std::string_view noun);
/// The same for logs and screens, whose spaces may all break.
std::string plain_count(std::size_t n, std::string_view noun);
/// "a, b and c".
std::string list(const std::vector<std::string>& things);
/// "3 h", "2 d 4 h".
std::string duration(Seconds length);
/// Of flowers: "about 12 in 100", "fewer than 1 in 100", "none".
std::string in_hundred(double share);
/// Of a chance: "about 8 in 10", "fewer than 1 in 10", "more than 9 in 10".
std::string in_ten(double chance);
/// "Severe"; none is "below Moderate".
std::string level_word(risk::Level level);
/// "Severe" of a CAP severity.
std::string severity_word(alerts::Severity severity);
/// "mildew", "no data": what a reader calls a kind.
std::string kind_words(alerts::Kind kind);
/// "first anthers" of a stage code; a code without a word is "stage 63".
std::string stage_words(int code);
/// Joins sentences that are not empty by one space.
std::string join(const std::vector<std::string>& sentences);
/// First letter as a capital (ASCII only; names keep their own).
std::string capital(std::string text);

}  // namespace antherd::letters
