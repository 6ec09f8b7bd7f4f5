// However the station's files come (twice, backwards, in pieces), the store holds the same facts
// and nobody is written to a second time.
#include <algorithm>

#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant until = farm_time("2026-07-13 16:05");  // hot, in flower

std::vector<weather::Sample> all() { return readings(Weather{}, sown, until); }

/// Turned twice, six minutes apart: what was read is stored, not only in memory.
void settle(Bench& bench) {
  bench.turn(until);
  bench.turn(until + minutes{6});
}

Bench& fed_whole(Bench& bench) {
  bench.open(sown);
  bench.drop("bench.csv", all());
  settle(bench);
  return bench;
}

}  // namespace

TEST_CASE("the same files a second time change nothing and write no letter") {
  Bench bench;
  fed_whole(bench);
  const auto print = bench.fingerprint();
  const auto letters = bench.letter_ids();
  REQUIRE(bench.said_of(alerts::Kind::heat) >= 1);
  REQUIRE(letters.size() >= 1);

  SECTION("under another name") { bench.drop("bench-again.csv", all()); }
  SECTION("backwards") {
    auto backwards = all();
    std::reverse(backwards.begin(), backwards.end());
    bench.drop("bench-back.csv", backwards);
  }
  SECTION("the file itself written anew") {
    bench.folder.write("drop/bench.csv", "");
    bench.turn(until + minutes{7});
    bench.drop("bench.csv", all());
  }
  SECTION("after a restart") {
    bench.close(until + minutes{7});
    bench.open(until + minutes{7});
    bench.drop("bench-again.csv", all());
  }
  bench.turn(until + minutes{8});
  bench.turn(until + minutes{14});
  CHECK(bench.fingerprint() == print);
  CHECK(bench.letter_ids() == letters);
}

TEST_CASE("files in any order and in pieces end in the same store") {
  Bench whole;
  const auto print = fed_whole(whole).fingerprint();
  Bench other;
  other.open(sown);
  const auto samples = all();

  SECTION("backwards") {
    auto backwards = samples;
    std::reverse(backwards.begin(), backwards.end());
    other.drop("bench.csv", backwards);
  }
  SECTION("the later half first, in a file of its own, the halves overlap") {
    const auto middle = samples.begin() + static_cast<std::ptrdiff_t>(samples.size() / 2);
    other.drop("bench-b.csv", {middle - 40, samples.end()});
    other.turn(until);
    other.drop("bench-a.csv", {samples.begin(), middle + 40});
  }
  SECTION("cut in the middle of a line, then the rest") {
    const std::string text = header + rows_of(samples);
    const std::size_t cut = text.size() / 2 + 7;
    REQUIRE(text[cut - 1] != '\n');
    other.folder.write("drop/bench.csv", text.substr(0, cut));
    settle(other);
    other.folder.append("drop/bench.csv", text.substr(cut));
  }
  SECTION("in pieces of 1 to 997 bytes") {
    const std::string text = header + rows_of(samples);
    other.folder.write("drop/bench.csv", "");
    for (std::size_t at = 0, size = 1; at < text.size(); at += size) {
      size = (size * 31 + 7) % 997 + 1;
      other.folder.append("drop/bench.csv", text.substr(at, size));
      other.turn(until);
    }
  }
  settle(other);
  CHECK(other.fingerprint() == print);
  // Letters may differ with the moment a fact came, but each danger was told.
  CHECK(other.said_of(alerts::Kind::heat) >= 1);
}

TEST_CASE("one wrong value more gives another fingerprint") {
  Bench whole, other;
  const auto print = fed_whole(whole).fingerprint();
  other.open(sown);
  auto samples = all();
  samples[1000].temperature = Celsius(samples[1000].temperature->value + 0.01);
  other.drop("bench.csv", samples);
  settle(other);
  CHECK(other.fingerprint() != print);
}
