// See words.hpp.
#include "core/letters/words.hpp"

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>

#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

constexpr std::array<const char*, 7> weekdays{"Sun", "Mon", "Tue", "Wed", "Thu", "Fri", "Sat"};
constexpr std::array<const char*, 12> months{"Jan", "Feb", "Mar", "Apr", "May", "Jun",
                                             "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"};

std::string glued(std::string text) {
  std::replace(text.begin(), text.end(), ' ', glue);
  return text;
}

bool whole(double value) { return std::abs(value - std::round(value)) < 0.05; }

double rounded(double value, int decimals) {
  const double scale = std::pow(10.0, decimals);
  return std::round(value * scale) / scale;
}

}  // namespace

std::string number(double value, int decimals) {
  std::array<char, 400> text{};  // the longest finite double has 309 digits
  const double clean = rounded(value, decimals) == 0.0 ? 0.0 : value;
  const auto end = std::to_chars(text.data(), text.data() + text.size(), clean,
                                 std::chars_format::fixed, decimals);
  return std::string(text.data(), end.ptr);
}

std::string count(int n, std::string_view noun) {
  std::string text = std::to_string(n) + glue + std::string(noun);
  if (n != 1) text += "s";
  return text;
}

std::string plain_count(std::size_t n, std::string_view noun) {
  return std::to_string(n) + " " + std::string(noun) + (n == 1 ? "" : "s");
}

std::string list(const std::vector<std::string>& things) {
  std::string text;
  for (std::size_t i = 0; i < things.size(); ++i) {
    if (i > 0) text += i + 1 == things.size() ? " and " : ", ";
    text += things[i];
  }
  return text;
}

std::string duration(Seconds length) {
  const auto minutes = std::max<long long>(0, length.count() / 60);
  if (minutes < 60) return std::to_string(minutes) + glue + "min";
  const auto hours = minutes / 60;
  if (hours < 48) return std::to_string(hours) + glue + "h";
  const auto rest = hours % 24;
  std::string text = std::to_string(hours / 24) + glue + "d";
  if (rest > 0) text += glue + std::to_string(rest) + glue + "h";
  return text;
}

std::string in_hundred(double share) {
  if (share <= 0) return "none";
  const auto n = static_cast<int>(std::lround(share * 100));
  if (n < 1) return glued("fewer than 1 in 100");
  if (n > 99) return glued("nearly all");
  return glued("about " + std::to_string(n) + " in 100");
}

std::string in_ten(double chance) {
  const auto n = static_cast<int>(std::lround(chance * 10));
  if (n < 1) return glued("fewer than 1 in 10");
  if (n > 9) return glued("more than 9 in 10");
  return glued("about " + std::to_string(n) + " in 10");
}

std::string level_word(risk::Level level) {
  switch (level) {
    case risk::Level::none:
      return glued("below Moderate");
    case risk::Level::moderate:
      return "Moderate";
    case risk::Level::severe:
      return "Severe";
    case risk::Level::extreme:
      return "Extreme";
  }
  return "";
}

std::string severity_word(alerts::Severity severity) {
  switch (severity) {
    case alerts::Severity::minor:
      return "Minor";
    case alerts::Severity::moderate:
      return "Moderate";
    case alerts::Severity::severe:
      return "Severe";
    case alerts::Severity::extreme:
      return "Extreme";
  }
  return "";
}

std::string kind_words(alerts::Kind kind) {
  using alerts::Kind;
  switch (kind) {
    case Kind::heat:
      return "heat";
    case Kind::heat_ahead:
      return "heat ahead";
    case Kind::humid_spell:
      return "mildew weather";
    case Kind::no_data:
      return "no data";
    case Kind::doubtful_sensor:
      return "doubtful sensor";
    case Kind::mail_trouble:
      return "mail trouble";
    case Kind::stage:
      return "flowering window";
    case Kind::sprinkler_streak:
      return "sprinklers in a row";
    case Kind::diary_gap:
      return "gap in the water log";
    case Kind::season:
      return "no longer watched";
  }
  return "warning";
}

std::string stage_words(int code) {
  switch (code) {
    case field::stage::emerged:
      return "emerged";
    case field::stage::buds:
      return "buds";
    case field::stage::first_anthers:
      return "first anthers";
    case field::stage::full_flower:
      return "full flower";
    case field::stage::flowers_done:
      return "flowers done";
    case field::stage::milk:
      return "milk";
    case field::stage::dough:
      return "dough";
    case field::stage::ripe:
      return "ripe";
    default:
      return "stage " + std::to_string(code);
  }
}

std::string join(const std::vector<std::string>& sentences) {
  std::string text;
  for (const std::string& sentence : sentences) {
    if (sentence.empty()) continue;
    if (!text.empty()) text += ' ';
    text += sentence;
  }
  return text;
}

