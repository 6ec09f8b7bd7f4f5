// Readings that come without a temperature, or without a humidity: the one blinds the watch for
// heat, the other that for wet leaves, and neither may pass in silence.
#include <algorithm>
#include <sstream>

#include "ground.hpp"
#include "run/service/attention.hpp"
#include "run/service/farm.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant dies = farm_time("2026-07-10 09:00");

/// A farm whose station loses a sensor.
struct Farmed {
  Bench bench;
  std::vector<weather::Sample> came = readings(Weather{}, sown, dies);

  Farmed() {
    keep_in_memory();
    bench.open(sown);
    bench.drop("bench.csv", came);
    bench.turn(dies);
  }
  /// Rows of every quarter of an hour, what is missing by its word.
  void live(Instant from, Instant to, bool temperature, bool humidity) {
    for (Instant now = from; now < to; now += minutes{15}) {
      weather::Sample sample = reading_at(Weather{}, now);
      std::string row = row_of(sample);
      const auto first = row.find(','), second = row.find(',', first + 1);
      if (!humidity) row.replace(second + 1, row.find(',', second + 1) - second - 1, "NA");
      if (!temperature) row.replace(first + 1, second - first - 1, "NA");
      if (!humidity) sample.humidity.reset();
      if (!temperature) sample.temperature.reset();
      came.push_back(sample);
      bench.folder.append("drop/bench.csv", row);
      bench.turn(now);
    }
  }
  std::string attention(Instant now) const {
    std::string text;
    for (const auto& line :
         service::attention_of(bench.desk->keeper().lookout(), bench.desk->store(), now)) {
      text += line + "\n";
    }
    return text;
  }
};

/// A text without its line breaks.
std::string running(const std::string& text) {
  std::istringstream words(text);
  std::string line;
  for (std::string word; words >> word;) line += (line.empty() ? "" : " ") + word;
  return line;
}

bool has(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

}  // namespace

TEST_CASE("a dead thermometer is no data, though other values still come") {
  Farmed farm;
  const Instant later = dies + hours{3};
  farm.live(dies, later, false, true);
  INFO(told(farm.bench.episodes()));
  const auto letters = farm.bench.letters_of("no_data");
  REQUIRE(letters.size() == 1);
  const letters::Letter& letter = letters[0].letter;
  CHECK(letter.decided <= dies + hours{1} + minutes{15});
  CHECK(has(letter.subject, "bench no temperature 1 h since 8:45 am"));
  CHECK(has(running(letter.body), "readings still come, but carry no temperature."));
  CHECK(has(running(letter.body), "Is the thermometer plugged in"));
  CHECK(has(farm.attention(later),
            "Station bench sends no temperature, though other values, since 2026-07-10 08:45: its "
            "fields are not watched."));
  CHECK(has(farm.bench.desk->status_line(later), "readings come without a temperature"));
  CHECK(has(farm.bench.folder.read("antherd.log"), "readings come, but carry no temperature"));

  // What is known at once is what was lived through.
  const auto replayed = [&](Instant now) {
    service::Lookout lookout(farm.bench.settings);
    lookout.replace_hours("bench", HourStart::min(), HourStart::max(),
                          weather::gather(farm.came, farm.bench.settings->stations[0].station,
                                          hour_of(sown), hour_of(now) + hours{1}));
    lookout.add_samples("bench", farm.came);
    const auto& station = farm.bench.settings->stations[0].station;
    lookout.turn(now,
                 {{"bench", service::closed_before(station, lookout.last_sample("bench"), now)}});
    return lookout.episodes();
  };
  CHECK(replayed(later - minutes{15}) == farm.bench.episodes());

  // It is over with the first temperature, and a restart in between changes nothing.
  farm.bench.close(later);
  farm.bench.open(later);
  farm.live(later, later + hours{1}, true, true);
  CHECK(replayed(later + minutes{45}) == farm.bench.episodes());
  CHECK(farm.bench.letters_of("no_data").size() == 2);
  CHECK(farm.bench.letters_of("no_data")[1].letter.subject.starts_with("Data back"));
  CHECK_FALSE(has(farm.attention(later + hours{1}), "temperature"));
  CHECK_FALSE(has(farm.bench.desk->status_line(later + hours{1}), "temperature"));
}

TEST_CASE("a row without a temperature now and then is no silence") {
  Farmed farm;
  for (Instant now = dies; now < dies + hours{6}; now += minutes{30}) {
    farm.live(now, now + minutes{15}, true, true);
    farm.live(now + minutes{15}, now + minutes{30}, false, true);
  }
  CHECK(farm.bench.letters_of("no_data").empty());
  CHECK(farm.attention(dies + hours{6}).empty());
  CHECK_FALSE(has(farm.bench.desk->status_line(dies + hours{6}), "temperature"));
}

TEST_CASE("a dead hygrometer is named: heat is watched, wet leaves are not") {
  Farmed farm;
  const std::string sentence =
      "Station bench: no humidity in the last 24 h: wet leaves are not watched.";
  farm.live(dies, dies + hours{12}, true, false);
  CHECK_FALSE(has(farm.attention(dies + hours{12}), "humidity"));
  farm.live(dies + hours{12}, dies + hours{26}, true, false);
  CHECK(has(farm.attention(dies + hours{26}), sentence));
  CHECK(farm.bench.letters_of("no_data").empty());
  farm.live(dies + hours{26}, dies + hours{28}, true, true);
  CHECK_FALSE(has(farm.attention(dies + hours{28}), "humidity"));
}
