// See told.hpp.
#include "seasons/told.hpp"

#include <algorithm>
#include <cstdio>
#include <sstream>

namespace antherd::seasons {
namespace {

using std::chrono::days;

std::string in_places(double value, int places) {
  char text[40];
  std::snprintf(text, sizeof text, "%.*f", places, value);
  return text;
}

std::string first_line(const std::string& body) { return body.substr(0, body.find('\n')); }

/// Letters that come by the calendar, as one line and the days on which one is missing.
std::string by_calendar(const Scenario& scenario, const Lived& lived, const std::string& kind,
                        const std::string& title, days step) {
  std::vector<Instant> times;
  for (const auto& item : lived.letters) {
    if (item.letter.kind == kind) times.push_back(item.letter.decided);
  }
  if (times.empty()) return title + ": none.\n";
  const Calendar& calendar = scenario.calendar;
  std::string text = title + ": " + std::to_string(times.size()) + ", from " +
                     clock_text(calendar, times.front()) + " to " +
                     clock_text(calendar, times.back());
  std::string strange;
  for (std::size_t i = 1; i < times.size(); ++i) {
    const CivilTime expected = calendar.civil(times[i - 1]) + step;
    if (calendar.civil(times[i]) == expected) continue;
    strange += "  after " + clock_text(calendar, times[i - 1]) + " next at " +
               clock_text(calendar, times[i]) + "\n";
  }
  return text + (strange.empty() ? ", none missing.\n" : ":\n" + strange);
}

std::string letters_text(const Scenario& scenario, const Lived& lived) {
  std::string text;
  for (const auto& item : lived.letters) {
    const letters::Letter& letter = item.letter;
    if (letter.kind == "daily" || letter.kind == "weekly") continue;
    text += clock_text(scenario.calendar, letter.decided) + "  " + letter.subject + "\n";
    text += "    " + first_line(letter.body) + "\n";
    if (item.state != outbox::State::sent) {
      text += "    (still " +
              std::string(item.state == outbox::State::parked ? "parked" : "waiting") + ")\n";
    } else if (item.ended && *item.ended - letter.decided >= std::chrono::minutes{5}) {
      text += "    (held until " + clock_text(scenario.calendar, *item.ended) + ")\n";
    }
  }
  if (text.empty()) text = "None but those of the calendar.\n";
  return text + by_calendar(scenario, lived, "daily", "Daily lines", days{1}) +
         by_calendar(scenario, lived, "weekly", "Weekly reviews", days{7});
}

std::string dates_text(const FieldSeason& field) {
  std::string text;
  const char* const names[] = {"emerged",     "buds",         "first anthers",
                               "full flower", "flowers done", "ripe"};
  for (std::size_t i = 0; i < season::told_stages.size(); ++i) {
    const auto day = field.stage_day(season::told_stages[i]);
    if (day) text += "  " + day_text(*day) + "  " + names[i] + "\n";
  }
  const season::HeatDay* before = nullptr;
  for (const season::HeatDay& day : field.chronicle.days) {
    const bool was = before != nullptr && before->in_window;
    if (day.in_window && !was) text += "  " + day_text(day.date) + "  first day of the window\n";
    if (!day.in_window && was) text += "  " + day_text(before->date) + "  last day of the window\n";
    before = &day;
  }
  return text;
}

std::string figure_text(const alerts::Episode& episode, const alerts::Change& change) {
  if (!change.figure) return "";
  if (episode.kind == alerts::Kind::heat) return ", " + in_places(*change.figure, 1) + " °C";
  if (episode.kind == alerts::Kind::humid_spell) return ", R " + in_places(*change.figure, 1);
  if (episode.kind == alerts::Kind::no_data) return ", " + in_places(*change.figure, 1) + " h";
  return ", " + in_places(*change.figure, 1);
}

std::string episode_text(const Calendar& calendar, const alerts::Episode& episode) {
  std::string text = std::string(alerts::name_of(episode.kind)) + ", " + episode.subject +
                     ", from " + clock_text(calendar, episode.start) + "\n";
  for (const alerts::Change& change : episode.changes) {
    text += "  " + clock_text(calendar, change.at) + "  " + alerts::name_of(change.phase);
    if (change.phase != alerts::Phase::closed) text += std::string(" ") + level_text(change.level);
    text += figure_text(episode, change);
    if (change.phase != alerts::Phase::closed) {
      text += std::string(", ") + alerts::name_of(change.certainty);
    }
    text += (change.detail.empty() ? "" : ", " + change.detail) + "\n";
  }
  return text;
}

/// Days that are not level 0, of heat and of mildew.
std::string days_text(const FieldSeason& field) {
  std::string text;
  for (const season::HeatDay& day : field.chronicle.days) {
    if (day.level == risk::Level::none) continue;
    text += "  " + day_text(day.date) + "  heat " + level_text(day.level);
    if (day.t_max) text += ", at most " + in_places(day.t_max->value, 1) + " °C";
    if (day.hours_32) {
      text += ", hours at 32.2/35/38: " + std::to_string(*day.hours_32) + "/" +
              std::to_string(*day.hours_35) + "/" + std::to_string(*day.hours_38);
    }
    if (day.degree_hours) text += ", DH " + in_places(*day.degree_hours, 1);
    text += ", flowers " + in_places(day.flower_share * 100, 1) + " %\n";
  }
  for (const season::HumidDay& day : field.chronicle.humid_days) {
    if (day.level == risk::Level::none && day.own_level == risk::Level::none) continue;
    text += "  " + day_text(day.date) + "  mildew " + level_text(day.level);
    if (!day.judged) text += ", not judged";
    if (day.r) text += ", R " + in_places(*day.r, 1);
    text += ", score " + in_places(day.score, 2) + (day.water.value_or(false) ? ", water" : "") +
            (day.dry_out.value_or(false) ? ", dried out" : "") +
            (day.night_set ? ", sprinklers" : "") + "\n";
  }
  return text;
}

std::string sum_text(const Lived& lived) {
  std::map<std::string, int> kinds;
  for (const auto& item : lived.letters) ++kinds[item.letter.kind];
  std::string text = "letters:";
  for (const auto& [kind, count] : kinds) text += " " + kind + " " + std::to_string(count);
  text += "\n";
  for (const auto& [name, field] : lived.fields) {
    const season::State& state = field.state;
    text += name + ": " + std::to_string(state.crop.hours - state.crop.unseen) + " hours seen, " +
            std::to_string(state.crop.unseen) + " not; days of 35 °C in the window " +
            std::to_string(state.heat.hot_days) + "; flowers exposed " +
            in_places(season::exposure_of(state.heat, state.crop, field.plan).exposed * 100, 1) +
            " %; warm nights " + std::to_string(state.heat.warm_nights) + "\n";
  }
  return text;
}

}  // namespace

std::string clock_text(const Calendar& calendar, Instant at) {
  const CivilTime civil = calendar.civil(at);
  const CivilDay day = std::chrono::floor<days>(civil);
  const std::chrono::hh_mm_ss time{civil - day};
  char text[20];
  std::snprintf(text, sizeof text, " %02d:%02d", static_cast<int>(time.hours().count()) % 24,
                static_cast<int>(time.minutes().count()));
  return day_text(day) + text;
}

std::string day_text(CivilDay day) {
  const std::chrono::year_month_day date{day};
  char text[40];
  std::snprintf(text, sizeof text, "%04d-%02u-%02u", static_cast<int>(date.year()),
                static_cast<unsigned>(date.month()), static_cast<unsigned>(date.day()));
  return text;
}

const char* level_text(risk::Level level) {
  return level == risk::Level::none ? "None" : alerts::name_of(alerts::severity_of(level));
}

std::string told(const Scenario& scenario, const Lived& lived) {
  std::string text =
      scenario.sentence + "\n\nLETTERS, by the farm's clock\n" + letters_text(scenario, lived);
  std::string episodes;
  std::vector<alerts::Episode> all = lived.of_stations;
  for (const auto& [name, field] : lived.fields) {
    all.insert(all.end(), field.state.episodes.begin(), field.state.episodes.end());
  }
  std::stable_sort(all.begin(), all.end(),
                   [](const auto& a, const auto& b) { return a.start < b.start; });
  for (const auto& episode : all) episodes += episode_text(scenario.calendar, episode);
  text += "\nEPISODES, as they stand at the end\n" + (episodes.empty() ? "None.\n" : episodes);
  for (const auto& [name, field] : lived.fields) {
    text += "\nDATES of " + name + ", as they stand at the end\n" + dates_text(field);
    const std::string list = days_text(field);
    text += "\nDAYS of " + name + " above None\n" + (list.empty() ? "  None.\n" : list);
  }
  return text + "\nSUM\n" + sum_text(lived);
}

}  // namespace antherd::seasons
