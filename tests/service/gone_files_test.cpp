// Files that leave the drop folder: their bookmarks go after a week, and nothing is read twice.
#include <filesystem>

#include "ground.hpp"
#include "run/service/intake.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant noon = farm_time("2026-07-01 12:00");

/// The files whose bookmarks the store holds.
std::vector<std::string> marked(const Bench& bench) {
  const std::string prefix = service::bookmark_prefix("bench");
  const auto notes = bench.desk->store().notes_with_prefix(prefix);
  REQUIRE(notes);
  std::vector<std::string> names;
  for (const auto& [key, text] : *notes) names.push_back(key.substr(prefix.size()));
  return names;
}

using Names = std::vector<std::string>;

struct Season : Bench {
  Season() {
    open(sown);
    drop("bench.csv", readings(Weather{}, sown, sown + days{3}));
    drop("bench.csv.csv", readings(Weather{}, sown + days{3}, sown + days{6}));
    turn(noon);
    turn(noon + minutes{6});
    REQUIRE(marked(*this) == Names{"bench.csv", "bench.csv.csv"});
  }
  void live_on(Instant from, int days_long) {
    for (int i = 0; i <= days_long; ++i) turn(from + days{i});
  }
};

}  // namespace

TEST_CASE("the bookmark of a file that is gone for a week is dropped, its neighbour's is not") {
  Season season;
  const auto print = season.fingerprint();
  std::filesystem::rename(season.folder / "drop/bench.csv", season.folder / "bench.csv");
  season.live_on(noon + hours{1}, 6);
  CHECK(marked(season) == Names{"bench.csv", "bench.csv.csv"});
  season.turn(noon + days{8});
  CHECK(marked(season) == Names{"bench.csv.csv"});

  // What comes back is read again and changes nothing.
  std::filesystem::rename(season.folder / "bench.csv", season.folder / "drop/bench.csv");
  season.turn(noon + days{8} + minutes{5});
  season.turn(noon + days{8} + minutes{12});
  CHECK(marked(season) == Names{"bench.csv", "bench.csv.csv"});
  CHECK(season.fingerprint() == print);
}

TEST_CASE("after a start a week begins anew for files that are gone") {
  Season season;
  std::filesystem::remove(season.folder / "drop/bench.csv");
  season.live_on(noon + hours{1}, 6);
  season.close(noon + days{6} + hours{2});
  season.open(noon + days{6} + hours{3});
  season.live_on(noon + days{6} + hours{3}, 6);
  CHECK(marked(season) == Names{"bench.csv", "bench.csv.csv"});
  season.live_on(noon + days{13} + hours{3}, 1);
  CHECK(marked(season) == Names{"bench.csv.csv"});
}

TEST_CASE("while the folder cannot be seen no bookmark is dropped") {
  Season season;
  std::filesystem::rename(season.folder / "drop", season.folder / "unplugged");
  season.live_on(noon + hours{1}, 20);
  std::filesystem::rename(season.folder / "unplugged", season.folder / "drop");
  season.live_on(noon + days{22}, 2);
  CHECK(marked(season) == Names{"bench.csv", "bench.csv.csv"});
}
