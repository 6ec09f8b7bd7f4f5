// A person marks a letter as seen beside the running service, as `antherd letters --seen` does.
#include <algorithm>

#include "ground.hpp"
#include "stopper.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant first_morning = farm_time("2026-07-12 06:00");
const Instant last_day = farm_time("2026-07-14 00:00");

/// Hot days that reach Severe, the last of them Extreme.
std::vector<weather::Sample> hot(Instant from, Instant to) {
  auto samples = readings(Weather{}, from, to);
  for (auto& sample : samples) {
    double& value = sample.temperature->value;
    if (sample.time < last_day && value > 21) value = 21 + (value - 21) * 0.86;
  }
  return samples;
}

void live(Bench& bench, Instant from, Instant to) {
  for (Instant now = from; now <= to; now += minutes{15}) {
    bench.folder.append("drop/bench.csv", rows_of(hot(now, now + minutes{15})));
    bench.turn(now + minutes{1});
  }
}

void begin(Bench& bench) {
  bench.open(sown);
  bench.drop("bench.csv", hot(sown, first_morning));
  bench.turn(first_morning);
}

std::ptrdiff_t heat_said(const Bench& bench, alerts::Saying saying) {
  const auto& ledger = bench.desk->keeper().lookout().ledger();
  return std::count_if(ledger.begin(), ledger.end(), [&](const alerts::Said& said) {
    return said.kind == alerts::Kind::heat && said.saying == saying;
  });
}

/// As a command opens the store beside the service.
store::Store beside(const Bench& bench, Instant now) {
  store::Store::Options options;
  options.folder = bench.folder / "store";
  options.now = now;
  auto opened = store::Store::open(options);
  REQUIRE(opened);
  return std::move(*opened);
}

}  // namespace

TEST_CASE("what is marked as seen beside the running service is reminded of no more") {
  keep_in_memory();
  Bench bench;
  begin(bench);
  const Instant evening = farm_time("2026-07-12 20:00");
  live(bench, first_morning, evening);
  const auto said = bench.desk->store().said(first_morning);
  REQUIRE(said);
  const auto severe = std::find_if(said->begin(), said->end(), [](const alerts::Said& entry) {
    return entry.kind == alerts::Kind::heat && entry.level == alerts::Level::severe;
  });
  REQUIRE(severe != said->end());
  const bool marked = GENERATE(true, false);
  CAPTURE(marked);
  if (marked) REQUIRE(beside(bench, evening).mark_seen(severe->episode, severe->level));

  live(bench, evening, last_day);
  CHECK(heat_said(bench, alerts::Saying::reminder) == (marked ? 0 : 1));
  const auto told = bench.letters_of("heat").size();
  const auto rises = heat_said(bench, alerts::Saying::raised);
  live(bench, last_day, last_day + hours{20});
  INFO(::ground::told(bench.episodes()));
  CHECK(heat_said(bench, alerts::Saying::raised) == rises + 1);  // to Extreme
  CHECK(bench.letters_of("heat").size() > told);
}

TEST_CASE("a mark beside the service loses nothing that the store does not hold yet") {
  keep_in_memory();
  Bench bench;
  begin(bench);
  Stopper stopper(bench.folder);
  stopper.stop("letter");
  const Instant evening = farm_time("2026-07-12 20:00");
  live(bench, first_morning, evening);
  REQUIRE(bench.said_of(alerts::Kind::heat) == 0);
  const auto& ledger = bench.desk->keeper().lookout().ledger();
  const auto said_by_then = ledger.size();
  CHECK(heat_said(bench, alerts::Saying::opened) == 1);
  {
    const auto stored = bench.desk->store().said(Instant{});
    REQUIRE(stored);
    REQUIRE(!stored->empty());
    const alerts::Said& any = stored->front();
    REQUIRE(beside(bench, evening).mark_seen(any.episode, any.level));
  }
  bench.turn(evening + minutes{17});
  CHECK(ledger.size() == said_by_then);
  CHECK(std::count_if(ledger.begin(), ledger.end(), [](const auto& e) { return e.seen; }) == 1);
  stopper.release("letter");
  bench.turn(evening + minutes{19});
  CHECK(ledger.size() == said_by_then);
  CHECK(heat_said(bench, alerts::Saying::opened) == 1);
  const auto stored = bench.desk->store().said(Instant{});
  REQUIRE(stored);
  CHECK(stored->size() == said_by_then);
}
