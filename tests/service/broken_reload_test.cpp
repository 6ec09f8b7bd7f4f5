// Thirty ways to break the settings of a service that runs: each is named, none is taken.
#include <array>

#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant noon = farm_time("2026-07-12 12:05");

/// What gives way to what, and what the log must name.
struct Broken {
  const char *passage, *other, *named;
};

constexpr std::array<Broken, 30> ways{{
    {"[farm]", "not TOML [", "antherd.toml:1"},
    {"[farm]", "[barn]", "barn"},
    {"name = \"Larkspur Bench\"", "", "name"},
    {"name = \"Larkspur Bench\"", "name = 7", "antherd.toml:2"},
    {"name = \"Larkspur Bench\"", "name = \"Larkspur\\r\\nBcc: x\"", "antherd.toml:2"},
    {"name = \"Larkspur Bench\"", "name = \"a\"\nname = \"b\"", "antherd.toml:3"},
    {"America/Los_Angeles", "America/Los_Angles", "time_zone"},
    {"folder = \"store\"", "folder = 3", "[store], folder"},
    {"folder = \"store\"", "folder = \"elsewhere\"", "folder cannot change"},
    {"file = \"antherd.log\"", "level = \"loud\"", "level"},
    {"from = \"alerts@larkspur.example\"", "from = \"nobody\"", "from"},
    {"folder = \"outgoing\"", "server = \"ftp://larkspur.example\"", "server"},
    {"address = \"owner@larkspur.example\"", "address = \"owner@\"", "address"},
    {"address = \"owner@larkspur.example\"", "", "address"},
    {"name = \"bench\"", "name = \"\"", "name"},
    {"latitude = 46.730000", "latitude = 146.73", "latitude"},
    {"longitude = -117.180000", "longitude = \"west\"", "longitude"},
    {"elevation = \"780 m\"", "elevation = \"780\"", "elevation"},
    {"interval = \"15 min\"", "interval = \"15 parsecs\"", "interval"},
    {"interval = \"15 min\"", "intervall = \"15 min\"", "intervall"},
    {"files = \"bench*.csv\"", "files = \"../bench*.csv\"", "files"},
    {"form = \"%Y-%m-%d %H:%M\"", "form = \"%Q\"", "form"},
    {"zone = \"utc\"", "zone = \"Nowhere/Atall\"", "zone"},
    {"unit = \"degC\"", "unit = \"degX\"", "unit"},
    {"column = \"temp_c\"", "column = \"\"", "column"},
    {"meaning = \"since_last\"", "meaning = \"perhaps\"", "meaning"},
    {"emerged = \"20 degC d\"", "emerged = \"2000 degC d\"", "buds"},
    {"stations = [\"bench\"]", "stations = [\"moon\"]", "moon"},
    {"crop_type = \"quick\"", "crop_type = \"slow\"", "crop_type"},
    {"sown = 2026-06-25", "sown = 2026-06-31", "antherd.toml:"},
}};

}  // namespace

TEST_CASE("thirty broken settings files are named one by one and the watch goes on") {
  Bench bench;
  const Instant sown = farm_time("2026-06-25 00:00");
  bench.open(sown);
  bench.drop("bench.csv", readings(Weather{}, sown, noon));
  bench.turn(noon);
  const std::string good = bench.folder.read("antherd.toml");
  std::size_t read = bench.folder.read("antherd.log").size();
  Instant now = noon;
  for (const Broken& way : ways) {
    CAPTURE(way.passage, way.other);
    std::string broken = good;
    const auto at = broken.find(way.passage);
    REQUIRE(at != std::string::npos);
    broken.replace(at, std::string(way.passage).size(), way.other);
    bench.folder.write("antherd.toml", broken);
    now += minutes{15};
    bench.folder.append("drop/bench.csv", row_of(reading_at(Weather{}, now - minutes{5})));
    bench.desk->reload(now);
    bench.turn(now);
    bench.turn(now + minutes{5});  // what was read is taken
    const std::string log = bench.folder.read("antherd.log");
    const std::string said = log.substr(read);
    read = log.size();
    INFO(said);
    CHECK(said.find(way.named) != std::string::npos);
    CHECK(said.find("stay in force") != std::string::npos);
    CHECK(said.find("are in force") == std::string::npos);
    const auto& settings = bench.desk->keeper().lookout().settings();
    CHECK(settings.farm == "Larkspur Bench");
    CHECK(settings.stations.at(0).station.name == "bench");
    CHECK(bench.desk->keeper().lookout().last_sample("bench") == now - minutes{5});  // it watches
  }
  // The heat of this afternoon was told all the while.
  CHECK(!bench.letters_of("heat").empty());
}
