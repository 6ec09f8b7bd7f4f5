// See recipe.hpp.
#include "edge/station/recipe.hpp"

#include <algorithm>

#include "edge/station/text.hpp"

namespace antherd::station {
namespace {

struct Unit {
  const char* name;
  Scale scale;
};

// The inch is 25.4 mm, the mile 1609.344 m, the nautical mile 1852 m, 0 °C = 273.15 K = 32 °F
// (international definitions; NIST SP 811, appendix B).
const std::vector<Unit>& units_of(Element element) {
  static const std::vector<Unit> temperature{
      {"degC", {}}, {"degF", {32, 5, 9}}, {"K", {273.15, 1, 1}}};
  static const std::vector<Unit> humidity{{"%", {}}, {"1", {0, 100, 1}}};
  static const std::vector<Unit> rain{{"mm", {}}, {"in", {0, 25.4, 1}}};
  static const std::vector<Unit> wind{
      {"m/s", {}}, {"mph", {0, 0.44704, 1}}, {"km/h", {0, 1, 3.6}}, {"kn", {0, 1852, 3600}}};
  static const std::vector<Unit> solar{{"W/m2", {}}};
  static const std::vector<Unit> wetness{{"min", {}}, {"h", {0, 60, 1}}, {"1", {}}};
  switch (element) {
    case Element::temperature:
    case Element::dew_point:
      return temperature;
    case Element::humidity:
      return humidity;
    case Element::rain:
      return rain;
    case Element::wind:
      return wind;
    case Element::solar:
      return solar;
    case Element::wetness:
      break;
  }
  return wetness;
}

Failure unusable(const std::string& on_what, const std::string& why, const std::string& next) {
  return Failure{"use the form of a station's readings", on_what, why, next};
}

}  // namespace

std::optional<Failure> Recipe::add(Element element, const char* word, const ValueForm& form,
                                   bool counts) {
  if (counts) {  // raw counts have no unit
    measures_.push_back(Measure{element, word, form.at, Scale{}});
    return std::nullopt;
  }
  if (form.unit == "MJ/m2") {
    return unusable(word, "MJ/m2 is a sum over an interval that the form does not give",
                    "let the station write W/m2");
  }
  std::string allowed;
  for (const Unit& unit : units_of(element)) {
    allowed += (allowed.empty() ? "" : ", ") + std::string(unit.name);
    if (form.unit != unit.name) continue;
    Scale scale = unit.scale;
    if (element == Element::wetness && form.unit == "1") scale.times = interval_minutes_;
    measures_.push_back(Measure{element, word, form.at, scale});
    return std::nullopt;
  }
  return unusable(word, "the unit " + quoted(form.unit, 20) + " does not measure it",
                  "allowed: " + allowed);
}

Result<Recipe> Recipe::make(const RecordForm& form) {
  Recipe recipe;
  recipe.interval_minutes_ = static_cast<double>(form.wetness_interval.count()) / 60.0;
  if (recipe.interval_minutes_ <= 0) {
    return unusable("wetness", "its interval is not longer than nothing", "give one, like 15 min");
  }
  recipe.wet_when_ = form.wet_when;
  if (form.wet_when) {
    const std::string& sign = form.wet_when->comparison;
    if (sign != ">=" && sign != ">" && sign != "<=" && sign != "<") {
      return unusable("wet_when", quoted(sign, 20) + " compares nothing", "write it like \">= 7\"");
    }
  }
  const std::pair<const std::optional<ValueForm>&, std::pair<Element, const char*>> wanted[] = {
      {form.temperature, {Element::temperature, "temperature"}},
      {form.humidity, {Element::humidity, "humidity"}},
      {form.dew_point, {Element::dew_point, "dew_point"}},
      {form.rain, {Element::rain, "rain"}},
      {form.wind, {Element::wind, "wind"}},
      {form.solar, {Element::solar, "solar"}},
      {form.wetness, {Element::wetness, "wetness"}}};
  for (const auto& [value, what] : wanted) {
    if (!value) continue;
    const bool counts = what.first == Element::wetness && form.wet_when.has_value();
    if (auto failure = recipe.add(what.first, what.second, *value, counts)) return *failure;
  }
  if (recipe.measures_.empty()) {
    return unusable("", "it names no value", "name at least temperature and humidity");
  }
  for (const std::string& word : form.missing) {
    const std::string_view trimmed = trim(word);
    double number = 0;
    if (read_number(trimmed, true, number) == NumberFault::none) {
      recipe.missing_numbers_.push_back(number);
    }
    recipe.missing_words_.emplace_back(trimmed);
  }
  return recipe;
}

bool Recipe::missing(std::string_view word) const {
  // An empty cell can be nothing but missing, listed or not.
  return word.empty() ||
         std::find(missing_words_.begin(), missing_words_.end(), word) != missing_words_.end();
}

bool Recipe::missing(double number) const {
  return std::find(missing_numbers_.begin(), missing_numbers_.end(), number) !=
         missing_numbers_.end();
}

double Recipe::wet_minutes(double raw) const {
  const double limit = wet_when_->threshold;
  const std::string& sign = wet_when_->comparison;
  const bool wet = sign == ">="  ? raw >= limit
                   : sign == ">" ? raw > limit
                   : sign == "<" ? raw < limit
                                 : raw <= limit;
  return wet ? interval_minutes_ : 0.0;
}

bool Recipe::put(const Measure& measure, double raw, weather::Sample& sample,
                 std::string& reason) const {
  const double value = measure.scale.apply(raw);
  switch (measure.element) {
    case Element::temperature:
      sample.temperature = Celsius{value};
      break;
    case Element::humidity:
      sample.humidity = Percent{value};
      break;
    case Element::dew_point:
      sample.dew_point = Celsius{value};
      break;
    case Element::rain:
      sample.rain = Millimetre{value};
      break;
    case Element::wind:
      sample.wind = MetrePerSecond{value};
      break;
    case Element::solar:
      sample.solar = WattPerSquareMetre{value};
      break;
    case Element::wetness: {
      const double minutes = wet_when_ ? wet_minutes(raw) : value;
      // A hundredth of a minute over is rounding of the station's own fractions.
      if (minutes < 0 || minutes > interval_minutes_ + 0.01) {
        reason = std::string(measure.word) + ": " + std::to_string(minutes) +
                 " wet minutes do not fit an interval of " + std::to_string(interval_minutes_) +
                 " min; the rest of the row is used";
        return false;
      }
      sample.wet_minutes = std::min(minutes, interval_minutes_);
      break;
    }
  }
  return true;
}

}  // namespace antherd::station
