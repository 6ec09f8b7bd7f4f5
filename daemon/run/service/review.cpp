// See review.hpp.
#include "run/service/review.hpp"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <map>
#include <numbers>
#include <set>

namespace antherd::service {
namespace {

using std::chrono::days;

/// ISO 8601 week date of a civil day: year and week.
std::pair<int, int> iso_week_of(CivilDay day) {
  const std::chrono::sys_days sys{day.time_since_epoch()};
  const auto weekday = static_cast<int>(std::chrono::weekday{sys}.iso_encoding());
  const auto thursday = sys + days{4 - weekday};
  const auto year = std::chrono::year_month_day{thursday}.year();
  const auto first = std::chrono::sys_days{year / std::chrono::January / 1};
  return {static_cast<int>(year), static_cast<int>((thursday - first).count() / 7) + 1};
}

std::string week_text(std::pair<int, int> week) {
  const std::string number = std::to_string(week.second);
  return std::to_string(week.first) + "-W" + (number.size() < 2 ? "0" : "") + number;
}

std::string week_title(std::pair<int, int> week) { return "Week " + week_text(week); }

/// Whether two stations see about the same air.
bool are_neighbours(const settings::Settings& settings, const weather::Station& a,
                    const weather::Station& b) {
  for (const auto& plan : settings.fields) {
    const auto& used = plan.field.stations;
    if (std::find(used.begin(), used.end(), a.name) != used.end() &&
        std::find(used.begin(), used.end(), b.name) != used.end()) {
      return true;
    }
  }
  constexpr double km_of_a_degree = 111.2, near_km = 10.0, near_m = 150.0;
  const double north = (a.place.latitude - b.place.latitude).value * km_of_a_degree;
  const double east = (a.place.longitude - b.place.longitude).value * km_of_a_degree *
                      std::cos(a.place.latitude.value * std::numbers::pi / 180.0);
  const double height = (a.place.elevation - b.place.elevation).value;
  return std::hypot(north, east) <= near_km && std::abs(height) <= near_m;
}

template <class Record>
std::vector<Record> within(const std::vector<Record>& records, const Period& period) {
  std::vector<Record> found;
  std::copy_if(records.begin(), records.end(), std::back_inserter(found),
               [&](const Record& r) { return r.date >= period.first && r.date <= period.last; });
  return found;
}

struct Span {
  Instant from, to;
};

/// Days with an hour at the severe threshold in the 30 days up to a count of another season, from
/// the stored hours of the field's first station; nothing where none are kept.
std::optional<int> hot_days_before(const season::Plan& plan, const store::Store& store,
                                   CivilDay day) {
  if (plan.field.stations.empty()) return std::nullopt;
  const HourStart from = hour_of(plan.calendar.start_of(day - days{30}));
  const HourStart to = hour_of(plan.calendar.start_of(day + days{1}));
  const auto hours = store.hours(plan.field.stations.front(), from, to);
  if (!hours || hours->empty()) return std::nullopt;
  std::set<CivilDay> hot;
  for (const weather::Hour& hour : *hours) {
    const season::Air air = season::air_at_field(plan, hour.start, &hour, 0);
    const bool severe = air.temperature && *air.temperature >= plan.rules.heat.severe;
    if (severe) hot.insert(plan.calendar.day_of(Instant(hour.start)));
  }
  return static_cast<int>(hot.size());
}

/// The counts of the period beside the heat before them; of a whole season those of all years.
std::vector<letters::SeedCount> seed_counts(const season::Plan& plan,
                                            const season::DiaryView& diary,
                                            const season::State& state, const season::Exposure& met,
                                            const Period& period, const store::Store& store) {
  std::vector<letters::SeedCount> counts;
  for (const field::Scouting& note : diary.notes) {
    const bool wanted =
        note.date <= period.last && (period.whole_season || note.date >= period.first);
    if (!wanted || !note.seed_set || !note.seed_looked) continue;
    letters::SeedCount count{note.date, *note.seed_set, *note.seed_looked, {}, {}};
    if (note.date < plan.field.sown) {
      count.hot_days = hot_days_before(plan, store, note.date);
    } else {
      if (state.crop.known()) count.exposed = met.exposed_until(note.date);
      count.hot_days = static_cast<int>(std::count_if(
          state.heat.days.begin(), state.heat.days.end(), [&](const season::DayHeat& day) {
            return day.severe && day.date <= note.date && note.date - day.date <= days{30};
          }));
    }
    counts.push_back(count);
  }
  return counts;
}

/// What each irrigation of the span did; one that is not booked yet is told without its soil.
std::vector<season::Watered> watered_in(const Span& span, const season::DiaryView& diary,
                                        const season::Chronicle& chronicle) {
  std::vector<season::Watered> found;
  for (const field::Irrigation& irrigation : diary.irrigations) {
    if (irrigation.start < span.from || irrigation.start >= span.to) continue;
    const auto booked = std::find_if(
        chronicle.watered.begin(), chronicle.watered.end(),
        [&](const season::Watered& one) { return one.irrigation.same_as(irrigation); });
    found.push_back(booked != chronicle.watered.end() ? *booked
                                                      : season::night_of(irrigation, diary));
  }
  return found;
}

letters::FieldReview review_field(const Lookout& lookout, const store::Store& store,
                                  const std::string& name, const Period& period, const Span& span) {
  const season::Plan& plan = lookout.plan(name);
  const season::DiaryView& diary = lookout.diary(name);
  season::Chronicle chronicle;
  letters::FieldReview review;
  int warm_before = 0;
  const auto& now_state = lookout.state(name);
  const HourStart known_until =
      now_state.last ? *now_state.last + std::chrono::hours{1} : plan.first_hour();
  const HourStart until = std::min(hour_of(span.to), known_until);
  const season::State state =
      season::fold(plan, diary, lookout.hours_of(name), until, &chronicle,
                   [&](const season::State& so_far, const season::Step& step) {
                     if (Instant(step.hour.air.start) < span.from) {
                       warm_before = so_far.heat.warm_nights;
                       return;
                     }
                     if (step.hour.air.valid()) ++review.hours_valid;
                     if (!step.hour.air.temperature) return;
                     const auto [coldest, first] =
                         review.coolest.emplace(so_far.day, *step.hour.air.temperature);
                     if (!first)
                       coldest->second = std::min(coldest->second, *step.hour.air.temperature);
                   });
  review.status = season::status(state, plan, diary);
  review.days = within(chronicle.days, period);
  review.humid_days = within(chronicle.humid_days, period);
  const HourStart expected_from = std::max(hour_of(span.from), plan.first_hour());
  review.hours_expected =
      static_cast<int>(std::max<long>(0, (hour_of(span.to) - expected_from).count()));
  review.warm_nights = state.heat.warm_nights - warm_before;
  const season::Exposure met = season::exposure_of(state.heat, state.crop, plan);
  review.affected_low = met.low;
  review.affected_high = met.high;
  for (const season::DayExposure& day : within(met.days, period)) {
    if (day.severe && day.share > 0) review.exposed_days.push_back(day);
  }
  review.seed_counts = seed_counts(plan, diary, state, met, period, store);
  for (const auto& episode : state.episodes) {
    const bool touches =
        episode.start < span.to && (!episode.closed || *episode.closed > span.from);
    if (touches) review.episodes.push_back(episode);
  }
  review.irrigations = watered_in(span, diary, chronicle);
  review.notes = within(diary.notes, period);
  return review;
}

void count_letter(letters::Review& review, const outbox::Item& item, outbox::State state,
                  const Span& span, Instant latest) {
  const auto within = [&](Instant at) { return at >= span.from && at < latest; };
  if (state == outbox::State::sent) {
    if (within(item.letter.decided)) ++review.letters_sent;
  } else if (state == outbox::State::parked) {
    // By its end: a letter that was given up in this week was decided in the one before, perhaps.
    if (!within(item.ended.value_or(item.letter.decided))) return;
    ++review.letters_parked;
    review.parked.push_back(item.letter.recipient + ": " + item.letter.subject + " — " +
                            item.answer);
  } else if (item.letter.decided < latest) {
    ++review.letters_waiting;
  }
}

void add_letters(letters::Review& review, const store::Store& store, const Span& span,
                 Instant now) {
  const auto letters = store.letters_since(span.from - mail_looks_back);
  if (!letters) {
    review.troubles.push_back(letters.failure().sentence());
    return;
  }
  // Of the week that has just ended what happened since then is told too: the next review must not
  // be the first to name it.
  const Instant latest = now - span.to < days{1} ? now + Seconds{1} : span.to;
  std::map<std::pair<std::string, std::string>, const outbox::Item*> digests;
  std::vector<outbox::Delivery> deliveries;
  for (const outbox::Item& item : *letters) {
    if (item.letter.kind == "digest") digests[{item.letter.id, item.letter.recipient}] = &item;
    deliveries.push_back({item.letter.decided, item.state, item.ended});
  }
  for (outbox::Item item : *letters) {
    outbox::State state = item.state;
    if (state == outbox::State::merged) {  // it went, or did not, with its digest
      const auto digest = digests.find({item.digest, item.letter.recipient});
      if (digest == digests.end()) continue;
      state = digest->second->state;
      item.ended = digest->second->ended;
      item.answer = "in \"" + digest->second->letter.subject + "\"";
    }
    count_letter(review, item, state, span, latest);
  }
  for (alerts::Episode& trouble : outbox::mail_troubles(deliveries, now)) {
    const bool touches =
        trouble.changes.front().at < latest && (!trouble.closed || *trouble.closed >= span.from);
    if (touches) review.mail_troubles.push_back(std::move(trouble));
  }
  const auto line = store.line();
  if (line && !line->trouble.empty()) review.troubles.push_back(line->trouble);
}

}  // namespace

/// What was last said of each episode that is still open.
std::vector<alerts::Said> unclosed_of(const Lookout& lookout) {
  std::vector<alerts::Said> unclosed;
  for (const alerts::Episode& episode : lookout.episodes()) {
    if (!episode.open()) continue;
    const alerts::Said* last = nullptr;
    for (const alerts::Said& said : lookout.ledger()) {
      if (said.kind == episode.kind && said.subject == episode.subject &&
          said.at >= episode.start) {
        last = &said;
      }
    }
    if (last != nullptr) unclosed.push_back(*last);
  }
  return unclosed;
}

std::vector<letters::DriftReview> drifts_of(const Lookout& lookout, Instant now) {
  const auto& stations = lookout.settings().stations;
  std::vector<letters::DriftReview> drifts;
  for (std::size_t i = 0; i < stations.size(); ++i) {
    for (std::size_t j = i + 1; j < stations.size(); ++j) {
      const weather::Station &one = stations[i].station, &other = stations[j].station;
      if (!are_neighbours(lookout.settings(), one, other)) continue;
      const auto drift = weather::drift_between(lookout.judged_hours(one.name),
                                                lookout.judged_hours(other.name), now);
      if (drift && drift->large()) drifts.push_back({one.name, other.name, *drift});
    }
  }
  return drifts;
}

std::string week_name(CivilDay day) { return week_text(iso_week_of(day)); }

Period week_before(const Calendar& calendar, Instant now) {
  const CivilDay today = calendar.day_of(now);
  Period period{"Last 7 days", today - days{7}, today - days{1}};
  // Only from a Monday on are these days a week of the calendar.
  const std::chrono::sys_days first{period.first.time_since_epoch()};
  if (std::chrono::weekday{first} == std::chrono::Monday) {
    period.title = week_title(iso_week_of(period.first));
  }
  return period;
}

std::optional<Period> iso_week(const std::string& text) {
  int year = 0, week = 0, used = 0;
  const int fields = std::sscanf(text.c_str(), "%4d-W%2d%n", &year, &week, &used);
  if (fields != 2 || used != static_cast<int>(text.size()) || week < 1 || week > 53) {
    return std::nullopt;
  }
  using namespace std::chrono;
  const auto fourth = sys_days{std::chrono::year{year} / January / 4};
  const auto monday = fourth - days{static_cast<int>(weekday{fourth}.iso_encoding()) - 1};
  const CivilDay first{(monday + days{7 * (week - 1)}).time_since_epoch()};
  if (iso_week_of(first) != std::pair{year, week}) return std::nullopt;
  return Period{week_title({year, week}), first, first + days{6}};
}

Period season_of(const settings::Settings& settings, Instant now) {
  Period period;
  period.last = settings.calendar.day_of(now);
  period.first = period.last;
  for (const auto& field : settings.fields) {
    period.first = std::min(period.first, field.field.sown);
  }
  period.title = "Season " + std::to_string(static_cast<int>(CivilDate{period.first}.year()));
  period.whole_season = true;
  return period;
}

letters::Review make_review(const Lookout& lookout, const store::Store& store, const Period& period,
                            Instant now) {
  const settings::Settings& settings = lookout.settings();
  letters::Review review;
  review.title = period.title;
  review.first = period.first;
  review.last = period.last;
  const Span span{settings.calendar.start_of(period.first),
                  std::min(now, settings.calendar.start_of(period.last + days{1}))};
  for (const auto& field : settings.fields) {
    review.fields.push_back(review_field(lookout, store, field.field.name, period, span));
  }
  const HourStart first_hour = hour_of(span.from), end_hour = hour_of(span.to);
  for (const auto& station : settings.stations) {
    const std::string& name = station.station.name;
    review.stations.push_back(
        {name, weather::count_verdicts(lookout.judged_hours(name), first_hour, end_hour)});
  }
  review.drifts = drifts_of(lookout, span.to);
  for (const alerts::Said& said : lookout.ledger()) {
    if (said.at < span.from || said.at >= span.to) continue;
    const auto field = std::find_if(review.fields.begin(), review.fields.end(),
                                    [&](const auto& f) { return f.status.field == said.subject; });
    (field == review.fields.end() ? review.said_of_stations : field->said).push_back(said);
  }
  add_letters(review, store, span, now);
  return review;
}

}  // namespace antherd::service
