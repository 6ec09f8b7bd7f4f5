// A station's form made ready to use: every unit a conversion, every "missing" word known. Shared
// by the CSV and the JSON reader; knows neither text layout.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "core/failures/result.hpp"
#include "core/weather/sample.hpp"
#include "edge/station/form.hpp"

namespace antherd::station {

enum class Element { temperature, humidity, dew_point, rain, wind, solar, wetness };

/// Trade unit to the core's: (x - minus) * times / divide, so that 95 °F is 35 °C exactly.
struct Scale {
  double minus = 0, times = 1, divide = 1;
  double apply(double x) const { return (x - minus) * times / divide; }
};

/// One value to be read: from where, as what.
struct Measure {
  Element element = Element::temperature;
  const char* word = "";  // "temperature"
  std::string at;         // column or pointer
  Scale scale;
};

class Recipe {
 public:
  /// Fails by name on a unit that does not measure its element, on MJ/m2 (a sum over an interval
  /// that the form does not give), and on a form without any value.
  static Result<Recipe> make(const RecordForm& form);

  const std::vector<Measure>& measures() const { return measures_; }
  bool missing(std::string_view word) const;
  bool missing(double number) const;
  /// Puts a raw value into a sample, converted. False, with the reason, for leaf wetness longer
  /// than the interval it speaks of; the sample is then left without it.
  bool put(const Measure& measure, double raw, weather::Sample& sample, std::string& reason) const;

 private:
  std::optional<Failure> add(Element element, const char* word, const ValueForm& form, bool counts);
  double wet_minutes(double raw) const;

  std::vector<Measure> measures_;
  std::vector<std::string> missing_words_;
  std::vector<double> missing_numbers_;
  std::optional<WetWhen> wet_when_;
  double interval_minutes_ = 15;
};

}  // namespace antherd::station