std::string capital(std::string text) {
  if (!text.empty() && text[0] >= 'a' && text[0] <= 'z') {
    text[0] = static_cast<char>(text[0] - 'a' + 'A');
  }
  return text;
}

Words::Words(const Desk& desk)
    : desk_(desk), calendar_(desk.calendar ? *desk.calendar : Calendar::fixed()) {}

const risk::HeatRules& Words::heat_rules(const std::string& field) const {
  const auto found = desk_.heat_rules.find(field);
  return found == desk_.heat_rules.end() ? usual_ : found->second;
}

std::string Words::temperature_number(Celsius t, const risk::HeatRules& rules) const {
  const double value = shown(t);
  int decimals = us() ? 0 : 1;
  double print = rounded(value, decimals);
  const auto crosses = [&](double candidate) {
    for (const Celsius limit : {rules.sustained, rules.severe, rules.extreme}) {
      // What is at the limit to the figure that the limit itself is printed with has reached it.
      const double label =
          whole(shown(limit)) ? std::round(shown(limit)) : rounded(shown(limit), 1);
      if ((t >= limit) != (candidate >= label - 1e-9)) return true;
    }
    return false;
  };
  if (crosses(print)) {
    decimals = 1;
    print = rounded(value, 1);
  }
  if (crosses(print)) print = std::floor(value * 10 - 1e-9) / 10;
  return number(print, decimals);
}

std::string Words::temperature(Celsius t, const risk::HeatRules& rules) const {
  return temperature_number(t, rules) + glue + unit();
}

std::string Words::threshold(Celsius t) const {
  return number(shown(t), whole(shown(t)) ? 0 : 1) + glue + unit();
}

std::string Words::threshold_number(Celsius t) const { return number(shown(t), 0); }

std::string Words::one_degree() const { return glued(us() ? "2 °F (1 °C)" : "1 °C"); }

std::string Words::difference(CelsiusDifference d) const {
  return number(us() ? d.value * 1.8 : d.value, 0) + glue + unit();
}

std::string Words::depth(Millimetre water) const {
  if (!us()) return number(water.value, whole(water.value) ? 0 : 1) + glue + "mm";
  return number(water.value / 25.4, water.value < 25.4 ? 2 : 1) + glue + "in";
}

std::string Words::clock(Instant at) const {
  const CivilTime civil = calendar_.civil(at);
  const auto of_day = civil - std::chrono::floor<std::chrono::days>(civil);
  const auto minutes = static_cast<int>(std::chrono::floor<std::chrono::minutes>(of_day).count());
  if (minutes == 0) return "midnight";
  if (minutes == 12 * 60) return "noon";
  const int hour = minutes / 60 % 12 == 0 ? 12 : minutes / 60 % 12;
  std::string text = std::to_string(hour);
  if (minutes % 60 != 0) {
    text += minutes % 60 < 10 ? ":0" : ":";
    text += std::to_string(minutes % 60);
  }
  return text + glue + (minutes < 12 * 60 ? "am" : "pm");
}

std::string Words::day(CivilDay day) const {
  const CivilDate date{day};
  const std::chrono::weekday weekday{day};
  return std::string(weekdays[weekday.c_encoding()]) + glue +
         std::to_string(static_cast<unsigned>(date.day())) + glue +
         months[static_cast<unsigned>(date.month()) - 1];
}

std::string Words::when(Instant at) const {
  const CivilDay on = calendar_.day_of(at);
  return on == today() ? clock(at) : day(on) + glue + clock(at);
}

std::string Words::closing(Instant end) const {
  const CivilDay on = day_of_end(end);
  return on == today() ? clock(end) : day(on) + glue + clock(end);
}

std::string Words::about(CivilDay on, double days) const {
  const int spread = std::max(1, static_cast<int>(std::ceil(days - 1e-9)));
  return day(on) + glue + "±" + glue + std::to_string(spread) + glue + "d";
}

std::string Words::past_or_about(CivilDay on, double days) const {
  return on <= today() ? day(on) : about(on, days);
}

std::string Words::iso(CivilDay day) const {
  const CivilDate date{day};
  const auto two = [](unsigned n) { return (n < 10 ? "-0" : "-") + std::to_string(n); };
  return std::to_string(static_cast<int>(date.year())) + two(static_cast<unsigned>(date.month())) +
         two(static_cast<unsigned>(date.day()));
}

std::string Words::ahead(Instant at) const {
  const auto days = (calendar_.day_of(at) - today()).count();
  const CivilTime civil = calendar_.civil(at);
  const bool evening = civil - std::chrono::floor<std::chrono::days>(civil) >= Seconds{17 * 3600};
  if (days <= 0) return (evening ? "tonight at " : "today at ") + clock(at);
  if (days == 1) return "tomorrow at " + clock(at);
  const std::chrono::weekday weekday{calendar_.day_of(at)};
  return std::string("on ") + weekdays[weekday.c_encoding()] + " at " + clock(at);
}

}  // namespace antherd::letters
