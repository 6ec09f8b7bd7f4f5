// Live is replay: a service that was turned every five minutes, that was told late, or that was
// restarted in the middle, knows the same hours and episodes as one fold over all facts.
#include <algorithm>
#include <set>

#include "core/weather/hour.hpp"
#include "ground.hpp"
#include "run/service/farm.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant evening = farm_time("2026-07-16 20:00");  // after the hot days of 12 to 14 July

/// The lookout alone, with all facts at once: what `replay` does.
service::Lookout lookout_with_all(const std::shared_ptr<const settings::Settings>& settings,
                                  const std::vector<weather::Sample>& samples, Instant now) {
  service::Lookout lookout(settings);
  const auto& station = settings->stations.front().station;
  lookout.replace_hours("bench", HourStart::min(), HourStart::max(),
                        weather::gather(samples, station, hour_of(samples.front().time),
                                        hour_of(samples.back().time) + hours{1}));
  std::vector<Instant> times;
  for (const auto& sample : samples) times.push_back(sample.time);
  lookout.add_sample_times("bench", times);
  lookout.turn(now, {{"bench", service::closed_before(station, times.back(), now)}});
  return lookout;
}

std::vector<std::string> sayings(const Bench& bench) {
  const auto said = bench.desk->store().said(Instant{});
  REQUIRE(said);
  std::vector<std::string> texts;
  for (const auto& entry : *said) {
    texts.push_back(std::string(alerts::name_of(entry.kind)) + " " + entry.subject + " " +
                    std::to_string(static_cast<int>(entry.saying)) + " " +
                    std::to_string(static_cast<int>(entry.level)) + " " + farm_clock(entry.at));
  }
  return texts;
}

}  // namespace

TEST_CASE("turned every five minutes, the service ends where a replay ends") {
  Bench bench;
  bench.open(sown);
  bench.live(Weather{}, sown, evening);
  const auto samples = readings(Weather{}, sown, evening + Seconds{1});
  const auto replayed = lookout_with_all(bench.settings, samples, evening);

  INFO("live\n" << told(bench.episodes()) << "replay\n" << told(replayed.episodes()));
  CHECK(bench.episodes() == replayed.episodes());
  const auto heat = std::count_if(bench.episodes().begin(), bench.episodes().end(),
                                  [](const auto& e) { return e.kind == alerts::Kind::heat; });
  CHECK(heat >= 1);
  CHECK(bench.desk->keeper().lookout().station_hours("bench") == replayed.station_hours("bench"));
  // The store holds every closed hour; the one that is running is not in it.
  auto closed = replayed.station_hours("bench");
  std::erase_if(closed, [&](const auto& hour) { return hour.start >= hour_of(evening); });
  CHECK(bench.stored_hours() == closed);

  // The same facts in a store that never saw them come.
  Bench at_once;
  at_once.open(sown);
  at_once.drop("bench.csv", samples);
  at_once.turn(evening);
  at_once.turn(evening + minutes{6});
  bench.turn(evening + minutes{6});
  CHECK(at_once.fingerprint() == bench.fingerprint());
}

TEST_CASE("readings that come two days late give the same facts and one letter for all of it") {
  Bench bench;
  bench.open(sown);
  const Instant silent_from = farm_time("2026-07-12 10:00");
  const Instant back = farm_time("2026-07-14 20:00");
  bench.live(Weather{}, sown, silent_from);
  for (Instant now = silent_from; now < back; now += minutes{5}) bench.turn(now);
  CHECK(bench.letters_of("no_data").size() >= 1);
  const auto before = bench.letters().size();

  bench.drop("bench-late.csv", readings(Weather{}, silent_from, back + Seconds{1}));
  bench.turn(back);
  int late = 0;
  auto letters = bench.letters();
  for (std::size_t i = before; i < letters.size(); ++i) {
    UNSCOPED_INFO(letters[i].letter.kind << ": " << letters[i].letter.subject << "\n"
                                         << letters[i].letter.body);
    if (letters[i].letter.kind == "learned_late") ++late;
  }
  CHECK(late == 1);
  CHECK(bench.letters_of("heat").empty());  // all of it stands in that one letter
  const auto replayed =
      lookout_with_all(bench.settings, readings(Weather{}, sown, back + Seconds{1}), back);
  INFO("live\n" << told(bench.episodes()) << "replay\n" << told(replayed.episodes()));
  CHECK(bench.episodes() == replayed.episodes());
  CHECK(bench.desk->keeper().lookout().station_hours("bench") == replayed.station_hours("bench"));

  // Nothing more is said of the same facts.
  const auto count = bench.letters().size();
  bench.turn(back + minutes{6});
  bench.turn(back + minutes{12});
  CHECK(bench.letters().size() == count);
}

TEST_CASE("a restart at any hour of a hot spell says nothing twice and forgets no reminder") {
  const Instant from = farm_time("2026-07-11 12:00");
  Bench steady, restarted;
  for (Bench* bench : {&steady, &restarted}) {
    bench->open(sown);
    bench->drop("bench.csv", readings(Weather{}, sown, from));
    bench->turn(from);
  }
  steady.live(Weather{}, from, evening, minutes{15});
  Instant at = from;
  for (; at + hours{5} < evening; at += hours{5}) {
    restarted.live(Weather{}, at, at + hours{5} - minutes{15}, minutes{15});
    if ((at - from).count() % 36000 == 0) {
      restarted.close(at + hours{5} - minutes{15});
    } else {
      restarted.desk.reset();  // as after kill -9: nothing in memory was handed over
    }
    restarted.open(at + hours{5});
  }
  restarted.live(Weather{}, at, evening, minutes{15});

  const auto expected = sayings(steady);
  CHECK(sayings(restarted) == expected);
  CHECK(restarted.letter_ids() == steady.letter_ids());
  const auto reminder = std::to_string(static_cast<int>(alerts::Saying::reminder));
  const auto reminders = std::count_if(expected.begin(), expected.end(), [&](const auto& text) {
    return text.find("heat north bench " + reminder) == 0;
  });
  CHECK(reminders >= 1);  // three hot days, a reminder after 24 h
  CHECK(restarted.fingerprint() == steady.fingerprint());
}

TEST_CASE("letters have ids of their own: none is stored twice under one id and recipient") {
  Bench bench;
  bench.open(sown);
  bench.live(Weather{}, sown, evening, minutes{15});
  const auto ids = bench.letter_ids();
  CHECK(ids.size() > 10);
  CHECK(std::set<std::string>(ids.begin(), ids.end()).size() == ids.size());
}

TEST_CASE("a power cut takes at most five minutes of what was polled") {
  Farm farm;
  farm.more = river;
  Bench bench(farm);
  const Instant noon = farm_time("2026-07-11 12:00");
  bench.open(noon);
  bench.turn(noon);
  Seconds most{0};
  for (Instant now = noon; now < noon + hours{3}; now += minutes{1}) {
    station::Answer answer;
    answer.readings.samples = {reading_at(Weather{}, now)};
    bench.desk->poll_answered("river", answer, now);
    bench.turn(now);
    const auto last = bench.desk->store().last_sample("river");  // committed: it stays (power.cpp)
    REQUIRE(last);
    REQUIRE((*last || now < noon + minutes{6}));
    if (*last) most = std::max(most, now - **last);
  }
  CHECK(most <= minutes{5});
  CHECK(most >= minutes{3});  // and not each reading on its own: a card wears
}
