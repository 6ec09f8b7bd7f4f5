// See farm.hpp.
#include "run/service/farm.hpp"

#include <algorithm>

namespace antherd::service {

season::Plan plan_of(const settings::Settings& settings, const settings::FieldPlan& field) {
  season::Plan plan;
  plan.field = field.field;
  plan.traits = field.traits;
  plan.rules = field.rules;
  plan.calendar = settings.calendar;
  for (const std::string& name : field.field.stations) {
    const settings::Station* station = settings.station(name);
    ANTHERD_CHECK(station != nullptr);  // the settings refuse unknown stations
    plan.stations.push_back(station->station);
  }
  return plan;
}

std::vector<std::string> fields_of(const settings::Settings& settings, const std::string& station) {
  std::vector<std::string> names;
  for (const settings::FieldPlan& plan : settings.fields) {
    const auto& stations = plan.field.stations;
    if (std::find(stations.begin(), stations.end(), station) != stations.end()) {
      names.push_back(plan.field.name);
    }
  }
  return names;
}

HourStart closed_before(const weather::Station& station, std::optional<Instant> last_sample,
                        Instant now) {
  // closes_at(hour) is the hour's end plus a constant wait, so the last hour closed by time is:
  const Seconds wait = weather::closes_at(HourStart{}, station) - end_of(HourStart{});
  const HourStart by_time = hour_of(now - wait);
  if (!last_sample) return by_time;
  const Seconds shift = station.stamp == weather::Stamp::end ? station.interval : Seconds{0};
  return std::max(by_time, std::min(hour_of(*last_sample - shift), hour_of(now)));
}

std::optional<Instant> newest_in_company(std::span<const Instant> times, Seconds interval) {
  for (std::size_t i = times.size(); i-- > 1;) {
    if (times[i] - times[i - 1] <= 2 * interval) return times[i];
  }
  return std::nullopt;
}

std::optional<Instant> newest_believed(std::span<const Instant> times, Seconds interval) {
  if (times.empty()) return std::nullopt;
  const auto newest = times.last(std::min(times.size(), times_in_question));
  return newest_in_company(newest, interval).value_or(newest.front());
}

std::string farm_text(const Calendar& calendar, Instant at) {
  const CivilTime civil = calendar.civil(at);
  const CivilDate date{std::chrono::floor<std::chrono::days>(civil)};
  const std::chrono::hh_mm_ss time{civil - std::chrono::floor<std::chrono::days>(civil)};
  const auto two = [](long n) { return (n < 10 ? "0" : "") + std::to_string(n); };
  return std::to_string(static_cast<int>(date.year())) + "-" +
         two(static_cast<unsigned>(date.month())) + "-" + two(static_cast<unsigned>(date.day())) +
         " " + two(time.hours().count()) + ":" + two(time.minutes().count());
}

}  // namespace antherd::service
