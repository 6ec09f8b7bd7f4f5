// A station's clock by the ages of its readings on arrival, through the live service: what is
// named, what is not, and that a clock an hour behind is no string of silences.
#include "core/letters/compose.hpp"
#include "ground.hpp"
#include "run/service/intake.hpp"
#include "run/service/review.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant from = farm_time("2026-07-08 00:00");

/// A farm whose station stamps its readings by a clock of its own.
struct Farmed {
  Bench bench;

  Farmed() {
    keep_in_memory();
    bench.open(sown);
    bench.drop("bench.csv", readings(Weather{}, sown, from));
    bench.turn(from);
  }
  /// Every 15 minutes a reading whose stamp is `behind` the true time comes; turns each 5 minutes.
  void live(Instant begin, Instant end, Seconds behind, bool clock_set = true) {
    for (Instant now = begin; now <= end; now += minutes{5}) {
      if (now.time_since_epoch() % minutes{15} == Seconds{0}) {
        const Instant stamp = now - behind;
        weather::Sample sample = reading_at(Weather{}, now);
        sample.time = stamp;
        bench.folder.append("drop/bench.csv", row_of(sample));
      }
      bench.desk->look_soon();
      const Instant shown = now + Seconds{20};
      for (int i = 0; i < 20 && bench.desk->turn(shown, clock_set) <= shown; ++i) {
      }
    }
  }
  std::string screen(Instant now) const {
    return letters::compose_now(bench.desk->keeper().lookout().desk(now), {}, {});
  }
  std::string review(Instant now) const {
    const auto& lookout = bench.desk->keeper().lookout();
    const auto period = service::week_before(bench.settings->calendar, now);
    return letters::compose_review(service::make_review(lookout, bench.desk->store(), period, now),
                                   lookout.desk(now));
  }
};

bool has(std::string text, const std::string& wanted) {
  for (std::size_t at; (at = text.find("\xC2\xA0")) != std::string::npos;) text.replace(at, 2, " ");
  std::replace(text.begin(), text.end(), '\n', ' ');
  for (std::size_t at; (at = text.find("  ")) != std::string::npos;) text.erase(at, 1);
  return text.find(wanted) != std::string::npos;
}

}  // namespace

TEST_CASE("a station that forgot summer time is named, and told of as silent once") {
  // The station stays at winter time: its stamps are an hour behind from the 8th on.
  Farmed farm;
  const Seconds behind = GENERATE(minutes{60}, minutes{59}, hours{3});
  INFO("behind by " << behind.count() / 60 << " min");
  const Instant until = from + hours{60};
  farm.live(from + minutes{5}, until, behind);
  const std::string age = behind == hours{3} ? "3 h" : std::to_string(behind.count() / 60) + " min";
  CHECK(has(farm.screen(until), "clock bench: values never under " + age + " old on arrival"));
  CHECK(has(farm.review(until), "bench: newest reading was never less than " + age +
                                    " old on arrival in the last 24 h"));
  // Until the first late reading comes there is an hour's silence; then at most one is told.
  const auto told = farm.bench.letters_of("no_data");
  std::ptrdiff_t opened = 0, ended = 0;
  for (const auto& item : told) {
    UNSCOPED_INFO(farm_clock(item.letter.decided) << " " << item.letter.subject);
    opened += item.letter.subject.starts_with("No data") ? 1 : 0;
    ended += item.letter.subject.starts_with("Data back") ? 1 : 0;
  }
  CHECK(opened <= 1);
  CHECK(ended <= 1);
  CHECK(std::ssize(told) <= 4);  // with a reminder a day
  if (behind == minutes{59}) return;
  REQUIRE(opened == 1);
  // Put right, the station is no longer silent; after a day nothing is said of its clock.
  farm.live(until + minutes{5}, until + hours{26}, Seconds{0});
  CHECK_FALSE(has(farm.screen(until + hours{26}), "clock bench"));
  CHECK(farm.bench.letters_of("no_data").back().letter.subject.starts_with("Data back"));
}

TEST_CASE("the letter of silence says that readings do arrive, and how old") {
  Farmed farm;
  farm.live(from + minutes{5}, from + hours{12}, hours{2});
  const auto told = farm.bench.letters_of("no_data");
  REQUIRE(!told.empty());
  farm.live(from + hours{12} + minutes{5}, from + hours{34}, hours{2});
  const auto later = farm.bench.letters_of("no_data").back().letter;
  INFO(later.subject << "\n" << later.body);
  CHECK(later.subject.starts_with("Still no data"));
  CHECK(has(later.body, "Readings do arrive: one came"));
  CHECK(has(later.body, "and was 2 h old by this computer's clock."));
  CHECK(has(later.body, "Is the station's clock behind (summer time not set?)"));
}

TEST_CASE("a station that is well, a backlog and a clock that is not set name nothing") {
  Farmed farm;
  const Instant until = from + hours{30};
  SECTION("well") {
    farm.live(from + minutes{5}, until, Seconds{0});
    CHECK(farm.bench.letters_of("no_data").empty());
  }
  SECTION("a computer's clock that is not set") {
    farm.live(from + minutes{5}, until, minutes{62}, false);
  }
  SECTION("a season that was there before the start") {
    Bench other;
    other.open(sown);
    other.drop("bench.csv", readings(Weather{}, sown, until));
    other.turn(until + hours{2});
    CHECK_FALSE(service::stored_arrivals(other.desk->store(), "bench").last());
  }
  CHECK_FALSE(has(farm.screen(until), "clock bench"));
  CHECK_FALSE(has(farm.review(until), "on arrival"));
}

TEST_CASE("a clock that runs ahead is named before its rows are refused, and when they are") {
  Farmed farm;
  const Instant until = from + hours{14};
  farm.live(from + minutes{5}, until, -minutes{4});
  CHECK(has(farm.screen(until), "clock bench: stamps at least 3 min ahead of this computer"));
  CHECK(farm.bench.letters_of("no_data").empty());
  farm.live(until + minutes{5}, until + hours{27}, -hours{3});
  CHECK(
      has(farm.screen(until + hours{27}), "clock bench: rows refused: at least 2 h 59 min ahead"));
  const auto told = farm.bench.letters_of("no_data");
  REQUIRE(!told.empty());
  INFO(told.back().letter.body);
  CHECK(has(told.back().letter.body,
            "was refused, because its time is at least 2 h 59 min ahead of this computer's clock"));
  CHECK(has(farm.review(until + hours{27}),
            "bench: every row that came in the last 24 h was refused"));
}

TEST_CASE("what is known of arrivals survives a restart, and a damaged note begins anew") {
  Farmed farm;
  farm.live(from + minutes{5}, from + hours{14}, minutes{61});
  const auto before = service::stored_arrivals(farm.bench.desk->store(), "bench");
  REQUIRE(before.doubt(from + hours{14}, minutes{15}));
  farm.bench.close(from + hours{14} + minutes{1});
  farm.bench.open(from + hours{14} + minutes{2});
  farm.bench.turn(from + hours{14} + minutes{2});
  CHECK(has(farm.screen(from + hours{14} + minutes{2}), "clock bench: values never under 61 min"));
  for (const char* bad : {"", "{", "[]", "{\"hours\":[[1]]}", "{\"hours\":[[1,2,3,4,5,\"x\"]]}",
                          "{\"hours\":{},\"last\":7}", "\xFF\xFE"}) {
    REQUIRE(farm.bench.desk->store().put_notes({{"arrivals/bench", bad}}));
    CHECK(service::stored_arrivals(farm.bench.desk->store(), "bench") == weather::Arrivals{});
  }
}
