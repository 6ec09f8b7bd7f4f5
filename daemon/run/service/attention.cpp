// See attention.hpp.
#include "run/service/attention.hpp"

#include <algorithm>

#include "core/letters/words.hpp"
#include "run/service/farm.hpp"
#include "run/service/review.hpp"

namespace antherd::service {
namespace {

constexpr auto letter_waits_long = std::chrono::hours{6};
constexpr auto this_season =
    std::chrono::days{120};  // what is older may be of another year's field

void add_stations(std::vector<std::string>& sentences, const Lookout& lookout, Instant now) {
  const letters::Desk desk = lookout.desk(now);
  for (const alerts::Episode& episode : lookout.episodes()) {
    if (!episode.open()) continue;
    if (episode.kind == alerts::Kind::no_data) {
      const auto last = lookout.last_sample(episode.subject, now);
      const auto& story = desk.stations.at(episode.subject);
      const bool covered = story.stand_in.size() >= story.fields.size();
      sentences.push_back(
          "Station " + episode.subject +
          (story.no_temperature ? " sends no temperature, though other values," : " is silent") +
          (last ? " since " + farm_text(lookout.settings().calendar, *last) : "") +
          (covered ? "; another station stands in." : ": its fields are not watched."));
    } else if (episode.kind == alerts::Kind::mail_trouble) {
      sentences.push_back("Mail trouble since " +
                          farm_text(lookout.settings().calendar, episode.start) +
                          ": do not count on letters.");
    } else if (episode.kind == alerts::Kind::doubtful_sensor) {
      const std::string named = letters::doubts_of(desk.stations.at(episode.subject));
      sentences.push_back("Station " + episode.subject + " reports doubtful values" +
                          (named.empty() ? "" : ": " + named) + ".");
    }
  }
  for (const auto& drift : drifts_of(lookout, now)) {
    sentences.push_back("Stations " + drift.one + " and " + drift.other +
                        " have drifted apart: see antherd check.");
  }
}

/// The station's hours of the last 24 with a temperature, and with a humidity.
std::pair<int, int> hours_seen(const Lookout& lookout, const std::string& station, Instant now) {
  int warm = 0, humid = 0;
  const auto& hours = lookout.judged_hours(station);
  for (auto hour = hours.rbegin(); hour != hours.rend(); ++hour) {
    if (Instant(hour->start) < now - std::chrono::hours{24}) break;
    if (Instant(hour->start) > now) continue;
    warm += hour->temperature ? 1 : 0;
    humid += hour->humidity ? 1 : 0;
  }
  return {warm, humid};
}

/// Heat is watched by the temperature alone; wet leaves want a humidity too, of this station or of
/// another of the field's.
void add_dry_stations(std::vector<std::string>& sentences, const Lookout& lookout, Instant now) {
  constexpr int hours_to_say = 6;
  const settings::Settings& settings = lookout.settings();
  for (const auto& station : settings.stations) {
    const std::string& name = station.station.name;
    const auto [warm, humid] = hours_seen(lookout, name, now);
    if (warm < hours_to_say || humid > 0) continue;
    bool needed = false, covered = true;
    for (const std::string& field : fields_of(settings, name)) {
      if (lookout.state(field).watch != season::Watch::watched) continue;
      needed = true;
      const auto& used = settings.field(field)->field.stations;
      covered = covered && std::any_of(used.begin(), used.end(), [&](const std::string& other) {
                  return hours_seen(lookout, other, now).second > 0;
                });
    }
    if (!needed) continue;
    sentences.push_back(
        "Station " + name + ": no humidity in the last 24 h: " +
        (covered ? "another station stands in for wet leaves." : "wet leaves are not watched."));
  }
}

void add_letters(std::vector<std::string>& sentences, const store::Store& store, Instant now) {
  const auto open = store.letters_open();
  if (!open) {
    sentences.push_back(open.failure().sentence());
    return;
  }
  const auto old = std::count_if(open->begin(), open->end(), [&](const outbox::Item& item) {
    return now - item.letter.decided > letter_waits_long;
  });
  if (old > 0) {
    sentences.push_back(letters::plain_count(static_cast<std::size_t>(old), "letter") +
                        (old == 1 ? " has" : " have") +
                        " waited more than 6 h: see antherd letters.");
  }
  if (const auto line = store.line(); line && !line->trouble.empty()) {
    sentences.push_back("Mail: " + line->trouble);
  }
  if (const auto recent = store.letters_since(now - std::chrono::days{7})) {
    const auto parked = std::count_if(recent->begin(), recent->end(), [](const auto& item) {
      return item.state == outbox::State::parked;
    });
    if (parked > 0) {
      sentences.push_back(letters::plain_count(static_cast<std::size_t>(parked), "letter") +
                          " of the last 7 days " + (parked == 1 ? "is" : "are") +
                          " parked: see antherd letters.");
    }
  }
}

/// A field that was given another name would otherwise lose its notes and its water without a word.
void add_strange_fields(std::vector<std::string>& sentences, const settings::Settings& settings,
                        const store::Store& store, Instant now) {
  for (const std::string& name : strange_fields(settings, store, now)) {
    sentences.push_back("The diary holds entries of \"" + name +
                        "\", a field that the settings do not name: was it renamed? Its notes and "
                        "its water count for no field.");
  }
}

}  // namespace

std::vector<std::string> strange_fields(const settings::Settings& settings,
                                        const store::Store& store, Instant now) {
  auto names = store.diary_fields(now - this_season);
  if (!names) return {};
  std::erase_if(*names, [&](const std::string& name) {
    return std::any_of(settings.fields.begin(), settings.fields.end(),
                       [&](const auto& plan) { return plan.field.name == name; });
  });
  return *names;
}

std::vector<std::string> attention_of(const Lookout& lookout, const store::Store& store,
                                      Instant now) {
  std::vector<std::string> sentences;
  add_stations(sentences, lookout, now);
  add_dry_stations(sentences, lookout, now);
  add_letters(sentences, store, now);
  add_strange_fields(sentences, lookout.settings(), store, now);
  return sentences;
}

}  // namespace antherd::service
