// See time_form.hpp.
#include "run/settings/time_form.hpp"

#include "edge/clock/clock.hpp"
#include "run/settings/quantities.hpp"

namespace antherd::settings {

std::optional<std::string> fault_of_time_form(std::string_view form) {
  if (form == "iso" || form == "unix" || form == "unix_ms") return {};
  std::string seen;
  for (std::size_t i = 0; i < form.size(); ++i) {
    if (form[i] != '%') continue;
    const char letter = ++i < form.size() ? form[i] : '\0';
    if (letter == '\0') return "a lone % stands at its end";
    if (letter == 'T') {
      seen += "HMS";
    } else if (letter == 'F') {
      seen += "Ymd";
    } else if (std::string_view("YmdHMSyejIpbz%").find(letter) != std::string_view::npos) {
      seen += letter;
    } else {
      return std::string("%") + (letter > ' ' && letter <= '~' ? letter : '?') + " is not known";
    }
  }
  const auto has = [&](const char* any) { return seen.find_first_of(any) != std::string::npos; };
  if (!has("Yy")) return "it gives no year (%Y)";
  if (!has("j") && !(has("mb") && has("de"))) return "it gives no day (%m and %d, or %j)";
  if (!has("HI")) return "it gives no hour (%H)";
  if (has("I") && !has("p")) return "%I needs AM or PM (%p)";
  if (has("I") && has("H")) return "it gives the hour twice (%H and %I)";
  return {};
}

Result<Calendar> zone_of(const std::string& name, const Calendar& farm_zone) {
  if (name == "farm") return farm_zone;
  if (name == "utc" || name == "UTC") return Calendar::fixed();
  if (!name.starts_with('+') && !name.starts_with('-')) return clock::calendar_of(name);
  constexpr int furthest = 14 * 60;  // UTC+14:00, the Line Islands
  const Result<int> minutes = parse_clock(std::string_view(name).substr(1));
  if (!minutes || *minutes > furthest) {
    return Failure{"read the zone", name, "it is not an offset up to 14:00",
                   "write it like \"-08:00\""};
  }
  const Seconds offset{(name.front() == '-' ? -60 : 60) * *minutes};
  return Calendar::fixed(offset, name);
}

}  // namespace antherd::settings
