// The page of a computer whose address is not up yet when the service starts.
#include "run/service/front_page.hpp"

#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;

TEST_CASE("a page that could not be opened is tried again every ten minutes, and that is said") {
  page::PageOptions anywhere;
  auto other = page::Page::listen(anywhere);  // stands where the page should be
  REQUIRE(other);
  Farm farm;
  farm.more = "\n[page]\nport = " + std::to_string((*other)->port()) + "\n";
  Bench bench(farm);
  const Instant begins = farm_time("2026-07-10 09:00");
  const auto opened = [&] {
    const std::string log = bench.folder.read("antherd.log"), said = "the page is open now";
    int times = 0;
    for (auto at = log.find(said); at != std::string::npos; at = log.find(said, at + 1)) ++times;
    return times;
  };
  bench.open(begins);
  bench.turn(begins);
  bench.turn(begins + minutes{11});
  CHECK(opened() == 0);
  other->reset();
  bench.turn(begins + minutes{20});  // 9 min after the last try
  CHECK(opened() == 0);
  bench.turn(begins + minutes{21});
  CHECK(opened() == 1);
  anywhere.port = static_cast<std::uint16_t>(bench.settings->page->port);
  CHECK_FALSE(page::Page::listen(anywhere));  // the farm's own stands there now
  bench.turn(begins + minutes{40});
  CHECK(opened() == 1);
}
